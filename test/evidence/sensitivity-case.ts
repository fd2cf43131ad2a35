import { independent } from '@core/algebra/covariance';
import { fitStructure } from '@core/estimate/fit';
import type { Fitted } from '@core/estimate/fitted';
import { judgeOf } from '@core/evidence/judge';
import type { RivalFit } from '@core/inference/fits';
import { designOf } from '@core/model/design';
import { learnTerms } from '@core/model/learn-terms';
import { structureOf, varianceOf } from '@core/model/structure-of';
import type { Outcome } from '@core/protocol/outcome';
import type { Estimate, Plan, Rival } from '@core/protocol/plan';
import type { Cells } from '@core/table/cells';
import { type CaseFit, cellsFrom, cellsOf, loadCase, planOf, type ReferenceCase } from '../support/case';

export interface FittedCase {
  readonly of: ReferenceCase;
  readonly plan: Plan;
  readonly cells: Cells;
  readonly fitted: Fitted;
}

export function open<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

export function fittedCase(id: string, fit: string): FittedCase {
  const of = loadCase(id);
  const spec = of.fits.find((one) => one.fit === fit) as CaseFit;
  const plan = planOf(of, spec);
  const cells = cellsOf(id, plan);
  return { of, plan, cells, fitted: fittedPlan(plan, cells) };
}

/** A comma-separated table under changes of a case's plan. */
export function fittedTable(csv: string, plan: Plan): Omit<FittedCase, 'of'> {
  const cells = cellsFrom(csv, plan);
  return { plan, cells, fitted: fittedPlan(plan, cells) };
}

export function fittedPlan(plan: Plan, cells: Cells): Fitted {
  const known = open(learnTerms({ terms: plan.terms, intercept: plan.intercept, cells }));
  const design = open(designOf(known, cells));
  const structure = open(structureOf({ variance: plan.variance, cells }));
  const weighting = plan.target === 'cells' ? independent(new Float64Array(cells.count).fill(1)) : null;
  return open(fitStructure({ response: cells.outcome, design, structure, estimate: plan.estimate, weighting }));
}

export function rivalsOf(
  { plan, cells, fitted }: Omit<FittedCase, 'of'>,
  rivals: readonly Rival[] = plan.beside,
): RivalFit[] {
  return rivals.map((rival): RivalFit => {
    const variance = varianceOf(rival);
    const structure = open(structureOf({ variance, cells }));
    const known = structure.parameters.length === 0 || structure.commonScale;
    const estimate: Estimate = known ? { method: 'least-squares' } : plan.estimate;
    const beside = open(fitStructure({ response: fitted.response, design: fitted.design, structure, estimate }));
    const coefficients = judgeOf(cells, {
      ...plan,
      variance,
      target: 'structure',
      inference: { kind: 'model', level: 0.95 },
    })(beside, null);
    return {
      rival,
      fitted: beside,
      parameters: [],
      coefficients: [...(coefficients ?? [])],
      logLikelihood: null,
      restrictedLogLikelihood: null,
    };
  });
}

/** |found - expected| as a share of expected, absolute where that is 0. */
export function apart(found: number, expected: number): number {
  return expected === 0 ? Math.abs(found) : Math.abs(found / expected - 1);
}
