import { largestOf, powerOfTwoBelow } from '../algebra/powers-of-two';
import type { Parameter, Structure } from '../model/structure';
import { log } from '../numbers/elementary';
import type { LikelihoodRows } from './likelihood-rows';

export const LOG_TWO_PI = 1.8378770664093456;

/** Where a likelihood is looked at. */
export interface LikelihoodPlace {
  readonly rows: LikelihoodRows;
  readonly structure: Structure;
  readonly restricted: boolean;
  readonly theta: Float64Array;
}

/** A log-likelihood at one point, without its derivatives. */
export interface Height {
  readonly logLikelihood: number;
  /** r' Omega^-1 r over its divisor: by how much all variances would have to grow together. */
  readonly scaleRatio: number;
  /** The log-likelihood after they have, exact however far off this point is; Infinity where nothing is left over. */
  readonly rescaled: number;
}

/** With its derivatives by the free parameters, each counted in a unit of its own, so that none runs over or under. */
export interface Likelihood extends Height {
  /** Of each free parameter: a power of two near the value at which it alone would make the variances what they are; 1 for an exponent or a correlation. */
  readonly units: Float64Array;
  /** dl / d(theta_i / unit_i), one entry a free parameter. */
  readonly score: Float64Array;
  /** Expected information of theta_i / unit_i, as rows. */
  readonly information: readonly Float64Array[];
}

/** Cells, less coefficients under the restricted likelihood. */
export function freedomOf({ rows, restricted }: Pick<LikelihoodPlace, 'rows' | 'restricted'>): number {
  return rows.cells - (restricted ? rows.terms : 0);
}

/** The unit of one parameter: exponents and correlations are numbers without one. */
export function unitOf(parameter: Parameter | undefined, derivative: Float64Array, variances: Float64Array): number {
  if (parameter?.role === 'exponent' || parameter?.role === 'correlation') return 1;
  // Largest variance over largest derivative: neither is a sum, so that cells of any spread do not overflow.
  return powerOfTwoBelow(largestOf(variances)) / powerOfTwoBelow(largestOf(derivative));
}

/**
 * The log-likelihood from its pieces.
 *
 * logOmega: ln det Omega; logGram: ln det(X' Omega^-1 X), taken under the restricted likelihood alone; squares: r' Omega^-1 r. Null where it cannot be
 * computed.
 */
export function heightOf(
  place: Pick<LikelihoodPlace, 'rows' | 'restricted'>,
  pieces: { readonly logOmega: number; readonly logGram: number; readonly squares: number },
): Height | null {
  const freedom = freedomOf(place);
  const constant = freedom * LOG_TWO_PI + pieces.logOmega + (place.restricted ? pieces.logGram : 0);
  const scaleRatio = pieces.squares / freedom;
  const logLikelihood = -(constant + pieces.squares) / 2;
  if (!(Math.abs(logLikelihood) < Infinity)) return null;
  return { logLikelihood, scaleRatio, rescaled: -(constant + freedom * (log(scaleRatio) + 1)) / 2 };
}
