import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Outcome } from '@core/protocol/outcome';
import { checkProjectFile } from '@main/engine/check';
import { printedReport, textOfResult } from '@main/engine/edition';
import { freezePlan } from '@main/engine/freeze';
import { fromFolder } from '@main/engine/inputs';
import { runText } from '@main/engine/run-plan';
import { openProject } from '@main/project/project';
import { afterAll, beforeAll, expect, it } from 'vitest';

// On a plan of the contract's own files, from bytes to report and back.
const source = join(import.meta.dirname, '../contract/files/valid');
const folder = mkdtempSync(join(tmpdir(), 'steelyard-freeze-'));
const project = join(folder, 'care.steelyard');
const planFile = join(folder, 'minimal-per-size.json');

beforeAll(() => cpSync(source, folder, { recursive: true }));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function taken<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

const codes = (outcome: Outcome<unknown>) => (outcome.ok ? [] : outcome.problems.map(({ code }) => code));

const freeze = (time: string, text = readFileSync(planFile, 'utf8'), cancelled = () => false) =>
  freezePlan({
    text,
    fetch: fromFolder(folder),
    project,
    author: 'Ada Müller',
    time,
    planName: 'minimal-per-size',
    hooks: { cancelled, progress: () => {} },
  });

it('a plan that is refused leaves no project', async () => {
  const text = readFileSync(planFile, 'utf8').replace('minimal-per-size.csv', 'nowhere.csv');
  expect(codes(await freeze('2026-01-02T03:04:05.000Z', text))).toContain('file-not-found');
  expect(codes(openProject(project))).toEqual(['no-project']);
});

it('a freeze that is cancelled leaves no project', async () => {
  let looks = 0;
  const text = readFileSync(planFile, 'utf8');
  const all = await freeze('2026-01-02T03:04:05.000Z', text, () => ++looks < 0);
  expect(all.ok).toBe(true);
  rmSync(project);
  const last = looks;
  looks = 0;
  expect(codes(await freeze('2026-01-02T03:04:05.000Z', text, () => ++looks >= last))).toEqual(['cancelled']);
  expect(codes(openProject(project))).toEqual(['no-project']);
});

it('a freeze makes the project, with an edition whose result and report are those of the plan', async () => {
  const frozen = taken(await freeze('2026-01-02T03:04:05.000Z'));
  const run = taken(runText({ text: readFileSync(planFile, 'utf8'), fetch: fromFolder(folder) }));
  const opened = taken(openProject(project));
  const [edition] = opened.editions();
  expect([frozen.number, frozen.head]).toEqual([1, opened.trailHead()]);
  expect(edition?.result).toBe(textOfResult(run.result));
  expect(edition?.facts).toMatchObject({
    number: 1,
    author: 'Ada Müller',
    time: '2026-01-02T03:04:05.000Z',
    project: 'care',
  });
  const printed = await printedReport(run.result, edition?.facts ?? null);
  expect(Buffer.compare(edition?.report as Uint8Array, printed)).toBe(0);
  expect(
    Buffer.compare(
      opened.inputBytes(edition?.inputs[0]?.sha256 as string) as Uint8Array,
      run.inputs[0]?.bytes as Uint8Array,
    ),
  ).toBe(0);
  expect(opened.trail().map(({ action }) => action)).toEqual(['created', 'plan-added', 'fit-kept', 'frozen']);
  opened.close();
});

it('a second freeze of the same plan is another edition, and keeps neither data nor fit twice', async () => {
  expect(taken(await freeze('2026-01-03T00:00:00.000Z')).number).toBe(2);
  const opened = taken(openProject(project));
  expect(opened.trail().map(({ action }) => action)).toEqual(['created', 'plan-added', 'fit-kept', 'frozen', 'frozen']);
  opened.close();
});

it('a freeze of the plan after a change goes on under the same name, with a step that can be undone', async () => {
  const text = readFileSync(planFile, 'utf8').replace(/"per-size"/, '"constant"');
  expect(taken(await freeze('2026-01-04T00:00:00.000Z', text)).number).toBe(3);
  const opened = taken(openProject(project));
  expect(opened.plans()).toHaveLength(1);
  expect(opened.ways().undo).toBe('freeze-plan');
  expect(opened.structuresTried().count).toBe(2);
  opened.close();
});

it('check makes every edition again from the stored bytes alone, to the last byte, wherever the project was moved', async () => {
  const elsewhere = mkdtempSync(join(tmpdir(), 'steelyard-moved-'));
  const moved = join(elsewhere, 'renamed.steelyard');
  cpSync(project, moved);
  rmSync(join(folder, 'minimal-per-size.csv'));
  const before = readFileSync(moved);
  expect(taken(await checkProjectFile(moved))).toMatchObject({
    entries: 8,
    editions: [1, 2, 3].map((number) => ({ number, how: 'bytes' })),
  });
  expect(readFileSync(moved).equals(before)).toBe(true);
  const hooks = { cancelled: () => true, progress: () => {} };
  expect(codes(await checkProjectFile(moved, hooks))).toEqual(['cancelled']);
  rmSync(elsewhere, { recursive: true });
});

it('check of a file that is no project refuses it', async () => {
  writeFileSync(join(folder, 'x.steelyard'), 'no');
  expect(codes(await checkProjectFile(join(folder, 'x.steelyard')))).toEqual(['not-a-project']);
});
