import { faultsIn } from './faults';
import { done, type Outcome, problem, refuseAll } from './outcome';
import type { Plan } from './plan';
import { checkFormat, normalPlan } from './read';
import type { Result } from './result';
import { resultSchema } from './result-schema';

/**
 * A value as a result, for one that was stored: its shape is checked throughout, its plan as a plan in the normal form.
 *
 * Refuses with every departure, the plan's own under `/plan`. A plan that is valid but not in its normal form is of the wrong format.
 */
export function validateResult(value: unknown): Outcome<Result> {
  const alien = checkFormat(value, 'steelyard-result/1');
  if (alien.length > 0) return refuseAll(alien);
  const faults = faultsIn(resultSchema, value);
  if (faults.length > 0) return refuseAll(faults);
  const result = value as Result;
  const plan = normalPlan(result.plan);
  if (!plan.ok) return refuseAll(plan.problems.map((one) => ({ ...one, at: `/plan${one.at ?? ''}` })));
  if (isNormal(result.plan, plan.value)) return done(result);
  const expected = `${plan.value.format}, every default written out`;
  return refuseAll([problem('wrong-format', { found: plan.value.format, expected }, '/plan')]);
}

/** Equal to the last key: its text is what normalising gives. */
function isNormal(plan: Plan, normal: Plan): boolean {
  return JSON.stringify(plan) === JSON.stringify(normal);
}
