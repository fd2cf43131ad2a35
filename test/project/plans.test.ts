import { createProject, openProject } from '@main/project/project';
import Database from 'better-sqlite3';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { bytes, codeOf, folder, freeze, newProject, planCalled, resultText, taken, tamper, titleOf } from './support';

describe('a new project', () => {
  it('is one file with the settings of its layout, and begins its trail with its making', () => {
    const { project, file } = newProject();
    project.close();
    const db = new Database(file, { readonly: true });
    const setting = (name: string) => db.pragma(name, { simple: true });
    expect(setting('application_id')).toBe(0x53544c59);
    expect(setting('user_version')).toBe(20);
    expect(setting('page_size')).toBe(65536);
    expect(setting('journal_mode')).toBe('delete');
    const lax = db.prepare(
      "SELECT count(*) AS lax FROM pragma_table_list WHERE schema = 'main' AND strict = 0 AND name NOT LIKE 'sqlite_%'",
    );
    expect(lax.get()).toEqual({ lax: 0 });
    db.close();
    const again = taken(openProject(file));
    expect(again.trail()[0]).toMatchObject({
      number: 1,
      action: 'created',
      author: null,
      time: '2026-01-01T00:00:00.000Z',
    });
    again.close();
  });

  it('never takes the place of a file that is there, nor a journal that another one left', () => {
    const { project, file } = newProject();
    project.close();
    expect(codeOf(createProject(file))).toBe('already-there');
    const left = `${folder()}/gone.steelyard`;
    tamper(`${left}-journal`, 'CREATE TABLE t (a)');
    expect(codeOf(createProject(left))).toBe('already-there');
  });
});

describe('inputs', () => {
  it('are kept as their bytes, once for each content', () => {
    const { project, file } = newProject();
    const odd = Uint8Array.from({ length: 300_000 }, (_, i) => (i * i) % 251);
    const hash = taken(project.keepInput(odd));
    expect(taken(project.keepInput(Uint8Array.from(odd)))).toBe(hash);
    expect(Buffer.compare(project.inputBytes(hash) as Uint8Array, odd)).toBe(0);
    expect(project.inputBytes('0'.repeat(64))).toBeNull();
    // SHA-256 of no bytes: FIPS 180-4 test value
    expect(taken(project.keepInput(new Uint8Array()))).toBe(
      'e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855',
    );
    project.close();
    const db = new Database(file, { readonly: true });
    expect(db.prepare('SELECT count(*) AS kept FROM input').get()).toEqual({ kept: 3 });
    db.close();
  });
});

describe('plans', () => {
  it('change with their undo step and one entry of the trail each', () => {
    const { project, planId } = newProject();
    const before = project.trail().length;
    taken(project.changePlan({ planId, action: 'variance', plan: planCalled('1'), author: 'Ada' }));
    expect(titleOf(project, planId)).toBe('1');
    expect(project.trail()).toHaveLength(before + 1);
    expect(project.trail().at(-1)).toMatchObject({
      action: 'plan-changed',
      author: 'Ada',
      facts: { plan: planId, name: 'Main', step: 'variance', state: 2, inputs: [{ name: 'cells.csv' }] },
    });
    expect(project.ways()).toEqual({ undo: 'variance', redo: null });
  });

  it('keep their names apart, whatever stands in them', () => {
    const { project, planId } = newProject();
    const plan = planCalled('other');
    const hostile = [
      'O\'Brien "; DROP TABLE plan; --',
      '🧮 👩‍👩‍👧',
      'x'.repeat(10_000),
      'a\u0000b',
      'null',
      '\u202eabc',
      '%s',
      'e\u0301',
    ];
    const ids = hostile.map((name) => taken(project.addPlan({ name, plan, inputs: [] })));
    expect(project.plans().map(({ name }) => name)).toEqual(['Main', ...hostile.slice(0, -1), '\u00e9']);
    for (const name of [...hostile, ' Main ', '\u00e9'])
      expect(codeOf(project.addPlan({ name, plan, inputs: [] }))).toBe('name-taken');
    expect(codeOf(project.renamePlan({ planId: ids[0] as number, name: 'Main' }))).toBe('name-taken');
    expect(codeOf(project.renamePlan({ planId, name: 'Main' }))).toBe('ok');
    taken(project.renamePlan({ planId, name: 'half a pair \ud83d' }));
    expect(project.plans()[0]?.name).toBe('half a pair \ufffd');
    expect(codeOf(project.verifyTrail())).toBe('ok');
  });

  it('that are not there are refused by number', () => {
    const { project } = newProject();
    const refused = project.changePlan({ planId: 99, action: 'variance', plan: planCalled('1') });
    expect(refused).toEqual({ ok: false, problems: [{ code: 'unknown-plan', at: null, facts: { found: 99 } }] });
    expect(codeOf(project.renamePlan({ planId: 99, name: 'x' }))).toBe('unknown-plan');
    expect(codeOf(project.keepFit({ planId: 99, result: '{}' }))).toBe('unknown-plan');
  });

  it('that name an input which is not kept leave nothing behind', () => {
    const { project, planId } = newProject();
    const inputs = [{ name: 'cells.csv', sha256: 'f'.repeat(64) }];
    const before = project.trailHead();
    expect(() => project.changePlan({ planId, action: 'variance', plan: planCalled('1'), inputs })).toThrow(
      /FOREIGN KEY/,
    );
    expect([titleOf(project, planId), project.trailHead(), project.ways().undo]).toEqual(['0', before, 'add-plan']);
  });
});

