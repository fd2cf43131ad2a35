import { symmetricInverse } from '../algebra/dense';
import type { Fitted } from '../estimate/fitted';
import { informationPieces } from '../estimate/information-pieces';
import { isVariance, type Structure } from '../model/structure';
import { productOf } from './small-matrices';

/**
 * What the adjustment for estimated variance parameters is made of, in the coordinates of the whitened orthonormal design Q, Omega = P P'. q parameters,
 * each in a unit of its own: what is made of the pieces together is free of it.
 */
export interface AdjustmentPieces {
  /** S_i = Q' P^-1 Omega_i P^-T Q, k x k, row after row. */
  readonly slopes: readonly Float64Array[];
  /** W, the inverse of the restricted expected information, q x q rows; null where it is singular. */
  readonly spread: readonly Float64Array[] | null;
  /** I + 2 sum W_ij (T_ij - S_i S_j), T_ij = Q' P^-1 Omega_i Omega^-1 Omega_j P^-T Q; null with W. */
  readonly adjusted: Float64Array | null;
}

const nothing: AdjustmentPieces = { slopes: [], spread: null, adjusted: null };

/**
 * The pieces at the fitted variance parameters, a free common scale among them.
 *
 * fitted: weighted by its own structure, Omega linear in its free parameters. A parameter at its boundary stays in, at the expected information there.
 * Every figure made of the pieces is the same in parameters that are linear in each other, so that phi and rho stand for phi and phi rho.
 *
 * Source: Kenward & Roger 1997.
 */
export function adjustmentPieces(fitted: Fitted): AdjustmentPieces {
  const pieces = informationPieces({ ...fitted, structure: lifted(fitted.structure, fitted.theta) });
  if (!pieces) return nothing;
  const { slopes, products, information } = pieces;
  const known = information.every((row) => row.every(Number.isFinite));
  const spread = known ? symmetricInverse(information) : null;
  if (!spread) return { slopes, spread, adjusted: null };
  const k = fitted.basis.length;
  const adjusted = new Float64Array(k * k);
  for (let i = 0; i < k; i++) adjusted[i * k + i] = 1;
  for (const [i, row] of spread.entries())
    for (const [j, share] of row.entries()) {
      const own = products[i]?.[j] as Float64Array;
      const square = productOf(slopes[i] as Float64Array, slopes[j] as Float64Array, k);
      for (let e = 0; e < adjusted.length; e++)
        adjusted[e] = (adjusted[e] as number) + 2 * share * ((own[e] as number) - (square[e] as number));
    }
  return { slopes, spread, adjusted };
}

/**
 * The structure with derivatives by a correlation taken where the variance of its part is 1 if it is 0: up to a factor the derivative by their product, which
 * is the parameter that remains there.
 */
function lifted(structure: Structure, theta: Float64Array): Structure {
  const raised = theta.slice();
  for (const { at, rhoAt } of structure.parts)
    for (let i = at; i < rhoAt; i++) {
      const parameter = structure.parameters[i];
      if (parameter && isVariance(parameter) && raised[i] === 0) raised[i] = 1;
    }
  if (raised.every((value, i) => value === theta[i])) return structure;
  const isRho = (i: number): boolean => structure.parameters[i]?.role === 'correlation';
  const swapped = <T>(own: readonly T[], other: readonly T[]): T[] =>
    own.map((value, i) => (isRho(i) ? (other[i] as T) : value));
  const { links } = structure;
  const together = links?.together ?? null;
  return {
    ...structure,
    derivativesAt: (at) => swapped(structure.derivativesAt(at), structure.derivativesAt(raised)),
    links: links && {
      ...links,
      blockDerivativesAt: (at, b) => swapped(links.blockDerivativesAt(at, b), links.blockDerivativesAt(raised, b)),
      formSlopesAt: (at, b) => swapped(links.formSlopesAt(at, b), links.formSlopesAt(raised, b)),
      together: together && {
        ...together,
        formSlopesAt: (at) => swapped(together.formSlopesAt(at), together.formSlopesAt(raised)),
      },
    },
  };
}
