import { execFileSync } from 'node:child_process';
import { copyFileSync, existsSync, mkdirSync, readdirSync, readFileSync, truncateSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { checkProject } from '@main/project/check-project';
import { steps } from '@main/project/layout';
import { openProject } from '@main/project/project';
import Database from 'better-sqlite3';
import { describe, expect, it } from 'vitest';
import { bytes, codeOf, folder, newProject, planCalled, resultText, taken, tamper, titleOf } from './support';

const frozenFile = join(import.meta.dirname, 'frozen/v10.steelyard');
const untouched = () => Promise.reject(new Error('nothing should be rebuilt'));

function frozenCopy(): string {
  const file = join(folder(), 'old.steelyard');
  copyFileSync(frozenFile, file);
  return file;
}

/** A project large enough to have many pages, closed. */
function large(): string {
  const { project, file } = newProject();
  for (let i = 0; i < 12; i++) taken(project.keepInput(new Uint8Array(150_000).fill(i)));
  project.close();
  return file;
}

describe('what is no project is refused by what it is, and left as it was', () => {
  const header = Buffer.from(readFileSync(frozenFile).subarray(0, 100));
  const foreign = (file: string) => tamper(file, 'CREATE TABLE t (a)', 'PRAGMA application_id = 1196444487');

  it.each<[string, string, (file: string) => void]>([
    ['no file', 'no-project', () => {}],
    ['a folder', 'in-the-way', (file) => mkdirSync(file)],
    ['an empty file', 'not-a-project', (file) => writeFileSync(file, '')],
    ['garbage', 'not-a-project', (file) => writeFileSync(file, bytes('steelyard '.repeat(9999)))],
    ['a short file', 'not-a-project', (file) => writeFileSync(file, header.subarray(0, 99))],
    ['another program’s SQLite file', 'not-a-project', foreign],
    ['a head without a body', 'project-damaged', (file) => writeFileSync(file, header)],
    [
      'a head before garbage',
      'project-damaged',
      (file) => writeFileSync(file, Buffer.concat([header, Buffer.alloc(200_000, 7)])),
    ],
  ])('%s: %s', async (_, code, make) => {
    const file = join(folder(), 'x.steelyard');
    make(file);
    const before = existsSync(file) && code !== 'in-the-way' ? readFileSync(file) : null;
    expect(codeOf(openProject(file))).toBe(code);
    expect(codeOf(await checkProject(file, untouched))).toBe(code);
    if (before) expect(readFileSync(file).equals(before)).toBe(true);
  });

  it.each([0.2, 0.5, 0.9, 0.999])('a project cut off at %f of its length: project-damaged', (share) => {
    const file = large();
    truncateSync(file, Math.floor(share * readFileSync(file).length));
    expect(codeOf(openProject(file))).toBe('project-damaged');
  });

  it('a project with a page overwritten in its middle: project-damaged, or found by the check', async () => {
    const file = large();
    const whole = readFileSync(file);
    for (let page = 1; page < whole.length / 65536; page++) {
      const torn = Buffer.from(whole);
      torn.fill(0xa5, page * 65536, (page + 1) * 65536);
      writeFileSync(file, torn);
      const codes = [codeOf(openProject(file)), codeOf(await checkProject(file, untouched))];
      expect(codes.some((code) => code === 'project-damaged' || code === 'trail-broken')).toBe(true);
    }
  });

  it('a project of a newer version: project-newer, with both layouts', () => {
    const { project, file } = newProject();
    project.close();
    tamper(file, 'PRAGMA user_version = 90');
    const before = readFileSync(file);
    expect(openProject(file)).toEqual({
      ok: false,
      problems: [{ code: 'project-newer', at: null, facts: { file, found: 90, known: 20 } }],
    });
    expect(readFileSync(file).equals(before)).toBe(true);
  });

  it.each([
    'CREATE TRIGGER spy AFTER INSERT ON input BEGIN DELETE FROM note; END',
    'CREATE VIEW spy AS SELECT * FROM plan',
    'CREATE TABLE spy (a)',
    'ALTER TABLE note ADD COLUMN extra TEXT',
    'DROP TABLE note',
  ])('a project with tables that are not its layout’s: %s', (statement) => {
    const { project, file } = newProject();
    project.close();
    tamper(file, statement);
    expect(openProject(file)).toEqual({
      ok: false,
      problems: [{ code: 'project-damaged', at: null, facts: { file, finding: 'layout-altered' } }],
    });
  });
});

describe('the frozen file of layout 10', () => {
  it('opens with all that it held, and its trail verifies', () => {
    const project = taken(openProject(frozenCopy()));
    expect(project.plans()).toMatchObject([{ planId: 1, name: 'Main', inputs: [{ name: 'cells.csv' }] }]);
    expect(titleOf(project, 1)).toBe('second');
    expect(project.ways()).toEqual({ undo: 'change-note', redo: 'title' });
    expect(project.notes()).toMatchObject([{ place: 'summary', text: 'A note.' }]);
    expect(project.decisions()).toMatchObject([{ author: 'Ada Müller', text: 'Both cells are kept.' }]);
    expect(project.signOffs()).toMatchObject([{ edition: 1, role: 'reviewer', author: 'Bo' }]);
    expect(project.editions()).toMatchObject([{ number: 1, facts: { author: 'Ada Müller', project: 'v10' } }]);
    expect(project.verifyTrail()).toEqual({
      ok: true,
      value: { entries: 10, head: '69c9bd032dc1433cba44204f1882834e7e47d188840335c9c25e74243668f08f' },
    });
    project.close();
  });

  it('was made by its script, which makes the same trail again', () => {
    const file = join(folder(), 'v10.steelyard');
    execFileSync(process.execPath, [fileURLToPath(new URL('./frozen/make.ts', import.meta.url)), file]);
    const [again, frozen] = [taken(openProject(file)), taken(openProject(frozenCopy()))];
    expect(again.trail()).toEqual(frozen.trail());
    again.close();
    frozen.close();
  });

  it('takes changes, and goes forward to what was undone', () => {
    const project = taken(openProject(frozenCopy()));
    taken(project.redo());
    expect(titleOf(project, 1)).toBe('third');
    taken(project.keepFit({ planId: 1, result: resultText({ plan: planCalled('third'), slope: 1 }) }));
    expect(codeOf(project.verifyTrail())).toBe('ok');
    project.close();
  });
});

describe('a file of an older layout', () => {
  const more = { layout: 30, sql: 'CREATE TABLE extra (a TEXT) STRICT; INSERT INTO extra SELECT name FROM plan;' };
  const layoutIn = (file: string) => {
    const db = new Database(file, { readonly: true });
    const layout = db.pragma('user_version', { simple: true });
    db.close();
    return layout;
  };

  it('is brought forward with its contents, after a copy of it was put beside', () => {
    const file = frozenCopy();
    const project = taken(openProject(file, { steps: [...steps, more] }));
    expect(titleOf(project, 1)).toBe('second');
    expect(codeOf(project.verifyTrail())).toBe('ok');
    project.close();
    expect([layoutIn(file), readdirSync(join(file, '..')).sort()]).toEqual([
      30,
      ['old.layout-10.steelyard', 'old.steelyard'],
    ]);
    const copy = join(file, '../old.layout-10.steelyard');
    expect(layoutIn(copy)).toBe(10);
    const older = taken(openProject(copy, { readonly: true, steps: steps.slice(0, 1) }));
    expect(older.trail()).toHaveLength(10);
    older.close();
    expect(codeOf(openProject(file))).toBe('project-newer');
    taken(openProject(file, { steps: [...steps, more] })).close();
    expect(readdirSync(join(file, '..'))).toHaveLength(2);
  });

  it('stays at its last whole step where a later one fails', () => {
    const file = frozenCopy();
    const failing = { layout: 40, sql: 'CREATE TABLE half (a TEXT) STRICT; INSERT INTO nowhere VALUES (1);' };
    expect(() => openProject(file, { steps: [...steps, more, failing] })).toThrow('nowhere');
    expect(layoutIn(file)).toBe(30);
    const db = new Database(file, { readonly: true });
    expect(db.prepare("SELECT count(*) AS half FROM sqlite_schema WHERE name = 'half'").get()).toEqual({ half: 0 });
    db.close();
  });

  it('is not brought forward by one who may only read it', () => {
    const file = frozenCopy();
    expect(codeOf(openProject(file, { readonly: true, steps: [...steps, more] }))).toBe('read-only');
    expect(layoutIn(file)).toBe(10);
  });
});
