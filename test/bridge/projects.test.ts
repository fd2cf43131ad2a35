import { execFileSync, spawn } from 'node:child_process';
import {
  copyFileSync,
  existsSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
  truncateSync,
  writeFileSync,
} from 'node:fs';
import { join, resolve } from 'node:path';
import type { ProjectLook } from '@core/protocol/bridge';
import { sentence } from '@core/words/problems';
import { createProject } from '@main/project/project';
import Database from 'better-sqlite3';
import { describe, expect, it, onTestFinished } from 'vitest';
import {
  codesOf,
  demoFolder,
  firstProblem,
  folder,
  openWindow,
  smallCells,
  smallPlan,
  type TestWindow,
  take,
  taken,
  withProject,
} from './window';

/** A project file that nobody has open. */
function closedProject(name = 'care'): string {
  const file = join(folder(), `${name}.steelyard`);
  taken(createProject(file)).close();
  return file;
}

async function openBy(window: TestWindow, file: string) {
  window.choose(file);
  return window.ask('project.open', { file: null });
}

describe('projects', () => {
  it('are made where the chooser says, with their ending, and stand in the recent list and the frame', async () => {
    const window = openWindow();
    window.choose(null);
    expect(taken(await window.ask('project.create', {}))).toBeNull();
    const at = folder();
    window.choose(join(at, 'care'));
    const look = taken(await window.ask('project.create', {})) as ProjectLook;
    expect(look).toEqual({
      name: 'care',
      file: join(at, 'care.steelyard'),
      readonly: false,
      plans: [],
      undo: null,
      redo: null,
      draft: null,
      covered: false,
      uncovered: null,
      decisions: [],
      notes: [],
      editions: [],
      structuresTried: { count: 0, before: 0, after: 0 },
    });
    const start = taken(await window.ask('start.look', {}));
    expect(start.project).toEqual(look);
    expect(start.recent).toMatchObject([{ file: look.file, name: 'care' }]);
    expect(window.shown.at(-1)).toEqual({ project: 'care', undo: null, redo: null });
    window.choose(look.file);
    expect(firstProblem(await window.ask('project.create', {}))).toMatchObject({ code: 'already-there' });
  });

  it('are closed, and opened again by the chooser or by their place in the recent list, also after a new start', async () => {
    const window = openWindow();
    const { file } = await withProject(window);
    expect(taken(await window.ask('project.close', {}))).toBeNull();
    expect(window.shown.at(-1)).toEqual({ project: null, undo: null, redo: null });
    expect(taken(await openBy(window, file))?.file).toBe(file);
    await window.close();
    const next = openWindow({ profile: window.profile });
    expect(taken(await next.ask('project.open', { file }))?.file).toBe(file);
    expect(taken(await next.ask('project.open', { file }))?.file).toBe(file);
    expect(taken(await next.ask('start.forget', {})).recent).toEqual([]);
    expect(taken(await openWindow({ profile: window.profile }).ask('start.look', {})).recent).toEqual([]);
  });

  it('are not opened by a path that the page makes up, unless it was named on the command line', async () => {
    const window = openWindow();
    const file = closedProject();
    expect(codesOf(await window.ask('project.open', { file }))).toEqual(['no-project']);
    window.offer(file);
    expect(taken(await window.ask('project.open', { file }))?.file).toBe(file);
  });

  it('a recent list that is damaged counts as empty, and one that cannot be written stops nothing', async () => {
    const profile = folder();
    writeFileSync(join(profile, 'recent.json'), '[{"file": 3}, null, {"file":"/a","name":"a","opened":"x"');
    expect(taken(await openWindow({ profile }).ask('start.look', {})).recent).toEqual([]);
    const inTheWay = join(folder(), 'file');
    writeFileSync(inTheWay, '');
    const window = openWindow({ profile: inTheWay });
    await withProject(window);
    expect(taken(await window.ask('start.look', {})).recent).toHaveLength(1);
    expect(codesOf(await window.ask('project.demo', {}))).toEqual(['in-the-way']);
  });

  it('of the demo are fresh each time, and hold its plan and its files', async () => {
    const window = openWindow();
    const first = taken(await window.ask('project.demo', {}));
    const second = taken(await window.ask('project.demo', {}));
    expect([first.name, second.name]).toEqual(['Unpaid care (demo)', 'Unpaid care (demo) 2']);
    expect(second.plans.map(({ inputs }) => inputs.map(({ name }) => name))).toEqual([['care.csv', 'places.csv']]);
    const { job } = taken(await window.ask('fit.ask', { planId: second.plans[0]?.planId as number }));
    expect((await window.resultOf(job)).data.used).toBe(56);
    expect(readdirSync(demoFolder)).toContain('plan.json');
  });

  it('saved under another name go on there, and the first stays as it was', async () => {
    const window = openWindow();
    const { file } = await withProject(window);
    const at = folder();
    window.choose(join(at, 'copy'));
    expect(taken(await window.ask('project.save-as', {}))).toMatchObject({ name: 'copy' });
    expect(window.suggested.at(-1)).toBe('care.steelyard');
    taken(await window.ask('report.note', { author: 'Ada', place: 'summary', text: 'in the copy' }));
    await window.close();
    const next = openWindow();
    expect(taken(await openBy(next, file))?.notes).toEqual([]);
    expect(taken(await openBy(next, join(at, 'copy.steelyard')))?.notes).toHaveLength(1);
    // An ending that the chooser did not ask about is no leave to replace a file.
    next.choose(join(at, 'copy').replace(/copy$/, 'other'));
    copyFileSync(file, join(at, 'other.steelyard'));
    expect(codesOf(await next.ask('project.save-as', {}))).toEqual(['already-there']);
  });

  it('without one open, questions about it are refused, and looking at it is not', async () => {
    const window = openWindow();
    expect(taken(await window.ask('project.look', {}))).toBeNull();
    const refused = [
      await window.ask('plan.undo', {}),
      await window.ask('trail.read', {}),
      await window.ask('draft.keep', { text: 'x' }),
      await window.ask('fit.ask', { planId: 1 }),
      await window.ask('report.pages', { planId: 1, edition: null }),
      await window.ask('project.save-as', {}),
    ];
    expect(refused.map(codesOf)).toEqual(refused.map(() => ['nothing-open']));
  });
});

