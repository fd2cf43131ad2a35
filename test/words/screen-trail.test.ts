import {
  type Entry,
  grouped,
  hashesOf,
  isOfKind,
  trailKinds,
  trailSentences,
  trailTable,
  wholeText,
} from '@core/words/screen-trail';
import { describe, expect, it } from 'vitest';

const hash = 'ab'.repeat(32);

function entry(number: number, action: string, facts: Entry['facts'] = {}, author: string | null = null): Entry {
  return { number, time: '2026-03-01T09:30:00.000Z', author, action, facts, hash };
}

/** One entry of each action that the project room records (project/trail.ts). */
const everyAction: readonly Entry[] = [
  entry(1, 'created'),
  entry(2, 'plan-added', { plan: 7, name: 'Main', step: 'add-plan', state: 1, planSha256: hash, inputs: [] }),
  entry(3, 'fit-kept', { plan: 7, state: 1, fit: 1, resultSha256: hash, tried: [{}, {}, {}] }),
  entry(4, 'plan-changed', { plan: 7, name: 'Main', step: 'change-variance', state: 2 }),
  entry(5, 'plan-renamed', { plan: 7, name: 'Second thoughts', step: 'rename-plan' }),
  entry(6, 'undone', { step: 'change-variance', subject: 'plan', of: 7 }),
  entry(7, 'redone', { step: 'change-note', subject: 'note', of: 1 }),
  entry(8, 'note-changed', { place: 'variance', text: 'Looked into.' }),
  entry(9, 'note-changed', { place: 'page-one', text: null }),
  entry(10, 'decided', { text: 'Both parts are kept.' }, 'R. Vos'),
  entry(11, 'answer-covered', {}, 'R. Vos'),
  entry(12, 'answer-uncovered', {}, 'R. Vos'),
  entry(13, 'frozen', { edition: 1, fit: 1, resultSha256: hash, reportSha256: hash, factsSha256: hash }, 'R. Vos'),
  entry(14, 'signed-off', { edition: 1, role: 'Reviewer' }, 'M. Lind'),
];

describe('the sentences of the trail', () => {
  it('say what each entry records, and call plans by the names that they had at the time', () => {
    expect(trailSentences(everyAction)).toEqual([
      'The project was created.',
      'A plan was added: “Main”.',
      'A fit of the plan “Main” was kept, with 2 structures beside it.',
      'In the plan “Main” this was changed: the variance.',
      'The plan “Main” is called “Second thoughts” from here on.',
      'Undone: the variance, in the plan “Second thoughts”.',
      'Redone: a note.',
      'A note was written on “The variance statement”: “Looked into.”',
      'The note on “Page one” was taken out.',
      'Decided: Both parts are kept.',
      'The answer was covered: coefficients of interest are hidden until the structure is accepted.',
      'The answer was uncovered: structures tried from here on were tried with the answer in view.',
      'Edition 1 was frozen.',
      'Edition 1 was signed off, in the role “Reviewer”.',
    ]);
  });

  it('tell an action that this version does not know as it stands, and a missing fact as a dash', () => {
    expect(trailSentences([entry(1, 'cells-masked'), entry(2, 'frozen')])).toEqual([
      'cells masked.',
      'Edition – was frozen.',
    ]);
  });

  it('leave no known action out of the kinds that can be listed', () => {
    const [, ...others] = Object.keys(trailKinds) as (keyof typeof trailKinds)[];
    for (const one of everyAction) {
      expect(others.filter((kind) => isOfKind(one, kind))).toHaveLength(1);
      expect(isOfKind(one, 'all')).toBe(true);
    }
  });
});

describe('the trail beside its sentences', () => {
  it('lists the hashes on record by what they are of', () => {
    const added = entry(2, 'plan-added', { planSha256: hash, inputs: [{ name: 'care.csv', sha256: hash }] });
    expect(hashesOf(added)).toEqual([
      { name: 'the plan', hash },
      { name: '“care.csv”', hash },
    ]);
    expect(hashesOf(entry(1, 'created'))).toEqual([]);
  });

  it('groups a hash so that taking the blanks out gives it back', () => {
    expect(grouped(hash)).toBe('abababab abababab abababab abababab abababab abababab abababab abababab');
    expect(grouped(hash).replaceAll(' ', '')).toBe(hash);
  });

  it('says that a trail is whole only where it was verified', () => {
    expect(wholeText({ head: hash, entries: 14 })).toMatch(/^The trail is whole: 14 entries, verified just now\./);
    expect(wholeText(null)).toMatch(/^The trail does not hold together\./);
  });

  it('is a table with a row an entry, its numbers as they are stored', () => {
    const table = trailTable(everyAction, trailSentences(everyAction));
    expect(table.rows).toHaveLength(everyAction.length);
    for (const row of table.rows) expect(row).toHaveLength(table.head.length);
    expect(table.rows[13]?.map(({ text }) => text)).toEqual([
      '14',
      '2026-03-01 09:30 UTC',
      'M. Lind',
      'Edition 1 was signed off, in the role “Reviewer”.',
      hash,
    ]);
  });
});
