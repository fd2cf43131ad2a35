import { leastSquares } from '../algebra/least-squares';
import { leveragesOf } from '../algebra/orthonormal';
import type { Design } from '../model/design';
import { fromDoubles } from '../numbers/decimals';
import type { Plan } from '../protocol/plan';
import type { Problem } from '../protocol/problems';
import { checkLeverage } from './robust';

/**
 * Whether HC2 to HC4 can be had at all, before anything is fitted: a leverage of exactly 1 is the design's, whatever the weights.
 *
 * design: of full rank, as `designOf` gives it. Problems as `checkLeverage` raises them (`leverage-one`, the cells named).
 */
export function checkLeverageOf(known: {
  readonly plan: Pick<Plan, 'inference'>;
  readonly design: Design;
  readonly labels: readonly string[];
}): Problem[] {
  const { plan, design, labels } = known;
  if (plan.inference.kind !== 'robust') return [];
  const y = fromDoubles(new Float64Array(labels.length));
  const solved = leastSquares({ columns: design.columns, y, variances: null });
  if ('dependent' in solved) throw new RangeError('the design was not checked');
  const residualFreedom = labels.length - design.columns.length;
  return checkLeverage({ plan, labels, residualFreedom, leverages: leveragesOf(solved.basis, labels.length) });
}
