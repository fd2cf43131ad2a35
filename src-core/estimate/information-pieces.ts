import { freeParameters } from '../model/structure';
import type { Fitted } from './fitted';
import { type InformationPieces, linkedPieces } from './linked-derivatives';
import { linkedPlace } from './linked-place';

/** The pieces with the parameters that they belong to. */
export interface FittedPieces extends InformationPieces {
  /** Indices of the free parameters, in the order of the pieces. */
  readonly free: readonly number[];
  /** Every piece is by theta_i / unit_i. */
  readonly units: Float64Array;
}

/**
 * What the restricted expected information of a fit's free variance parameters is made of, in the coordinates of its own basis (P^-1 X = Q R).
 *
 *     P_a = -X'Omega^-1 Omega_a Omega^-1 X = -R' S_a R,  Q_ab = X'Omega^-1 Omega_a Omega^-1 Omega_b Omega^-1 X = R' T_ab R
 *
 * fitted: weighted by its own structure (`underStructure`); a boundary parameter stays in, at the information there. Null where Omega cannot be
 * factored or a scale is undefined.
 *
 * Source: Kenward & Roger 1997.
 */
export function informationPieces(fitted: Fitted): FittedPieces | null {
  const { structure, theta, variances, basis } = fitted;
  if (!fitted.targetIsStructure) throw new RangeError('the fit is not weighted by its own structure');
  if (!variances.every((v) => v > 0 && v < Infinity)) return null;
  const at = linkedPlace({ structure, theta, middle: variances });
  if (!at) return null;
  const terms = basis.length;
  const rows = new Float64Array(variances.length * terms);
  for (const [j, vector] of basis.entries())
    for (let g = 0; g < variances.length; g++) rows[g * terms + j] = vector[g] as number;
  const pieces = linkedPieces({ at, basis: rows, terms, restricted: true });
  return { ...pieces, free: freeParameters(structure), units: at.units() };
}
