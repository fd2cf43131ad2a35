import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { reportOf } from '@core/index';
import { describe, expect, it } from 'vitest';
import { scratchFolder, steelyard } from '../command/steelyard';
import { codesOf, demoFolder, folder, openWindow, type TestWindow, taken } from './window';

async function withDemo(): Promise<{ window: TestWindow; planId: number; file: string }> {
  const window = openWindow();
  const look = taken(await window.ask('project.demo', {}));
  return { window, planId: look.plans[0]?.planId as number, file: look.file };
}

describe('the pages', () => {
  it('of a plan are, to the last byte, those that the command line writes', async () => {
    const { window, planId } = await withDemo();
    const { pdf, document } = taken(await window.ask('report.pages', { planId, edition: null }));
    const { folder: out, remove } = scratchFolder('pages');
    expect(steelyard(['run', join(demoFolder, 'plan.json'), '--out', out]).status).toBe(0);
    expect(Buffer.compare(Buffer.from(pdf), readFileSync(join(out, 'report.pdf')))).toBe(0);
    const { result } = taken(await window.ask('fit.latest', { planId }));
    expect(`${JSON.stringify(result, null, 1)}\n`).toBe(readFileSync(join(out, 'result.json'), 'utf8'));
    expect(result && document).toEqual(result && reportOf({ result, edition: null }));
    remove();
  });
});

describe('a note', () => {
  it('prints under its heading, with author and time, in the pages that follow the plan and in an edition that rebuilds', async () => {
    const { window, planId, file } = await withDemo();
    const before = taken(await window.ask('report.pages', { planId, edition: null }));
    taken(
      await window.ask('report.note', { place: 'variance', text: 'Sizes are final.\nSo are errors.', author: 'Ada' }),
    );
    const live = taken(await window.ask('report.pages', { planId, edition: null }));
    expect(Buffer.compare(Buffer.from(live.pdf), Buffer.from(before.pdf))).not.toBe(0);
    const noted = ({ blocks }: typeof live.document) => {
      const at = blocks.findIndex((block) => block.kind === 'heading' && block.text === 'The variance statement');
      return blocks.slice(at + 1, at + 3);
    };
    expect(noted(live.document)).toMatchObject([
      {
        kind: 'paragraph',
        text: 'Note: Sizes are final.',
        margin: [{ about: 'Note', text: expect.stringMatching(/^Ada, \d{4}-\d\d-\d\d \d\d:\d\d UTC$/) }],
      },
      { kind: 'paragraph', text: 'So are errors.' },
    ]);
    taken(await window.ask('report.freeze', { planId, author: 'Bo' }));
    // What is noted later belongs to the next edition.
    taken(await window.ask('report.note', { place: 'variance', text: null, author: 'Ada' }));
    expect(taken(await window.ask('report.pages', { planId, edition: null })).pdf).toEqual(before.pdf);
    const frozen = taken(await window.ask('report.pages', { planId, edition: 1 }));
    expect(noted(frozen.document)).toEqual(noted(live.document));
    expect(taken(await window.ask('report.check', { edition: 1 }))).toEqual({ number: 1, how: 'bytes', problems: [] });
    await window.close();
    expect(steelyard(['check', file]).status).toBe(0);
  });
});

describe('an edition frozen in the window', () => {
  it('stands in the project with its author, keeps its pages to the byte, and is rebuilt by the command line', async () => {
    const { window, planId, file } = await withDemo();
    taken(await window.ask('report.decide', { author: 'Ada Müller', text: 'Between-cell variance stays.' }));
    const frozen = taken(await window.ask('report.freeze', { planId, author: ' Ada Müller ' }));
    expect(frozen.number).toBe(1);
    expect(frozen.project.editions).toMatchObject([
      { number: 1, author: 'Ada Müller', title: 'Unpaid care by parish and year', signOffs: [] },
    ]);
    const trail = taken(await window.ask('trail.read', {}));
    expect(trail.whole?.head).toBe(frozen.head);
    const signed = taken(await window.ask('report.sign-off', { edition: 1, role: 'Reviewer', author: 'Bo' }));
    expect(signed.editions[0]?.signOffs).toMatchObject([{ role: 'Reviewer', author: 'Bo' }]);

    expect(taken(await window.ask('report.check', { edition: 1 }))).toEqual({ number: 1, how: 'bytes', problems: [] });
    expect(codesOf(await window.ask('report.check', { edition: 2 }))).toEqual(['no-edition']);
    const pages = taken(await window.ask('report.pages', { planId, edition: 1 }));
    const plain = taken(await window.ask('report.pages', { planId, edition: null }));
    expect(Buffer.compare(Buffer.from(pages.pdf), Buffer.from(plain.pdf))).not.toBe(0);
    expect(codesOf(await window.ask('report.pages', { planId, edition: 2 }))).toEqual(['no-edition']);
    expect(taken(await window.ask('report.freeze', { planId, author: 'Bo' })).number).toBe(2);

    const busy = steelyard(['check', file]);
    expect([busy.status, busy.stderr]).toEqual([6, expect.stringContaining('Another program is using')]);
    await window.close();
    const { status, stdout, stderr } = steelyard(['check', file]);
    expect([status, stderr]).toEqual([0, '']);
    expect(stdout).toContain('2');
  });

  it('needs an author, and a plan that can be fitted', async () => {
    const { window, planId } = await withDemo();
    expect(codesOf(await window.ask('report.freeze', { planId, author: '  ' }))).toEqual(['must-be-stated']);
    expect(codesOf(await window.ask('report.freeze', { planId: 9, author: 'Ada' }))).toEqual(['unknown-plan']);
    const look = taken(await window.ask('project.look', {}));
    const plan = { ...look?.plans[0]?.plan, variance: { parts: [{ kind: 'given', scale: 'free' }] } };
    const refused = await window.ask('plan.change', { planId, action: 'structure', plan, inputs: null });
    expect(codesOf(refused)).toEqual(['role-needed']);
    expect(taken(await window.ask('trail.read', {})).entries.some(({ action }) => action === 'frozen')).toBe(false);
  });
});

