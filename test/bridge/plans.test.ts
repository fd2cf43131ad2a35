import { rmSync } from 'node:fs';
import { join } from 'node:path';
import { textOfResult } from '@main/engine/edition';
import { runPlan } from '@main/engine/run-plan';
import { sha256Of } from '@main/project/sha256';
import { describe, expect, it } from 'vitest';
import {
  codesOf,
  demoFolder,
  demoPlan,
  firstProblem,
  folder,
  manyCells,
  openWindow,
  smallCells,
  smallPlan,
  type TestWindow,
  take,
  taken,
  withProject,
} from './window';

/** A window with a project that holds the small plan, fitted. */
async function withSmall(): Promise<{ window: TestWindow; planId: number }> {
  const window = openWindow();
  await withProject(window);
  const inputs = [await take(window, 'cells.csv', smallCells)];
  const added = taken(await window.ask('plan.add', { name: 'Main', plan: smallPlan(), inputs }));
  await window.resultOf(added.job);
  return { window, planId: added.planId };
}

const slopeOf = (result: { fit: { coefficients: readonly { estimate: number }[] } } | null) =>
  result?.fit.coefficients[1]?.estimate;

describe('a plan in the window', () => {
  it('of the demo gives, to the last byte, the result that the command line writes', async () => {
    const window = openWindow();
    await withProject(window);
    const { plan, inputs } = await demoPlan(window);
    const { job, planId, project } = taken(await window.ask('plan.add', { name: 'Main', plan, inputs }));
    const result = await window.resultOf(job);
    const run = taken(await runPlan({ planFile: join(demoFolder, 'plan.json') }));
    expect(textOfResult(result)).toBe(textOfResult(run.result));
    expect(project.plans).toMatchObject([{ planId, name: 'Main', plan: result.plan }]);
    expect(taken(await window.ask('fit.latest', { planId }))).toEqual({ result, before: null });
    expect(window.told.some(({ kind }) => kind === 'progress')).toBe(true);
  });

  it('is kept with its files, a step that can be undone and its entries in the trail', async () => {
    const { window } = await withSmall();
    const look = taken(await window.ask('project.look', {}));
    expect(look).toMatchObject({
      undo: 'add-plan',
      redo: null,
      plans: [{ name: 'Main', inputs: [{ name: 'cells.csv', sha256: sha256Of(smallCells) }] }],
      structuresTried: { count: 1 },
    });
    const { entries, whole } = taken(await window.ask('trail.read', {}));
    expect(entries.map(({ action }) => action)).toEqual(['created', 'plan-added', 'fit-kept']);
    expect(whole).toEqual({ entries: 3, head: entries[2]?.hash });
    expect(window.shown.at(-1)).toEqual({ project: 'care', undo: 'add-plan', redo: null });
  });

  it('is refused with every fault of its form at its place, and nothing is kept', async () => {
    const { window, planId } = await withSmall();
    const plan = smallPlan({ roles: { outcome: 'y', sise: 'n' }, variance: { parts: [{ kind: 'betwen' }] } });
    const changed = await window.ask('plan.change', { planId, action: 'roles', plan, inputs: null });
    if (changed.ok) throw new Error('changed');
    expect(changed.problems.map(({ code, at }) => [code, at])).toEqual([
      ['unknown-key', '/roles/sise'],
      ['unknown-kind', '/variance/parts/0/kind'],
    ]);
    expect(taken(await window.ask('project.look', {}))?.undo).toBe('add-plan');
  });

  it('whose file is not at hand is refused at the place that names it', async () => {
    const { window, planId } = await withSmall();
    const plan = smallPlan({ data: { file: 'other.csv' } });
    expect(await window.ask('plan.change', { planId, action: 'file', plan, inputs: null })).toEqual({
      ok: false,
      problems: [{ code: 'file-not-found', at: '/data/file', facts: { file: 'other.csv' } }],
    });
    const inputs = [{ name: 'other.csv', sha256: 'a'.repeat(64) }];
    expect(codesOf(await window.ask('plan.add', { name: 'Other', plan, inputs }))).toEqual(['file-not-found']);
  });

  it('that data, model or fit refuse is kept all the same, and its job says why', async () => {
    const { window, planId } = await withSmall();
    const plan = smallPlan({ terms: [{ column: 'parish' }] });
    const { job } = taken(await window.ask('plan.change', { planId, action: 'terms', plan, inputs: null }));
    const { outcome } = await window.doneOf(job);
    expect(firstProblem(outcome)).toMatchObject({ code: 'not-a-number', at: '/terms/0/column' });
    const { result, before } = taken(await window.ask('fit.latest', { planId }));
    expect([result, typeof slopeOf(before)]).toEqual([null, 'number']);
  });

  it('takes the name of its title where it is given none, and refuses one that is taken or blank', async () => {
    const { window, planId } = await withSmall();
    const inputs = [{ name: 'cells.csv', sha256: sha256Of(smallCells) }];
    const plan = smallPlan();
    expect(taken(await window.ask('plan.add', { name: ' ', plan, inputs })).project.plans[1]?.name).toBe('Small');
    expect(firstProblem(await window.ask('plan.add', { name: 'Main', plan, inputs }))).toMatchObject({
      code: 'name-taken',
    });
    expect(firstProblem(await window.ask('plan.rename', { planId, name: ' ' }))).toMatchObject({
      code: 'must-be-stated',
      at: '/name',
    });
    expect(taken(await window.ask('plan.rename', { planId, name: ' First ' })).plans[0]?.name).toBe('First');
    expect(codesOf(await window.ask('plan.rename', { planId: 99, name: 'x' }))).toEqual(['unknown-plan']);
  });

  it('that is changed shows what moved; undo and redo go back to the fits that were kept', async () => {
    const { window, planId } = await withSmall();
    const first = taken(await window.ask('fit.latest', { planId })).result;
    const plan = smallPlan({ variance: { parts: [{ kind: 'constant' }] } });
    const change = taken(await window.ask('plan.change', { planId, action: 'structure', plan, inputs: null }));
    const second = await window.resultOf(change.job);
    expect(slopeOf(second)).not.toBe(slopeOf(first));
    expect(taken(await window.ask('fit.latest', { planId }))).toEqual({ result: second, before: first });
    expect(change.project).toMatchObject({ undo: 'structure', redo: null });

    expect(taken(await window.ask('plan.undo', {}))).toMatchObject({ undo: 'add-plan', redo: 'structure' });
    expect(taken(await window.ask('fit.latest', { planId }))).toEqual({ result: first, before: second });
    const again = taken(await window.ask('fit.ask', { planId }));
    expect(await window.resultOf(again.job)).toEqual(first);
    expect(taken(await window.ask('plan.redo', {}))).toMatchObject({ undo: 'structure', redo: null });
    expect(taken(await window.ask('fit.latest', { planId }))).toEqual({ result: second, before: first });
    const actions = taken(await window.ask('trail.read', {})).entries.map(({ action }) => action);
    expect(actions.slice(2)).toEqual(['fit-kept', 'plan-changed', 'fit-kept', 'undone', 'redone']);
  });

  it('that is changed to what it is already adds no step', async () => {
    const { window, planId } = await withSmall();
    const before = taken(await window.ask('trail.read', {})).entries.length;
    const same = taken(await window.ask('plan.change', { planId, action: 'same', plan: smallPlan(), inputs: null }));
    expect((await window.doneOf(same.job)).outcome.ok).toBe(true);
    expect(same.project.undo).toBe('add-plan');
    expect(taken(await window.ask('trail.read', {})).entries).toHaveLength(before);
  });

  it('that was added can be undone away, and comes back by redo; undo with nothing left does nothing', async () => {
    const { window, planId } = await withSmall();
    expect(taken(await window.ask('plan.undo', {}))).toMatchObject({ plans: [], undo: null, redo: 'add-plan' });
    expect(codesOf(await window.ask('fit.ask', { planId }))).toEqual(['unknown-plan']);
    expect(codesOf(await window.ask('fit.latest', { planId }))).toEqual(['unknown-plan']);
    expect(taken(await window.ask('plan.undo', {})).plans).toEqual([]);
    expect(taken(await window.ask('plan.redo', {})).plans).toHaveLength(1);
  });

  it('survives closing and opening with its undo steps and its fit', async () => {
    const { window, planId } = await withSmall();
    const before = taken(await window.ask('fit.latest', { planId }));
    const { file } = taken(await window.ask('project.look', {})) as { file: string };
    await window.ask('project.close', {});
    expect(taken(await window.ask('project.look', {}))).toBeNull();
    expect(taken(await window.ask('project.open', { file }))).toMatchObject({ undo: 'add-plan' });
    expect(taken(await window.ask('fit.latest', { planId }))).toEqual(before);
  });
});

