import { independent } from '../algebra/covariance';
import { errorOf } from '../algebra/factored';
import { leastSquares } from '../algebra/least-squares';
import { pullsOf } from '../estimate/fit-at';
import type { Design } from '../model/design';
import type { Decimals } from '../numbers/decimals';
import { fUpper } from '../numbers/distributions';
import { sum, sumOfSquares } from '../numbers/sums';
import type { Plan } from '../protocol/plan';
import type { IndividualLevel } from '../protocol/result';
import type { Cells } from '../table/cells';
import { coefficientsOf } from './coefficients';
import { numberOrNull, studentOn } from './reference';

/**
 * What least squares on the respondents themselves would give, from cell means, sizes and within-cell deviations: not an approximation.
 *
 *     b = (X'NX)^-1 X'N y,  RSS = sum n (y - x'b)^2 + sum (n - 1) s^2,  Var(b) = RSS / (P - k) (X'NX)^-1,  P = sum n
 *     R^2 = 1 - RSS / (sum n (y - ybar)^2 + sum (n - 1) s^2)
 *     F = [sum n (y - x'b)^2 / (G - k)] / [sum (n - 1) s^2 / (P - G)] on (G - k, P - G)
 *
 * N = diag(n), n the sizes and not the effective ones; s: deviation inside the cell with divisor n - 1. Every person has the same variance around the terms, and
 * persons are independent: where cells differ beyond the terms its errors are too small (Moulton 1990), which F, the lack of fit, tells.
 * t with P - k. R^2 without an intercept is from 0. Null without the role `withinSd`, on another outcome scale than identity (means of logs cannot be had from it), with
 * a size below 1, and without a person to spare. F is null with G = k, without spread inside any cell, or with one person a cell.
 *
 * Example: two cells, means 1 and 3, four persons and a deviation of 1 each: the mean is 2 with error root(22 / 7 / 8).
 * Source: Prais & Aitchison 1954; PRACTICE of the program, 7.
 */
export function individualLevelOf(of: {
  readonly plan: Plan;
  readonly cells: Cells;
  readonly design: Design;
  readonly response: Decimals;
}): IndividualLevel | null {
  const { plan, cells, design, response } = of;
  const { size } = cells;
  if (plan.roles.withinSd === null || !size || plan.outcomeScale !== 'identity') return null;
  const within = cells.numbers(plan.roles.withinSd).values.high;
  const persons = sum(size);
  const k = design.columns.length;
  const residualFreedom = persons - k;
  if (!size.every((n) => n >= 1) || !within.every((s) => s >= 0) || !(residualFreedom > 0)) return null;
  const variances = size.map((n) => 1 / n);
  const solved = leastSquares({ columns: design.columns, y: response, variances });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  const between = sumOfSquares(solved.whitened);
  const inside = sumOfSquares(within.map((s, g) => s * Math.sqrt((size[g] as number) - 1)));
  const scale = (between + inside) / residualFreedom;
  const omega = independent(variances.map((v) => v * scale));
  const pulls = pullsOf(solved, independent(variances));
  const reference = studentOn(residualFreedom);
  return {
    coefficients: coefficientsOf({
      names: design.names,
      estimates: solved.solution,
      errors: pulls.map((pull) => numberOrNull(errorOf(pull, omega))),
      references: design.names.map(() => reference),
      level: plan.inference.level,
    }),
    persons,
    residualFreedom,
    residualSd: numberOrNull(Math.sqrt(scale)),
    rSquared: rSquaredOf({ response, size, centred: design.intercept, left: between + inside, inside }),
    withinSd: persons > cells.count ? numberOrNull(Math.sqrt(inside / (persons - cells.count))) : null,
    lackOfFit: lackOfFitOf({ between, inside, freedom1: cells.count - k, freedom2: persons - cells.count }),
  };
}

function rSquaredOf(of: {
  readonly response: Decimals;
  readonly size: Float64Array;
  readonly centred: boolean;
  readonly left: number;
  readonly inside: number;
}): number | null {
  const { response, size, centred, left, inside } = of;
  const origin = response.high[0] ?? 0;
  const mean = centred ? origin + sum(size.map((n, g) => n * ((response.high[g] as number) - origin))) / sum(size) : 0;
  const apart = sumOfSquares(response.high.map((y, g) => (y - mean) * Math.sqrt(size[g] as number)));
  const total = apart + inside;
  return total > 0 ? numberOrNull(1 - left / total) : null;
}

function lackOfFitOf(of: {
  readonly between: number;
  readonly inside: number;
  readonly freedom1: number;
  readonly freedom2: number;
}): IndividualLevel['lackOfFit'] {
  const { between, inside, freedom1, freedom2 } = of;
  if (!(freedom1 > 0 && freedom2 > 0 && inside > 0)) return null;
  const statistic = between / freedom1 / (inside / freedom2);
  if (!Number.isFinite(statistic)) return null;
  return { statistic, freedom1, freedom2, p: fUpper(statistic, freedom1, freedom2) };
}
