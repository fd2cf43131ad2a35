import { factorOf } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';

/** A fit in the coordinates of its own weights, A = P P': X~ = P^-1 X = Q R, r~ = P^-1 r. */
export interface Coordinates {
  /** Q: k columns of length G. */
  readonly basis: readonly Float64Array[];
  /** R^-1 as columns, the upper triangle alone filled. */
  readonly inverse: readonly Float64Array[];
  /** r~, length G. */
  readonly residuals: Float64Array;
}

/**
 * The coordinates in which robust errors are formed: those of the weights that the estimator takes, whatever Omega is.
 *
 * Under target "structure" they are the whitened ones, a free scale left out.
 */
export function coordinatesOf(fitted: Fitted): Coordinates {
  const { basis, inverse, residuals, weighting } = fitted;
  if (fitted.targetIsStructure) return { basis, inverse, residuals: fitted.whitened };
  const whitened = weighting.blocks
    ? factorOf(weighting).whitened(residuals)
    : residuals.map((r, g) => r / Math.sqrt(weighting.diagonal[g] as number));
  return { basis, inverse, residuals: whitened };
}

/**
 * A combination of coefficients as a direction in the space of the basis.
 *
 *     z = R^-T m,  m'b = z'Q'y~;  the length of z times the root of a free scale is the model-based error under target "structure"
 *
 * multipliers: m, length k.
 */
export function directionOf({ inverse }: Pick<Coordinates, 'inverse'>, multipliers: ArrayLike<number>): Float64Array {
  return Float64Array.from(inverse, (column, i) => {
    let sum = 0;
    for (let j = 0; j <= i; j++) sum += (column[j] as number) * (multipliers[j] as number);
    return sum;
  });
}

/** Multipliers that pick out one of k coefficients. */
export function unitRow(k: number, j: number): Float64Array {
  const row = new Float64Array(k);
  row[j] = 1;
  return row;
}