describe('a draft', () => {
  it('is kept in the project with the files that it names, is no part of the trail, and leaves nothing behind', async () => {
    const window = openWindow();
    const { file } = await withProject(window);
    const input = await take(window, 'cells.csv', smallCells);
    const text = JSON.stringify({ plan: smallPlan(), inputs: [input] });
    expect(taken(await window.ask('draft.keep', { text })).draft).toBe(text);
    await window.close();

    const next = openWindow();
    expect(taken(await openBy(next, file))?.draft).toBe(text);
    expect(taken(await next.ask('data.look', { plan: smallPlan(), inputs: [input] })).used).toBe(5);
    expect(taken(await next.ask('trail.read', {})).entries).toHaveLength(1);
    expect(taken(await next.ask('draft.keep', { text: null })).draft).toBeNull();
    expect(firstProblem(await next.ask('data.look', { plan: smallPlan(), inputs: [input] }))).toMatchObject({
      code: 'file-not-found',
      at: '/data/file',
    });
    await next.close();
    expect(readFileSync(file).includes('Elm')).toBe(false);
  });

  it('whose files a plan took over keeps them there', async () => {
    const window = openWindow();
    const { file } = await withProject(window);
    const input = await take(window, 'cells.csv', smallCells);
    taken(await window.ask('draft.keep', { text: JSON.stringify([input]) }));
    const { job } = taken(await window.ask('plan.add', { name: 'Main', plan: smallPlan(), inputs: [input] }));
    await window.resultOf(job);
    taken(await window.ask('draft.keep', { text: null }));
    await window.close();
    const next = openWindow();
    taken(await openBy(next, file));
    expect(taken(await next.ask('data.look', { plan: smallPlan(), inputs: [input] })).used).toBe(5);
  });
});

