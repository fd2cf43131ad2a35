import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { How } from '../engine/engine';
import type { KeptPlan } from '../project/plans';
import type { HandlersOf } from './answer';
import type { Ended } from './jobs';
import { type OpenProject, planOf, type Shown } from './open-project';
import { atHand, planIn } from './plan-in';
import type { WindowState } from './window-state';

export function fitHandlers(state: WindowState): HandlersOf<'fit.ask' | 'fit.try' | 'fit.latest' | 'job.cancel'> {
  return {
    'fit.ask': ({ planId }) =>
      state.reading((open) => {
        const plan = planOf(open, planId);
        return plan.ok ? done({ job: beginFit(state, planId) }) : plan;
      }),
    'fit.try': async ({ plan, inputs }) => {
      const read = planIn(plan);
      if (!read.ok) return read;
      const ask = { plan: read.value.text, inputs: atHand(state, inputs) };
      return done({
        job: state.jobs.begin(null, async (how) => ({ outcome: await state.engine.ask('run', ask, how) })),
      });
    },
    'fit.latest': ({ planId }) =>
      state.reading((open) => {
        const plan = planOf(open, planId);
        if (!plan.ok) return plan;
        const now = knownFit(state, open, plan.value);
        if (now !== null) show(open, planId, now);
        const before = fitBefore(open, plan.value);
        return done({ result: now?.text ?? null, before });
      }),
    'job.cancel': async ({ job }) => {
      state.jobs.cancel(job);
      return done(null);
    },
  };
}

/** Begins to fit a plan as it stands; the job's number. */
export function beginFit(state: WindowState, planId: number): number {
  return state.jobs.begin(planId, async (how): Promise<Ended> => {
    const fitted = await fittedText(state, planId, how);
    if (!fitted.ok) return { outcome: fitted };
    const { text, unkept } = fitted.value;
    const outcome = done(text);
    return unkept === undefined ? { outcome } : { outcome, unkept };
  });
}

interface Fitted extends Shown {
  /** Why it could not be kept, if so. */
  readonly unkept?: Ended['unkept'];
}

/** The fit of a plan as it stands, made and kept unless it is known. Refusals: those of the fit; `cancelled` where the plan changed meanwhile. */
export async function fittedText(state: WindowState, planId: number, how: How = {}): Promise<Outcome<Fitted>> {
  const standing = await state.reading((open) => {
    const plan = planOf(open, planId);
    return plan.ok ? done({ open, plan: plan.value }) : plan;
  });
  if (!standing.ok) return standing;
  const { open, plan } = standing.value;
  const known = knownFit(state, open, plan);
  if (known !== null) {
    show(open, planId, known);
    return done(known);
  }
  const text = await state.engine.ask('run', { plan: plan.plan, inputs: plan.inputs }, how);
  if (!text.ok) return text;
  const fitted = { stateId: plan.stateId, text: text.value };
  if (open.readonly) {
    show(open, planId, fitted);
    return done(fitted);
  }
  const kept = await state.changing((now) => {
    const isStill = now === open && !how.signal?.aborted && standsAt(now, planId, plan.stateId);
    return isStill ? now.project.keepFit({ planId, result: text.value }) : refuse('cancelled', {});
  });
  if (!kept.ok && kept.problems.some(({ code }) => code === 'cancelled' || code === 'nothing-open')) return kept;
  show(open, planId, fitted);
  return done(kept.ok ? fitted : { ...fitted, unkept: kept.problems });
}

function standsAt(open: OpenProject, planId: number, stateId: number): boolean {
  const plan = planOf(open, planId);
  return plan.ok && plan.value.stateId === stateId;
}

/** The fit of a plan as it stands, made by this version and at hand; null where it is still to be made. */
function knownFit(state: WindowState, open: OpenProject, { planId, stateId }: KeptPlan): Shown | null {
  const now = open.shown.get(planId)?.now;
  if (now?.stateId === stateId) return now;
  const kept = open.project.fitsOf(planId).find((one) => one.stateId === stateId && one.version === state.desk.version);
  const text = kept === undefined ? null : open.project.fitText(kept.fit);
  return text === null ? null : { stateId, text };
}

/** What is shown of a plan from here on; a fit of another state than the one shown becomes the one before. */
function show(open: OpenProject, planId: number, now: Shown): void {
  const last = open.shown.get(planId);
  const before = last?.now.stateId === now.stateId ? last.before : (last?.now ?? null);
  open.shown.set(planId, { now, before });
}

/** The fit that was shown before that of the plan as it stands; in a project opened anew, the last one of another state. */
function fitBefore({ project, shown }: OpenProject, { planId, stateId }: KeptPlan): string | null {
  const last = shown.get(planId);
  if (last !== undefined && last.now.stateId !== stateId) return last.now.text;
  if (last?.before) return last.before.text;
  const kept = project.fitsOf(planId).find((one) => one.stateId !== stateId);
  return kept === undefined ? null : project.fitText(kept.fit);
}