describe('a fit under way', () => {
  const large = manyCells(8000);
  const plan = (kind: string) =>
    smallPlan({ roles: { label: ['cell'], outcome: 'y', size: 'n' }, variance: { parts: [{ kind }] } });

  async function withLarge() {
    const window = openWindow();
    await withProject(window);
    const inputs = [await take(window, 'cells.csv', large)];
    return { window, inputs };
  }

  it('is cancelled by its number, keeps nothing, and can be asked for again', async () => {
    const { window, inputs } = await withLarge();
    const { job, planId } = taken(await window.ask('plan.add', { name: 'Main', plan: plan('per-size'), inputs }));
    const asked = performance.now();
    expect(taken(await window.ask('job.cancel', { job }))).toBeNull();
    expect(codesOf((await window.doneOf(job)).outcome)).toEqual(['cancelled']);
    expect(performance.now() - asked).toBeLessThan(1000);
    expect(taken(await window.ask('fit.latest', { planId }))).toEqual({ result: null, before: null });
    expect(taken(await window.ask('job.cancel', { job }))).toBeNull();
    const again = taken(await window.ask('fit.ask', { planId }));
    expect((await window.resultOf(again.job)).data.used).toBe(8000);
    expect(window.told.filter((one) => one.kind === 'done' && one.job === job)).toHaveLength(1);
  });

  it('is cancelled by a newer change of the same plan, whose fit alone is kept', async () => {
    const { window, inputs } = await withLarge();
    const first = taken(await window.ask('plan.add', { name: 'Main', plan: plan('per-size'), inputs }));
    const { planId } = first;
    const change = (part: object) =>
      window.ask('plan.change', {
        planId,
        action: 'structure',
        plan: { ...plan('constant'), variance: { parts: [part] } },
        inputs: null,
      });
    const second = taken(await change({ kind: 'size-power', exponent: 0.5 }));
    const third = taken(await change({ kind: 'constant' }));
    for (const { job } of [first, second]) expect(codesOf((await window.doneOf(job)).outcome)).toEqual(['cancelled']);
    const result = await window.resultOf(third.job);
    expect(taken(await window.ask('fit.latest', { planId }))).toEqual({ result, before: null });
    const kept = taken(await window.ask('trail.read', {})).entries.filter(({ action }) => action === 'fit-kept');
    expect(kept).toHaveLength(1);
  });

  it('is cancelled by an undo of its change; a fit that is tried is cancelled by a newer one alone', async () => {
    const { window, inputs } = await withLarge();
    const tried = taken(await window.ask('fit.try', { plan: plan('per-size'), inputs }));
    const added = taken(await window.ask('plan.add', { name: 'Main', plan: plan('per-size'), inputs }));
    await window.ask('plan.undo', {});
    expect(codesOf((await window.doneOf(added.job)).outcome)).toEqual(['cancelled']);
    const newer = taken(await window.ask('fit.try', { plan: plan('constant'), inputs }));
    expect(codesOf((await window.doneOf(tried.job)).outcome)).toEqual(['cancelled']);
    expect(await window.doneOf(newer.job)).toMatchObject({ planId: null, outcome: { ok: true } });
    expect(taken(await window.ask('trail.read', {})).entries.some(({ action }) => action === 'fit-kept')).toBe(false);
  });

  it('whose project is gone when it ends is shown all the same, with the reason why it could not be kept', async () => {
    const { window, inputs } = await withLarge();
    const { job, planId } = taken(await window.ask('plan.add', { name: 'Main', plan: plan('per-size'), inputs }));
    const { file } = taken(await window.ask('project.look', {})) as { file: string };
    rmSync(file);
    const { outcome, unkept } = await window.doneOf(job);
    expect([outcome.ok, unkept?.map(({ code }) => code)]).toEqual([true, ['project-gone']]);
    expect(taken(await window.ask('fit.latest', { planId })).result?.data.used).toBe(8000);
    window.choose(join(folder(), 'saved.steelyard'));
    expect(taken(await window.ask('project.save-as', {}))).toMatchObject({ name: 'saved', plans: [{ planId }] });
  });

  it('ends cleanly when its window closes: everything accepted is in the file', async () => {
    const { window, inputs } = await withLarge();
    const { job } = taken(await window.ask('plan.add', { name: 'Main', plan: plan('per-size'), inputs }));
    const { file } = taken(await window.ask('project.look', {})) as { file: string };
    await window.close();
    expect(codesOf((await window.doneOf(job)).outcome)).toEqual(['cancelled']);
    const next = openWindow({ profile: window.profile });
    const look = taken(await next.ask('project.open', { file }));
    expect(look?.plans).toHaveLength(1);
    expect(taken(await next.ask('trail.read', {})).problems).toEqual([]);
  });

  it('leaves the short questions their turn before it when it waits', async () => {
    const { window, inputs } = await withLarge();
    const running = taken(await window.ask('fit.try', { plan: plan('per-size'), inputs }));
    const waiting = taken(await window.ask('plan.add', { name: 'Main', plan: plan('constant'), inputs }));
    const look = window.ask('data.look', { plan: plan('per-size'), inputs });
    const first = await Promise.race([look.then(() => 'look'), window.doneOf(waiting.job).then(() => 'fit')]);
    expect(first).toBe('look');
    await window.doneOf(running.job);
  });
});