describe('a project that cannot be opened is told by what it is, and the one that is open stays', () => {
  const newer = (file: string) => {
    const db = new Database(file);
    db.pragma('user_version = 90');
    db.close();
  };
  it.each<[string, string, (file: string) => void]>([
    ['no file', 'no-project', (file) => rmSync(file)],
    ['a table of cells', 'not-a-project', (file) => writeFileSync(file, smallCells)],
    ['a newer project', 'project-newer', newer],
    ['a project cut off', 'project-damaged', (file) => truncateSync(file, 70_000)],
    [
      'a project overwritten in its middle',
      'project-damaged',
      (file) => writeFileSync(file, Buffer.concat([readFileSync(file).subarray(0, 65_536), Buffer.alloc(900_000, 7)])),
    ],
  ])('%s: %s', async (_, code, spoil) => {
    const window = openWindow();
    await withProject(window, 'mine');
    const file = closedProject();
    spoil(file);
    const problem = firstProblem(await openBy(window, file));
    expect(problem?.code).toBe(code);
    expect(problem && sentence(problem)).toContain('care.steelyard');
    expect(taken(await window.ask('project.look', {}))?.name).toBe('mine');
  });

  it('one that is open in another window: file-in-use, until that is closed', async () => {
    const [one, other] = [openWindow(), openWindow()];
    const { file } = await withProject(one);
    expect(firstProblem(await openBy(other, file))).toEqual({ code: 'file-in-use', at: null, facts: { file } });
    taken(await one.ask('report.note', { author: 'Ada', place: 'summary', text: 'still mine' }));
    expect(codesOf(await openBy(other, file))).toEqual(['file-in-use']);
    await one.close();
    expect(taken(await openBy(other, file))?.notes).toHaveLength(1);
  });

  it('one that another program was killed with: it opens at the last accepted change', async () => {
    const file = closedProject();
    const script = `
      import Database from 'better-sqlite3';
      const db = new Database(process.argv[1]);
      db.pragma('locking_mode = EXCLUSIVE');
      db.exec("BEGIN EXCLUSIVE; INSERT INTO note (place, text) VALUES ('a', 'b')");
      process.stdout.write('ready'); setInterval(() => {}, 1000);`;
    const child = spawn(process.execPath, ['--input-type=module', '-e', script, file], { cwd: resolve('.') });
    await new Promise((ready) => child.stdout.once('data', ready));
    const window = openWindow();
    expect(codesOf(await openBy(window, file))).toEqual(['file-in-use']);
    child.kill('SIGKILL');
    await new Promise((ended) => child.once('exit', ended));
    expect(taken(await openBy(window, file))?.notes).toEqual([]);
  });
});

describe('a project that may only be read', () => {
  it('opens, is fitted and printed, and refuses every change', async ({ skip }) => {
    const at = folder();
    try {
      execFileSync('mount', ['-t', 'tmpfs', '-o', 'size=8m', 'tmpfs', at], { stdio: 'ignore' });
    } catch {
      return skip('needs leave to mount');
    }
    onTestFinished(() => void execFileSync('umount', ['-l', at]));
    const file = join(at, 'care.steelyard');
    const first = openWindow();
    first.choose(file);
    taken(await first.ask('project.create', {}));
    const inputs = [await take(first, 'cells.csv', smallCells)];
    const { planId, job } = taken(await first.ask('plan.add', { name: 'Main', plan: smallPlan(), inputs }));
    await first.doneOf(job);
    const constant = smallPlan({ variance: { parts: [{ kind: 'constant' }] } });
    taken(await first.ask('plan.change', { planId, action: 'structure', plan: constant, inputs: null }));
    await first.close(); // before the fit was kept
    execFileSync('mount', ['-o', 'remount,ro', at]);

    const window = openWindow();
    expect(taken(await openBy(window, file))).toMatchObject({ readonly: true, undo: 'structure' });
    const ask = taken(await window.ask('fit.ask', { planId }));
    const told = await window.doneOf(ask.job);
    expect([told.outcome.ok, told.unkept]).toEqual([true, undefined]);
    expect(taken(await window.ask('fit.latest', { planId })).result?.plan.variance.parts[0]?.kind).toBe('constant');
    expect(taken(await window.ask('report.pages', { planId, edition: null })).pdf.length).toBeGreaterThan(1000);
    const refused = [
      await window.ask('plan.change', { planId, action: 'x', plan: smallPlan(), inputs: null }),
      await window.ask('plan.add', { name: 'x', plan: smallPlan(), inputs }),
      await window.ask('plan.rename', { planId, name: 'x' }),
      await window.ask('plan.undo', {}),
      await window.ask('plan.redo', {}),
      await window.ask('draft.keep', { text: 'x' }),
      await window.ask('report.note', { author: 'Ada', place: 'summary', text: 'x' }),
      await window.ask('report.decide', { author: 'Ada', text: 'x' }),
      await window.ask('report.freeze', { planId, author: 'Ada' }),
      await window.ask('report.sign-off', { edition: 1, role: 'x', author: 'Ada' }),
      await window.ask('answer.cover', { author: 'Ada' }),
      await window.ask('answer.uncover', { author: 'Ada' }),
    ];
    expect(refused.map(codesOf)).toEqual(refused.map(() => ['read-only']));
    const elsewhere = join(folder(), 'mine.steelyard');
    window.choose(elsewhere);
    expect(taken(await window.ask('project.save-as', {}))).toMatchObject({ readonly: false, name: 'mine' });
  });
});

