import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import { type Fetch, fromFolder } from '@main/engine/inputs';
import { runText } from '@main/engine/run-plan';
import { type CaseFit, caseFile, type Expected, planOf, type ReferenceCase } from '../support/case';
import { valueOf as ofEvidence } from './quantities-evidence';
import { valueOf as ofInference, questionsOfCase } from './quantities-inference';
import { valueOf as ofSensitivity } from './quantities-sensitivity';

/** Cases that are a plan on cells; the tables of tails belong to test/numbers. */
export const caseNames = readdirSync(join(import.meta.dirname, 'cases')).filter((id) => id !== 'distribution-tails');

/** A case's fit as a plan file would hold it: everything that the case expects is asked for. */
export function wholePlanOf(of: ReferenceCase, fit: CaseFit): Plan {
  const plan = asPriced(of, fit) ?? planOf(of, fit);
  const { block, time, response } = of.roles;
  const ordered = fit.spec.order !== undefined && block && time && response;
  const derive: Plan['data']['derive'] = ordered
    ? [{ name: 'the cell before', as: 'lag', of: response, by: [block], order: time, steps: 1 }]
    : [];
  return { ...plan, data: { ...plan.data, derive }, questions: questionsOfCase(of, plan) };
}

/** An unweighted fit that a case prices under its given matrix: equal weights on that truth, and the unweighted fit beside it. */
function asPriced(of: ReferenceCase, fit: CaseFit): Plan | null {
  const priced = of.expected.some((one) => one.fit === fit.fit && one.quantity.startsWith('actual_standard_error:'));
  const truth = of.fits.find(({ spec }) => spec.link.kind === 'matrix' && spec.link.scale === 'fixed');
  return priced && truth ? { ...planOf(of, truth), target: 'cells', beside: ['constant'] } : null;
}

/** The files of a case; a matrix, which stands there without labels, in the labelled form that a plan's matrix has. */
function filesOf(of: ReferenceCase): Fetch {
  const beside = fromFolder(join(caseFile(of.id), '..'));
  return (file, at) => {
    const fetched = beside(file, at);
    if (!fetched.ok || file !== of.roles.matrix) return fetched;
    const [, ...rows] = readFileSync(caseFile(of.id), 'utf8').trim().split(/\r?\n/);
    const labels = rows.map((row, g) => (of.roles.label ? (row.split(',')[0] as string) : String(g + 1)));
    const lines = new TextDecoder().decode(fetched.value).trim().split(/\r?\n/);
    const text = [['', ...labels].join(','), ...lines.map((line, g) => `${labels[g]},${line}`)].join('\n');
    return { ok: true, value: new TextEncoder().encode(text) };
  };
}

/** From the case's bytes through every room, as the command line goes. */
export function runCase(of: ReferenceCase, fit: CaseFit): Outcome<Result> {
  const run = runText({ text: JSON.stringify(wholePlanOf(of, fit)), fetch: filesOf(of) });
  return run.ok ? { ok: true, value: run.value.result } : run;
}

/** The result's value of a reference quantity; undefined where no map knows it. */
export function foundIn(result: Result, quantity: string): number | null | undefined {
  const context = { plan: result.plan, terms: result.fit.coefficients.map(({ term }) => term) };
  const inference = ofInference(quantity, result);
  if (inference !== undefined) return inference;
  const sensitivity = ofSensitivity(quantity, result, context);
  return sensitivity !== undefined ? sensitivity : ofEvidence(quantity, result.evidence);
}

/** Relative distance, absolute where the outside value is 0; 0 where both are null, infinite where one is. */
export function distance(found: number | null | undefined, { value }: Expected): number {
  if (value === null || found === null || found === undefined) return found === value ? 0 : Number.POSITIVE_INFINITY;
  return value === 0 ? Math.abs(found) : Math.abs(found / value - 1);
}

/** What a quantity must agree to: p values and all that hangs on a likelihood 1e-7, linear algebra 1e-10; never closer than the reference trusts itself. */
export function tolerance(result: Result, { quantity, digits, value }: Expected): number {
  if (value === 0) return 1e-12;
  const { method } = result.fit.estimate;
  const byLikelihood = result.fit.variance.some(({ name, fixed }) => !fixed && name !== 'phi') || method === 'two-step';
  const isP = /(^|:)(p|p_value|p_holm|f_p|wald_p|q_p|p_value_normal)(:|$)|_p$/.test(quantity);
  return Math.max(byLikelihood || isP ? 1e-7 : 1e-10, 10 ** -digits);
}
