import type { Plan } from '@core/protocol/plan';
import type { Cells } from '@core/table/cells';
import { cellsFrom, loadCase, planOf } from '../support/case';

/** The plan of a case with the roles of the small tables below: outcome y, size n, error se. */
export function smallPlan(change: Partial<Plan> = {}): Plan {
  const of = loadCase('hand-per-size');
  const [fit] = of.fits;
  if (!fit) throw new Error('the case has no fit');
  const plan = planOf(of, fit);
  return { ...plan, roles: { ...plan.roles, label: null, outcome: 'y', size: 'n', error: 'se' }, ...change };
}

export function smallCells(csv: string, change: Partial<Plan> = {}): Cells {
  return cellsFrom(csv, smallPlan(change));
}