describe('a project whose file goes while it is open', () => {
  async function withOne() {
    const window = openWindow();
    const { file } = await withProject(window);
    taken(await window.ask('report.note', { author: 'Ada', place: 'summary', text: 'mine' }));
    return { window, file };
  }
  const note = (window: TestWindow) => window.ask('report.note', { author: 'Ada', place: 'summary', text: 'more' });

  it.each<[string, (file: string) => void, string]>([
    ['removed', (file) => rmSync(file), 'project-gone'],
    ['moved', (file) => renameSync(file, `${file}.old`), 'project-gone'],
    [
      'replaced',
      (file) => {
        renameSync(file, `${file}.old`);
        copyFileSync(closedProject(), file);
      },
      'project-replaced',
    ],
  ])('%s: changes are refused, it is still shown whole, and can be saved under another name', async (_, go, code) => {
    const { window, file } = await withOne();
    go(file);
    const other = existsSync(file) ? readFileSync(file) : null;
    const problem = firstProblem(await note(window));
    expect(problem).toEqual({ code, at: null, facts: { file } });
    expect(problem && sentence(problem)).toContain('What is on the screen is still whole');
    expect(taken(await window.ask('project.look', {}))?.notes).toMatchObject([{ place: 'summary', text: 'mine' }]);
    expect(taken(await window.ask('trail.read', {})).whole?.entries).toBe(2);
    const elsewhere = join(folder(), 'saved.steelyard');
    window.choose(elsewhere);
    expect(taken(await window.ask('project.save-as', {}))).toMatchObject({ name: 'saved' });
    expect(taken(await note(window)).notes).toMatchObject([{ place: 'summary', text: 'more' }]);
    expect(existsSync(file) ? readFileSync(file) : null).toEqual(other);
  });

  it('overwritten in place: changes are refused, and nothing crashes', async () => {
    const { window, file } = await withOne();
    writeFileSync(file, Buffer.alloc(readFileSync(file).length, 7));
    expect(firstProblem(await note(window))?.code).toBe('project-overwritten');
    window.choose(join(folder(), 'saved.steelyard'));
    expect(codesOf(await window.ask('project.save-as', {}))).toEqual(['project-overwritten']);
    for (const answer of [await window.ask('project.look', {}), await window.ask('trail.read', {})])
      expect(answer.ok || codesOf(answer)[0] === 'project-damaged').toBe(true);
    expect(taken(await window.ask('start.look', {})).recent).toHaveLength(1);
    expect(taken(await openBy(window, closedProject('other')))?.name).toBe('other');
  });

  it('written over by an older copy of itself: changes are refused', async () => {
    const { window, file } = await withOne();
    copyFileSync(file, `${file}.copy`);
    taken(await window.ask('report.decide', { author: 'Ada', text: 'kept '.repeat(40_000) }));
    writeFileSync(file, readFileSync(`${file}.copy`));
    expect(firstProblem(await note(window))?.code).toBe('project-overwritten');
  });

  it('is told unasked when it goes, once, and again when it is back', async () => {
    const { window, file } = await withOne();
    const told = () =>
      window.told.flatMap((one) => (one.kind === 'file' ? [one.problems.map(({ code }) => code)] : []));
    taken(await note(window));
    renameSync(file, `${file}.old`);
    await expect.poll(told, { timeout: 10_000 }).toEqual([['project-gone']]);
    await new Promise((later) => setTimeout(later, 2000));
    renameSync(`${file}.old`, file);
    await expect.poll(told, { timeout: 10_000 }).toEqual([['project-gone'], []]);
    expect((await window.ask('report.decide', { author: 'Ada', text: 'still mine' })).ok).toBe(true);
  });
});