describe('undo and redo', () => {
  it('go back and forth over plans and notes, each with an entry of the trail, and survive reopening', () => {
    const { project, file, planId } = newProject();
    taken(project.changePlan({ planId, action: 'terms', plan: planCalled('1') }));
    taken(project.renamePlan({ planId, name: 'Final' }));
    taken(project.setNote({ place: 'summary', text: 'One ‘word’ more.', author: 'Ada' }));
    expect(project.undo()).toEqual({ ok: true, value: 'change-note' });
    expect(project.notes()).toEqual([]);
    project.close();

    const again = taken(openProject(file));
    expect(again.ways()).toEqual({ undo: 'rename-plan', redo: 'change-note' });
    expect([taken(again.undo()), taken(again.undo())]).toEqual(['rename-plan', 'terms']);
    expect([again.plans()[0]?.name, titleOf(again, planId)]).toEqual(['Main', '0']);
    const entries = again.trail().length;
    expect([taken(again.redo()), taken(again.redo()), taken(again.redo()), taken(again.redo())]).toEqual([
      'terms',
      'rename-plan',
      'change-note',
      null,
    ]);
    expect(again.trail()).toHaveLength(entries + 3);
    expect(again.trail().at(-1)).toMatchObject({ action: 'redone', facts: { step: 'change-note' } });
    expect([again.plans()[0]?.name, titleOf(again, planId)]).toEqual(['Final', '1']);
    expect(again.notes()).toMatchObject([{ place: 'summary', text: 'One ‘word’ more.', author: 'Ada' }]);
    expect(codeOf(again.verifyTrail())).toBe('ok');
    again.close();
  });

  it('take a plan away and bring it back under its name', () => {
    const { project, planId } = newProject();
    taken(project.undo());
    expect(project.plans()).toEqual([]);
    expect(codeOf(project.changePlan({ planId, action: 'terms', plan: planCalled('1') }))).toBe('unknown-plan');
    taken(project.redo());
    expect(project.plans()).toHaveLength(1);
    expect([taken(project.undo()), taken(project.undo())]).toEqual(['add-plan', null]);
  });

  it('lose the way forward once something new was done', () => {
    const { project, planId } = newProject();
    taken(project.changePlan({ planId, action: 'first', plan: planCalled('1') }));
    taken(project.undo());
    taken(project.changePlan({ planId, action: 'second', plan: planCalled('2') }));
    expect(project.ways()).toEqual({ undo: 'second', redo: null });
    expect([taken(project.redo()), taken(project.undo()), titleOf(project, planId)]).toEqual([null, 'second', '0']);
  });

  it('never touch decisions, signatures, editions or the trail', () => {
    const { project, planId } = newProject();
    const facts = freeze(project, { planId, result: resultText({ plan: planCalled('0'), slope: 1 }), report: 'pages' });
    taken(project.decide({ author: 'Ada', text: 'Pilot area left out.' }));
    taken(project.signOff({ edition: facts.number, role: 'reviewer', author: 'Bert' }));
    const length = project.trail().length;
    while (taken(project.undo()) !== null);
    expect(project.decisions()).toMatchObject([{ author: 'Ada', text: 'Pilot area left out.' }]);
    expect(project.signOffs()).toMatchObject([{ edition: 1, role: 'reviewer', author: 'Bert' }]);
    expect(project.editions()).toHaveLength(1);
    expect(project.trail()).toHaveLength(length + 1);
    expect(codeOf(project.signOff({ edition: 2, role: 'reviewer', author: 'Bert' }))).toBe('no-edition');
  });

  it('lead to what a list of states would, for any order of changes', { timeout: 120_000 }, () => {
    const { project, planId } = newProject();
    let [states, at, next] = [[titleOf(project, planId)], 0, 1];
    fc.assert(
      fc.property(fc.array(fc.constantFrom('change', 'undo', 'redo'), { maxLength: 12 }), (moves) => {
        for (const move of moves) {
          if (move === 'change') {
            const title = String(next++);
            taken(project.changePlan({ planId, action: 'any', plan: planCalled(title) }));
            states = [...states.slice(0, at + 1), title];
            at++;
          } else if (move === 'undo' && at > 0) {
            taken(project.undo());
            at--;
          } else if (move === 'redo') {
            taken(project.redo());
            at = Math.min(at + 1, states.length - 1);
          }
          expect(titleOf(project, planId)).toBe(states[at]);
        }
      }),
      { numRuns: 15, seed: 7 },
    );
    expect(codeOf(project.verifyTrail())).toBe('ok');
  });
});

it('one change in a group that is refused undoes the whole group', async () => {
  const { project, planId } = newProject();
  const before = [project.trailHead(), project.plans().length];
  const outcome = await project.together(async () => {
    taken(project.keepInput(bytes('more')));
    taken(project.addPlan({ name: 'Second', plan: planCalled('2'), inputs: [] }));
    await new Promise((turn) => setImmediate(turn));
    return project.changePlan({ planId: 99, action: 'x', plan: planCalled('3') });
  });
  expect(codeOf(outcome)).toBe('unknown-plan');
  expect([project.trailHead(), project.plans().length]).toEqual(before);
  await expect(project.together(() => Promise.reject(new Error('a bug')))).rejects.toThrow('a bug');
  expect(codeOf(project.changePlan({ planId, action: 'x', plan: planCalled('3') }))).toBe('ok');
});
