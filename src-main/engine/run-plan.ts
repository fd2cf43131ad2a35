import { readFileSync } from 'node:fs';
import { dirname, resolve } from 'node:path';
import { analyse } from '@core/analyse';
import { checkModel, prepareCells, readPlan } from '@core/index';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import type { Hooks, SourceTable } from '@core/protocol/source';
import { type Fetch, fromFolder, gather, type Input } from './inputs';
import { useKernels } from './kernels';

/** A plan with all that its fit took and gave. */
export interface Run {
  readonly plan: Plan;
  readonly inputs: readonly Input[];
  readonly result: Result;
}

export const unhurried: Hooks = { cancelled: () => false, progress: () => {} };

/** The text of a plan file. Refuses a file that is not there or cannot be read. */
export function readPlanFile(file: string): Outcome<string> {
  const fetched = fromFolder(process.cwd())(resolve(file), '');
  if (!fetched.ok)
    return {
      ok: false,
      problems: fetched.problems.map((p) => ({ ...p, at: null, facts: { ...p.facts, file } }) as never),
    };
  return done(new TextDecoder().decode(fetched.value));
}

/** From the plan's text and its files to the result: form, data, model, fit. Each stage refuses all it finds before the next begins. */
export function runText(ask: { readonly text: string; readonly fetch: Fetch; readonly hooks?: Hooks }): Outcome<Run> {
  const hooks = ask.hooks ?? unhurried;
  const plan = readPlan(ask.text);
  if (!plan.ok) return plan;
  hooks.progress('read', 0);
  const { inputs, sources } = gather(plan.value, ask.fetch);
  const result = fitSources({ plan: plan.value, sources, hooks });
  return result.ok ? done({ plan: plan.value, inputs, result: result.value }) : result;
}

/** From a plan in its normal form and its tables to the result: data, model, fit. */
export function fitSources(of: {
  readonly plan: Plan;
  readonly sources: ReadonlyMap<string, Outcome<SourceTable>>;
  readonly hooks: Hooks;
}): Outcome<Result> {
  const cells = prepareCells(of);
  if (!cells.ok) return cells;
  useKernels(cells.value.count);
  const result = analyse({ plan: of.plan, cells: cells.value, hooks: of.hooks });
  return result.ok && of.hooks.cancelled() ? refuse('cancelled', {}) : result;
}

/** Everything short of the fit: the normal form, or every refusal of the first stage that has any. */
export function checkText(text: string, fetch: Fetch): Outcome<Plan> {
  const plan = readPlan(text);
  if (!plan.ok) return plan;
  const { sources } = gather(plan.value, fetch);
  const cells = prepareCells({ plan: plan.value, sources });
  if (!cells.ok) return cells;
  const model = checkModel({ plan: plan.value, cells: cells.value });
  return model.ok ? done(plan.value) : model;
}

/** Runs a plan file with the files beside it. */
export async function runPlan(ask: { readonly planFile: string; readonly hooks?: Hooks }): Promise<Outcome<Run>> {
  const text = readPlanFile(ask.planFile);
  if (!text.ok) return text;
  const fetch = fromFolder(dirname(resolve(ask.planFile)));
  return runText({ text: text.value, fetch, ...(ask.hooks ? { hooks: ask.hooks } : {}) });
}

/** The name of this version, from the package that it was built of. */
export function versionOf(root: string): string {
  return (JSON.parse(readFileSync(resolve(root, 'package.json'), 'utf8')) as { version: string }).version;
}