describe('what is said in the report', () => {
  it('notes can be undone; decisions, sign-off and uncovering cannot', async () => {
    const { window } = await withDemo();
    const note = (text: string | null, author: string) =>
      window.ask('report.note', { place: 'variance', text, author });
    expect(taken(await note('One.', 'Ada'))).toMatchObject({ notes: [{ text: 'One.' }], undo: 'change-note' });
    expect(codesOf(await note('Nobody’s.', ' '))).toEqual(['must-be-stated']);
    expect(taken(await note('Two.', 'Bo')).notes).toMatchObject([{ text: 'Two.', author: 'Bo' }]);
    const back = taken(await window.ask('plan.undo', {})).notes;
    expect(back).toMatchObject([{ place: 'variance', text: 'One.', author: 'Ada' }]);
    expect(back[0]?.time).toMatch(/^\d{4}-\d\d-\d\dT/);
    const decided = taken(await window.ask('report.decide', { author: 'Ada', text: 'We keep it.' }));
    expect(decided).toMatchObject({ decisions: [{ author: 'Ada', text: 'We keep it.' }], undo: 'change-note' });
    expect(codesOf(await window.ask('report.decide', { author: ' ', text: 'x' }))).toEqual(['must-be-stated']);
    expect(codesOf(await window.ask('report.decide', { author: 'Ada', text: ' ' }))).toEqual(['must-be-stated']);
    expect(codesOf(await window.ask('report.sign-off', { edition: 1, role: 'x', author: 'Ada' }))).toEqual([
      'no-edition',
    ]);
  });

  it('the answer can be covered and uncovered, each once, and the structures tried are counted by it', async () => {
    const { window, planId } = await withDemo();
    expect(taken(await window.ask('answer.cover', { author: 'Ada' }))).toMatchObject({
      covered: true,
      uncovered: null,
    });
    taken(await window.ask('answer.cover', { author: 'Ada' }));
    const { job } = taken(await window.ask('fit.ask', { planId }));
    await window.resultOf(job);
    const open = taken(await window.ask('answer.uncover', { author: 'Bo' }));
    expect(open).toMatchObject({ covered: false, uncovered: { author: 'Bo' }, structuresTried: { after: 0 } });
    expect(open.structuresTried.before).toBe(open.structuresTried.count);
    taken(await window.ask('answer.uncover', { author: 'Bo' }));
    const actions = taken(await window.ask('trail.read', {})).entries.map(({ action }) => action);
    expect(actions.filter((action) => action.startsWith('answer-'))).toEqual(['answer-covered', 'answer-uncovered']);
  });
});

describe('what leaves the program', () => {
  it('is written whole where the chooser says, under a name without a folder, or goes to the clipboard', async () => {
    const window = openWindow();
    window.choose(null);
    expect(taken(await window.ask('keep.text', { suggested: 'a.csv', text: 'x' }))).toBeNull();
    const file = join(folder(), 'table.csv');
    window.choose(file);
    expect(taken(await window.ask('keep.text', { suggested: '../../etc/ta:ble.csv', text: 'a,b\n' }))).toEqual({
      file,
    });
    expect(window.suggested).toEqual(['a.csv', 'etc ta ble.csv']);
    expect(readFileSync(file, 'utf8')).toBe('a,b\n');
    window.choose(file);
    taken(await window.ask('keep.bytes', { suggested: '', bytes: Uint8Array.of(1, 2, 3) }));
    expect([...readFileSync(file)]).toEqual([1, 2, 3]);
    window.choose(join(file, 'inside.csv'));
    expect(codesOf(await window.ask('keep.text', { suggested: 'x', text: '' }))).toEqual(['in-the-way']);
    taken(await window.ask('keep.copy', { text: 'a', html: '<b>a</b>' }));
    expect(window.copied).toEqual([{ text: 'a', html: '<b>a</b>' }]);
  });
});
