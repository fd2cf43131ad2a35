import type { NamedInput } from '@core/protocol/bridge';
import { done, type Outcome } from '@core/protocol/outcome';
import { firstPlanName } from '@core/words/screen-files';
import type { HandlersOf } from './answer';
import { beginFit } from './fits';
import { type OpenProject, planOf } from './open-project';
import { inputsOf, planIn, said } from './plan-in';
import type { WindowState } from './window-state';

type Questions = 'plan.add' | 'plan.change' | 'plan.rename' | 'plan.undo' | 'plan.redo' | 'draft.keep';

export function planHandlers(state: WindowState): HandlersOf<Questions> {
  return {
    'plan.add': (ask) => add(state, ask),
    'plan.change': (ask) => changePlan(state, ask),
    'plan.rename': ({ planId, name }) =>
      state.changed(({ project }) => {
        const called = said(name, 'name');
        return called.ok ? project.renamePlan({ planId, name: called.value }) : called;
      }),
    'plan.undo': () => goBack(state, 'undo'),
    'plan.redo': () => goBack(state, 'redo'),
    'draft.keep': ({ text }) =>
      state.changed(({ project }) => project.keepDraft({ text, bytesOf: (sha256) => state.taken.bytesOf(sha256) })),
  };
}

async function add(
  state: WindowState,
  {
    name,
    plan,
    inputs: given,
  }: { readonly name: string; readonly plan: unknown; readonly inputs: readonly NamedInput[] },
) {
  const read = planIn(plan);
  if (!read.ok) return read;
  const inputs = inputsOf(state, read.value.plan, { given, before: [] });
  if (!inputs.ok) return inputs;
  const added = await state.changing((open) =>
    withFiles(state, open, inputs.value, () =>
      open.project.addPlan({
        name: name.trim() || read.value.plan.title.trim() || firstPlanName,
        plan: read.value.plan,
        inputs: inputs.value,
      }),
    ),
  );
  if (!added.ok) return added;
  const planId = added.value;
  const job = beginFit(state, planId);
  const project = await state.look();
  return project.ok ? done({ planId, job, project: project.value }) : project;
}

async function changePlan(
  state: WindowState,
  ask: {
    readonly planId: number;
    readonly action: string;
    readonly plan: unknown;
    readonly inputs: readonly NamedInput[] | null;
  },
) {
  const { planId } = ask;
  const read = planIn(ask.plan);
  if (!read.ok) return read;
  const { plan } = read.value;
  const changed = await state.changing((open) => {
    const now = planOf(open, planId);
    if (!now.ok) return now;
    const inputs = inputsOf(state, plan, { given: ask.inputs ?? [], before: now.value.inputs });
    if (!inputs.ok) return inputs;
    if (now.value.plan === read.value.text && sameFiles(now.value.inputs, inputs.value)) return done(null);
    const action = ask.action.trim() || 'change-plan';
    return withFiles(state, open, inputs.value, () =>
      open.project.changePlan({ planId, action, plan, inputs: inputs.value }),
    );
  });
  if (!changed.ok) return changed;
  const job = beginFit(state, planId);
  const project = await state.look();
  return project.ok ? done({ job, project: project.value }) : project;
}

function sameFiles(before: readonly NamedInput[], now: readonly NamedInput[]): boolean {
  const hashes = new Map(before.map(({ name, sha256 }) => [name, sha256]));
  return hashes.size === now.length && now.every(({ name, sha256 }) => hashes.get(name) === sha256);
}

/** A change of a plan together with the files that it needs: all of it, or nothing. */
function withFiles<T>(
  state: WindowState,
  { project }: OpenProject,
  inputs: readonly NamedInput[],
  change: () => Outcome<T>,
): Promise<Outcome<T>> {
  return project.together(async () => {
    for (const { sha256 } of inputs) {
      const bytes = project.hasInput(sha256) ? null : state.bytesOf(sha256);
      const kept = bytes === null ? done(sha256) : project.keepInput(bytes);
      if (!kept.ok) return kept;
    }
    return change();
  });
}

/** Fits under way of what was taken back are of no use any more. */
function goBack(state: WindowState, way: 'undo' | 'redo') {
  return state.changed(({ project }) => {
    const before = new Map(project.plans().map(({ planId, stateId }) => [planId, stateId]));
    const gone = project[way]();
    if (!gone.ok) return gone;
    const after = new Map(project.plans().map(({ planId, stateId }) => [planId, stateId]));
    for (const [planId, stateId] of before) if (after.get(planId) !== stateId) state.jobs.cancelFor(planId);
    return gone;
  });
}
