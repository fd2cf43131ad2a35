import { fitStructure } from '@core/estimate/fit';
import type { Fitted } from '@core/estimate/fitted';
import { structureEvidence } from '@core/evidence/structure-evidence';
import type { Design } from '@core/model/design';
import { designOf } from '@core/model/design';
import { learnTerms } from '@core/model/learn-terms';
import { structureOf } from '@core/model/structure-of';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Evidence } from '@core/protocol/result';
import type { Cells } from '@core/table/cells';
import { cellsOf, loadCase, planOf } from '../support/case';

export interface FittedCase {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly design: Design;
}

/** A fit of a reference case. */
export function fittedCase(id: string, name: string, change: (plan: Plan) => Plan = (plan) => plan): FittedCase {
  const of = loadCase(id);
  const found = of.fits.find(({ fit }) => fit === name);
  if (!found) throw new Error(`${id} has no fit ${name}`);
  const plan = change(planOf(of, found));
  return fitPlan(plan, cellsOf(id, plan));
}

/** The fit that a plan asks for, weighted by its structure. */
export function fitPlan(plan: Plan, cells: Cells): FittedCase {
  const known = took(learnTerms({ terms: plan.terms, intercept: plan.intercept, cells }));
  const design = took(designOf(known, cells));
  const structure = took(structureOf({ variance: plan.variance, cells, at: '/variance' }));
  const fitted = took(fitStructure({ response: cells.outcome, design, structure, estimate: plan.estimate }));
  return { fitted, cells, plan, design };
}

export function evidenceFor(id: string, name: string, change?: (plan: Plan) => Plan): Evidence[] {
  return structureEvidence(fittedCase(id, name, change));
}

export function took<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}
