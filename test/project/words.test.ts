import { problem } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';
import { sentence } from '@core/words/problems';
import { expect, it } from 'vitest';

it.each<[Problem, string]>([
  [
    problem('project-damaged', { file: 'care.steelyard', finding: 'cut-off' }),
    '“care.steelyard” is damaged: its end is missing. It was left untouched; go back to a copy.',
  ],
  [
    problem('project-damaged', { file: 'care.steelyard', finding: 'guards-missing' }),
    '“care.steelyard” is damaged: what keeps its records from being changed was taken out. It was left untouched; go back to a copy.',
  ],
  [
    problem('trail-broken', { entry: 3, finding: 'link' }),
    'The trail is broken at entry 3: it does not name the entry before it. What was recorded was changed afterwards, or the file is damaged.',
  ],
  [
    problem('trail-broken', { entry: 3, finding: 'input' }),
    'The trail is broken at entry 3: a data file that it records is not the one that is stored. What was recorded was changed afterwards, or the file is damaged.',
  ],
  [problem('no-project', { file: 'x' }), 'There is no project “x”. Check the name and the folder.'],
  [problem('already-there', { file: 'x' }), 'There is already a file “x”. Move it away, or choose another name.'],
  [problem('name-taken', { name: 'Main' }), 'Another plan of this project is called “Main”. Choose another name.'],
  [problem('unknown-plan', { found: 9 }), 'The project holds no plan number 9 any more. Choose one of those it lists.'],
])('%j is told in words', (trouble, text) => {
  expect(sentence(trouble)).toBe(text);
});

it('every finding of this room has its words', () => {
  const findings = [
    'unreadable',
    'cut-off',
    'pages',
    'layout-altered',
    'guards-missing',
    'gap',
    'link',
    'hash',
    'plan',
    'input',
    'fit',
    'edition',
    'unrecorded',
  ];
  for (const finding of findings)
    expect(sentence(problem('trail-broken', { entry: 1, finding }))).not.toContain(`: ${finding}.`);
});
