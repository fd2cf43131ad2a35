import { execFileSync } from 'node:child_process';
import { chmodSync, existsSync, mkdirSync, readdirSync, readFileSync, symlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { checkProject } from '@main/project/check-project';
import { inProject } from '@main/project/in-project';
import { addPlan, plans } from '@main/project/plans';
import { createProject, openProject } from '@main/project/project';
import { troubleOf, writeWhole } from '@main/project/write-whole';
import Database from 'better-sqlite3';
import { describe, expect, it, onTestFinished } from 'vitest';
import { bytes, codeOf, folder, freeze, newProject, planCalled, resultText, taken, titleOf } from './support';

const faithful: Parameters<typeof checkProject>[1] = async (edition) => ({
  ok: true,
  value: { result: edition.result, report: async () => edition.report },
});

function system([tool = '', ...words]: readonly string[]): void {
  execFileSync(tool, words, { stdio: 'ignore' });
}

/** A file system of its own, in memory; null where this process may not mount one. */
function disk(size: string): string | null {
  const at = folder();
  try {
    system(['mount', '-t', 'tmpfs', '-o', `size=${size}`, 'tmpfs', at]);
  } catch {
    return null;
  }
  onTestFinished(() => system(['umount', '-l', at]));
  return at;
}

describe('a full disk', () => {
  it('refuses the change, which leaves nothing, and takes the next one once there is room', ({ skip }) => {
    const at = disk('2m');
    if (at === null) return skip('needs leave to mount');
    const file = join(at, 'care.steelyard');
    const project = taken(createProject(file));
    const planId = taken(project.addPlan({ name: 'Main', plan: planCalled('0'), inputs: [] }));
    const filler = join(at, 'filler');
    let kept = 0;
    while (codeOf(project.keepInput(new Uint8Array(100_000).fill(kept))) === 'ok') kept++;
    const head = project.trailHead();
    const big = planCalled('x'.repeat(400_000));
    const refused = project.changePlan({ planId, action: 'title', plan: big });
    expect(refused).toEqual({ ok: false, problems: [{ code: 'disk-full', at: null, facts: { file } }] });
    expect([titleOf(project, planId), project.trailHead()]).toEqual(['0', head]);
    expect(codeOf(project.saveAs(join(at, 'copy.steelyard')))).toBe('disk-full');
    expect(codeOf(writeWhole(filler, new Uint8Array(2_000_000)))).toBe('disk-full');
    expect(readdirSync(at)).toEqual(['care.steelyard']);
    system(['mount', '-o', 'remount,size=8m', at]);
    expect(codeOf(project.changePlan({ planId, action: 'title', plan: big }))).toBe('ok');
    expect(codeOf(project.verifyTrail())).toBe('ok');
    project.close();
    taken(openProject(file)).close();
  });

  it('met while a project is made leaves no file', async ({ skip }) => {
    const at = disk('300k');
    if (at === null) return skip('needs leave to mount');
    const file = join(at, 'care.steelyard');
    expect(createProject(file)).toEqual({ ok: false, problems: [{ code: 'disk-full', at: null, facts: { file } }] });
    expect(await inProject(file, {}, async () => ({ ok: true, value: 1 }))).toMatchObject({
      problems: [{ code: 'disk-full', facts: { file } }],
    });
    expect(readdirSync(at)).toEqual([]);
  });

  it('is told by SQLite’s own limit in the same way', () => {
    const { project, file } = newProject();
    project.close();
    const db = new Database(file);
    db.pragma(`max_page_count = ${db.pragma('page_count', { simple: true })}`);
    const store = { db, file, clock: () => '2026-01-01T00:00:00.000Z' };
    const added = addPlan(store, { name: 'Big', plan: planCalled('x'.repeat(400_000)), inputs: [] });
    expect(codeOf(added)).toBe('disk-full');
    expect(plans(store)).toHaveLength(1);
    db.close();
  });
});

describe('where nothing may be written', () => {
  it('a project opens, is checked, and refuses changes', async ({ skip }) => {
    const at = disk('4m');
    if (at === null) return skip('needs leave to mount');
    const file = join(at, 'care.steelyard');
    const made = taken(createProject(file));
    const planId = taken(made.addPlan({ name: 'Main', plan: planCalled('0'), inputs: [] }));
    freeze(made, { planId, result: resultText({ plan: planCalled('0'), slope: 1 }), report: 'pages' });
    made.close();
    system(['mount', '-o', 'remount,ro', at]);
    const project = taken(openProject(file));
    expect(titleOf(project, planId)).toBe('0');
    expect(codeOf(project.changePlan({ planId, action: 'title', plan: planCalled('1') }))).toBe('read-only');
    expect(codeOf(project.saveAs(join(at, 'copy.steelyard')))).toBe('read-only');
    const elsewhere = join(folder(), 'copy.steelyard');
    expect(codeOf(project.saveAs(elsewhere))).toBe('ok');
    project.close();
    expect(codeOf(createProject(join(at, 'other.steelyard')))).toBe('read-only');
    expect(await checkProject(file, faithful)).toMatchObject({ ok: true, value: { editions: [{ number: 1 }] } });
    expect(codeOf(await checkProject(elsewhere, faithful))).toBe('ok');
  });

  it('a project that was opened for reading alone refuses changes', () => {
    const { project, file, planId } = newProject();
    project.close();
    const reader = taken(openProject(file, { readonly: true }));
    expect(codeOf(reader.changePlan({ planId, action: 'title', plan: planCalled('1') }))).toBe('read-only');
    expect(codeOf(reader.saveAs(join(folder(), 'copy.steelyard')))).toBe('ok');
    reader.close();
  });
});

describe('a file in use', () => {
  it('refuses opening and changes while another program writes, and takes them afterwards', async () => {
    const { project, file, planId } = newProject({ patience: 20 });
    const other = new Database(file);
    other.exec('BEGIN EXCLUSIVE');
    const inUse = { ok: false, problems: [{ code: 'file-in-use', at: null, facts: { file } }] };
    expect(openProject(file, { patience: 20 })).toEqual(inUse);
    expect(project.changePlan({ planId, action: 'title', plan: planCalled('1') })).toEqual(inUse);
    expect(await project.together(async () => ({ ok: true, value: 1 }))).toEqual(inUse);
    other.exec('ROLLBACK');
    other.close();
    expect(codeOf(project.changePlan({ planId, action: 'title', plan: planCalled('1') }))).toBe('ok');
  });

  it('lets two windows take turns, and each sees what the other did', () => {
    const { project, file, planId } = newProject();
    const second = taken(openProject(file));
    taken(second.changePlan({ planId, action: 'title', plan: planCalled('1') }));
    expect(titleOf(project, planId)).toBe('1');
    taken(project.undo());
    expect(titleOf(second, planId)).toBe('0');
    expect(codeOf(second.verifyTrail())).toBe('ok');
    second.close();
  });
});

describe('save as', () => {
  it('writes a whole, compact project of the same settings over what was there, and stays with its own file', async () => {
    const { project, file, planId } = newProject();
    freeze(project, { planId, result: resultText({ plan: planCalled('0'), slope: 1 }), report: 'pages' });
    const target = join(folder(), "it's a copy.steelyard");
    writeFileSync(target, 'something else');
    expect(codeOf(project.saveAs(target))).toBe('ok');
    expect(project.file).toBe(file);
    taken(project.changePlan({ planId, action: 'title', plan: planCalled('1') }));
    const copy = taken(openProject(target));
    expect([titleOf(copy, planId), copy.ways().undo, copy.trail().length]).toEqual(['0', 'add-plan', 4]);
    copy.close();
    expect(codeOf(await checkProject(target, faithful))).toBe('ok');
    const db = new Database(target, { readonly: true });
    expect([db.pragma('page_size', { simple: true }), db.pragma('user_version', { simple: true })]).toEqual([
      65536, 20,
    ]);
    db.close();
    expect(readdirSync(join(target, '..'))).toEqual(["it's a copy.steelyard"]);
  });

  it('refuses a folder, a place that is not there, and leaves no draft', () => {
    const { project } = newProject();
    const at = folder();
    mkdirSync(join(at, 'taken'));
    expect(codeOf(project.saveAs(join(at, 'taken')))).toBe('in-the-way');
    expect(codeOf(project.saveAs(join(at, 'nowhere/copy.steelyard')))).toBe('cannot-write');
    expect(readdirSync(at)).toEqual(['taken']);
  });

  it('onto its own file, by any name, changes nothing and keeps it open', () => {
    const { project, file, planId } = newProject();
    const link = join(folder(), 'link.steelyard');
    symlinkSync(file, link);
    const before = readFileSync(file);
    expect([codeOf(project.saveAs(file)), codeOf(project.saveAs(link))]).toEqual(['ok', 'ok']);
    expect(readFileSync(file).equals(before)).toBe(true);
    expect(codeOf(project.changePlan({ planId, action: 'title', plan: planCalled('1') }))).toBe('ok');
  });

  it('waits for no one: a target that another program is writing is refused', () => {
    const { project } = newProject();
    const { project: theirs, file: target } = newProject();
    theirs.close();
    const other = new Database(target);
    other.exec('BEGIN EXCLUSIVE');
    other.exec("INSERT INTO note (place, text) VALUES ('a', 'b')");
    expect(existsSync(`${target}-journal`)).toBe(true);
    expect(codeOf(project.saveAs(target))).toBe('file-in-use');
    other.exec('ROLLBACK');
    other.close();
    expect(codeOf(project.saveAs(target))).toBe('ok');
  });
});

describe('work in a project that does not exist', () => {
  it('gives it its name only when the work was done, and calls it by that name in what it refuses', async () => {
    const at = folder();
    const file = join(at, 'new.steelyard');
    const outcome = await inProject(file, {}, async (project) => {
      expect(existsSync(file)).toBe(false);
      return project.addPlan({ name: 'Main', plan: planCalled('0'), inputs: [] });
    });
    expect(codeOf(outcome)).toBe('ok');
    expect(readdirSync(at)).toEqual(['new.steelyard']);

    const other = join(at, 'other.steelyard');
    const refused = await inProject(other, {}, async (project) =>
      project.signOff({ edition: 1, role: 'reviewer', author: 'Bo' }),
    );
    expect(refused).toEqual({ ok: false, problems: [{ code: 'no-edition', at: null, facts: { file: other } }] });
    expect(readdirSync(at)).toEqual(['new.steelyard']);
  });

  it('that throws leaves no file either', async () => {
    const at = folder();
    const work = inProject(join(at, 'new.steelyard'), {}, () => Promise.reject(new Error('a bug')));
    await expect(work).rejects.toThrow('a bug');
    expect(readdirSync(at)).toEqual([]);
  });
});

describe('trouble of the machine', () => {
  it.each([
    ['ENOSPC', 'disk-full'],
    ['EROFS', 'read-only'],
    ['EACCES', 'no-permission'],
    ['EBUSY', 'file-in-use'],
    ['EISDIR', 'in-the-way'],
    ['EIO', 'cannot-write'],
    ['SQLITE_FULL', 'disk-full'],
    ['SQLITE_READONLY_DBMOVED', 'read-only'],
    ['SQLITE_BUSY_SNAPSHOT', 'file-in-use'],
    ['SQLITE_CORRUPT_INDEX', 'project-damaged'],
    ['SQLITE_NOTADB', 'project-damaged'],
    ['SQLITE_IOERR_FSYNC', 'cannot-write'],
    ['SQLITE_CANTOPEN_ISDIR', 'cannot-write'],
  ])('%s is %s', (code, expected) => {
    expect(troubleOf(Object.assign(new Error(), { code }), 'f').code).toBe(expected);
  });

  it.each([
    new TypeError('x'),
    Object.assign(new Error(), { code: 'SQLITE_CONSTRAINT_CHECK' }),
    Object.assign(new Error(), { code: 'ERR_ASSERTION' }),
  ])('leaves a bug a bug: %s', (bug) => expect(() => troubleOf(bug, 'f')).toThrow(bug));

  it('that stops a whole file from being written leaves what was there', () => {
    const at = folder();
    const file = join(at, 'out.json');
    expect(codeOf(writeWhole(file, 'first'))).toBe('ok');
    chmodSync(file, 0o600);
    expect(codeOf(writeWhole(file, bytes('second')))).toBe('ok');
    mkdirSync(join(at, 'folder'));
    expect(codeOf(writeWhole(join(at, 'folder'), 'x'))).toBe('in-the-way');
    expect(codeOf(writeWhole(join(file, 'inside'), 'x'))).toBe('in-the-way');
    expect(codeOf(writeWhole(join(at, `${'n'.repeat(250)}.json`), 'x'))).toBe('ok');
    expect([readFileSync(file, 'utf8'), readdirSync(at).length]).toEqual(['second', 3]);
  });
});
