import { type Covariance, independent } from '@core/algebra/covariance';
import { fitStructure } from '@core/estimate/fit';
import type { Fitted } from '@core/estimate/fitted';
import { designOf } from '@core/model/design';
import { learnTerms } from '@core/model/learn-terms';
import { structureOf } from '@core/model/structure-of';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Cells } from '@core/table/cells';
import { type CaseFit, cellsOf, loadCase, planOf, type ReferenceCase } from '../support/case';

export function open<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

/** A target's weighting, as the whole path makes it: persons 1/n, cells 1, a structure of its own at known parameters. */
function weightingOf(plan: Plan, cells: Cells): Covariance | 'diagonal' | null {
  if (plan.target === 'structure') return null;
  if (plan.target === 'cells') return independent(new Float64Array(cells.count).fill(1));
  if (plan.target === 'persons') return independent((cells.size as Float64Array).map((n) => 1 / n));
  if (plan.target === 'diagonal') return 'diagonal';
  return independent(open(structureOf({ variance: plan.target, cells, at: '/target' })).sampling);
}

/** Fits a plan on cells, from terms to coefficients. */
export function fitPlan(plan: Plan, cells: Cells): Fitted {
  const { terms, intercept, variance, estimate } = plan;
  const known = open(learnTerms({ terms, intercept, cells }));
  const design = open(designOf(known, cells));
  const structure = open(structureOf({ variance, cells }));
  const weighting = weightingOf(plan, cells);
  return open(fitStructure({ response: cells.outcome, design, structure, estimate, weighting }));
}

/** Fits one fit of a reference case; fixed: variance parameters set on top of the case's own. */
export function fitCase(
  id: string,
  name: string,
  fixed: Plan['variance']['fixed'] = {},
): { of: ReferenceCase; fit: CaseFit; fitted: Fitted; cells: Cells } {
  const of = loadCase(id);
  const fit = of.fits.find((f) => f.fit === name) as CaseFit;
  const written = planOf(of, fit);
  const plan = { ...written, variance: { ...written.variance, fixed: { ...written.variance.fixed, ...fixed } } };
  const cells = cellsOf(id, plan);
  return { of, fit, fitted: fitPlan(plan, cells), cells };
}
