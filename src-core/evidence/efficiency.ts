import { timesFactor } from '../algebra/covariance';
import { factored } from '../algebra/factored';
import { reflectAll } from '../algebra/householder';
import { largestOf } from '../algebra/powers-of-two';
import type { Fitted } from '../estimate/fitted';
import { exp, log } from '../numbers/elementary';
import { sum } from '../numbers/sums';
import { solvedUnder } from './frame';

/**
 * How efficient equal weights are over all coefficients together, where the fitted structure is true.
 *
 *     |X'X|^2 / (|X' Omega X| |X' Omega^-1 X|)
 *
 * By the triangles of an orthonormal basis of X under either weighting: units do not enter, and the condition of X costs no digits. Null for an Omega
 * without an inverse.
 * Source: Bloomfield & Watson 1975.
 */
export function efficiencyOf(fitted: Fitted): number | null {
  const { shape, omegaShape } = fitted;
  const { basis } = solvedUnder(fitted, new Float64Array(shape.length).fill(1));
  const factoring = factored(timesFactor(omegaShape, 1 / largestOf(shape)));
  if (!factoring.ok) return null;
  const { root, whitened } = factoring.factor;
  const times = logDeterminant(basis.map(root));
  const over = logDeterminant(basis.map(whitened));
  return Math.min(1, exp(-2 * (times + over)));
}

/** ln |det R| of a tall matrix; its columns are overwritten. */
function logDeterminant(columns: readonly Float64Array[]): number {
  return sum(reflectAll(columns).triangle.map((column, j) => log(Math.abs(column[j] as number))));
}
