import type { Fitted } from '../estimate/fitted';
import { sortedIndices } from '../numbers/order';
import { dot, sum } from '../numbers/sums';
import type { Beam, Interval } from '../protocol/result';
import { concentrationOf } from './cell-results';
import { heldFit } from './held';
import type { Judge } from './judge';
import { placesWithout } from './subset';

/**
 * Each cell's pull on each coefficient, what it contributes, and the coefficient without the heaviest cells.
 *
 *     b_j = sum_g C_jg y_g,  contribution_g = C_jg (y_g - c),  c = sum w y / sum w,  w = A^-1 1
 *
 * Pulls in units of coefficient over outcome; contributions in the coefficient's unit, from the fitted mean, since a pull on a raw observation
 * depends on where zero is. They are null for the intercept and without one. heaviest: the fewest cells that carry half of sum abs(pull), deleted
 * together with the variance parameters held; change is null where the others cannot carry the terms.
 *
 * Example: in a mean of cells weighted 3, 1, 1, 1 the first alone carries half.
 * Source: METHODS of the program, 5.
 */
export function beamOf(of: {
  readonly fitted: Fitted;
  readonly labels: readonly string[];
  readonly judge: Judge;
}): Beam[] {
  const { fitted, labels, judge } = of;
  const mean = fitted.design.intercept ? weightedMean(fitted) : null;
  return fitted.design.names.map((term, j): Beam => {
    const pulls = fitted.pulls[j] as Float64Array;
    const heaviest = heaviestOf(pulls);
    const centred = mean !== null && fitted.design.termOf[j] !== -1;
    return {
      term,
      pulls: Array.from(pulls),
      contributions: centred ? Array.from(pulls, (c, g) => c * ((fitted.response.high[g] as number) - mean)) : null,
      heaviest: {
        cells: heaviest.map((g) => labels[g] as string),
        change: without({ fitted, gone: heaviest, j, judge }),
      },
    };
  });
}

/** The mean that the estimator's weights give the observations. */
function weightedMean({ weighting, response }: Fitted): number {
  return dot(concentrationOf(weighting).shares, response.high);
}

/** Places of the fewest cells that carry half of the total absolute pull, heaviest first. */
export function heaviestOf(pulls: Float64Array): number[] {
  const sizes = pulls.map((c) => Math.abs(c));
  const half = sum(sizes) / 2;
  const order = sortedIndices(sizes.map((size) => -size));
  let carried = 0;
  let count = 0;
  while (count < order.length && carried < half) carried += sizes[order[count++] as number] as number;
  return order.slice(0, count);
}

function without(of: { fitted: Fitted; gone: readonly number[]; j: number; judge: Judge }): Interval | null {
  const rows = placesWithout(of.fitted.whitened.length, new Set(of.gone));
  const left = heldFit(of.fitted, rows);
  const own = left && of.judge(left, rows)?.[of.j];
  return own ? { estimate: own.estimate, low: own.low, high: own.high } : null;
}
