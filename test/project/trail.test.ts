import { createHash } from 'node:crypto';
import { checkProject } from '@main/project/check-project';
import { openProject } from '@main/project/project';
import { describe, expect, it } from 'vitest';
import { codeOf, freeze, newProject, planCalled, resultText, taken, tamper, unguarded } from './support';

const untouched = () => Promise.reject(new Error('nothing should be rebuilt'));

/** A project with a history of nine entries, closed. */
function history(): string {
  const { project, file, planId } = newProject();
  for (const title of ['1', '2']) taken(project.changePlan({ planId, action: 'terms', plan: planCalled(title) }));
  freeze(project, { planId, result: resultText({ plan: planCalled('2'), slope: 1 }), report: 'pages' });
  taken(project.decide({ author: 'Ada', text: 'Kept.' }));
  taken(project.undo());
  taken(project.renamePlan({ planId, name: 'Final' }));
  expect(project.trail()).toHaveLength(9);
  project.close();
  return file;
}

describe('the trail', () => {
  it('hashes each entry over its number, time, author, action, facts and the hash before', () => {
    const { project } = newProject();
    let previous = '0'.repeat(64);
    for (const { number, time, author, action, facts, hash } of project.trail()) {
      const text = JSON.stringify([number, time, author, action, JSON.stringify(facts), previous]);
      previous = createHash('sha256').update(text).digest('hex'); // by the canonical text's definition, a second time
      expect(hash).toBe(previous);
    }
    expect(project.trailHead()).toBe(previous);
    expect(project.verifyTrail()).toEqual({ ok: true, value: { entries: 2, head: previous } });
  });

  it.each([
    "UPDATE trail SET author = 'Eve' WHERE number = 2",
    'DELETE FROM trail WHERE number = 9',
    "INSERT OR REPLACE INTO trail SELECT number, time, 'Eve', action, facts, previous, hash FROM trail WHERE number = 9",
    "INSERT INTO trail SELECT 11, time, 'Eve', action, facts, hash, hash FROM trail WHERE number = 9",
    'INSERT INTO trail SELECT 10, time, author, action, facts, previous, hash FROM trail WHERE number = 9',
    "UPDATE edition SET report = x'00'",
    'DELETE FROM edition',
    "UPDATE fit SET result = '{}'",
    "UPDATE plan_state SET plan = '{}'",
    'DELETE FROM state_input',
    'DELETE FROM input',
    'DELETE FROM step',
    'DELETE FROM plan WHERE plan_id = 1',
  ])('is guarded, as what it records is, against %s', (statement) => {
    expect(() => tamper(history(), 'PRAGMA recursive_triggers = ON', statement)).toThrow('append-only');
  });

  it.each([
    ["UPDATE trail SET author = 'Eve' WHERE number = 4", 4, 'hash'],
    ["UPDATE trail SET time = '2025-01-01T00:00:00.000Z' WHERE number = 1", 1, 'hash'],
    ["UPDATE trail SET facts = replace(facts, 'Kept', 'Left') WHERE number = 7", 7, 'hash'],
    ['DELETE FROM trail WHERE number = 3', 3, 'gap'],
    ['DELETE FROM trail WHERE number = 3; UPDATE trail SET number = number - 1 WHERE number > 3', 3, 'link'],
    ["UPDATE trail SET previous = printf('%064d', 5) WHERE number = 5", 5, 'link'],
  ])('shows %s at entry %i', async (statement, entry, finding) => {
    const file = history();
    unguarded(file, 'trail', 'PRAGMA foreign_keys = OFF', statement);
    const broken = { ok: false, problems: [{ code: 'trail-broken', at: null, facts: { entry, finding } }] };
    const project = taken(openProject(file));
    expect(project.verifyTrail()).toEqual(broken);
    project.close();
    expect(await checkProject(file, untouched)).toEqual(broken);
  });

  it.each([
    ['plan_state', `UPDATE plan_state SET plan = json_set(plan, '$.title', 'x') WHERE state_id = 1`, 2, 'plan'],
    ['state_input', "UPDATE state_input SET name = 'other.csv' WHERE state_id = 1", 2, 'plan'],
    ['edition', 'DELETE FROM edition', 6, 'edition'],
    ['plan_state', "INSERT INTO plan_state (plan_id, plan) VALUES (1, '{}')", 10, 'unrecorded'],
    ['fit', "INSERT INTO fit (state_id, result) VALUES (1, '{}')", 10, 'unrecorded'],
  ])('is held against %s: %s', async (table, statement, entry, finding) => {
    const file = history();
    unguarded(file, table, statement);
    expect(await checkProject(file, untouched)).toEqual({
      ok: false,
      problems: [{ code: 'trail-broken', at: null, facts: { entry, finding } }],
    });
  });

  it('shows that entries at its end were cut off where something is stored that they recorded', async () => {
    const file = history();
    unguarded(file, 'trail', 'PRAGMA foreign_keys = OFF', 'DELETE FROM trail WHERE number > 3');
    expect(codeOf(await checkProject(file, untouched))).toBe('trail-broken');
  });

  it('whose guards were taken out belongs to a file that is refused, after the chain itself was judged', async () => {
    const file = history();
    tamper(file, 'DROP TRIGGER trail_no_update');
    const damaged = {
      ok: false,
      problems: [{ code: 'project-damaged', at: null, facts: { file, finding: 'guards-missing' } }],
    };
    expect(openProject(file)).toEqual(damaged);
    expect(await checkProject(file, untouched)).toEqual(damaged);
    tamper(file, "UPDATE trail SET author = 'Eve' WHERE number = 4");
    expect(codeOf(await checkProject(file, untouched))).toBe('trail-broken');
  });
});
