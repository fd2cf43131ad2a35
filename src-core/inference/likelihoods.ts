import { factored } from '../algebra/factored';
import { underStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import { likelihoodAt } from '../estimate/likelihood';
import { heldRows, type LikelihoodRows, likelihoodRows } from '../estimate/likelihood-rows';
import { sumOfSquares } from '../numbers/sums';
import { numberOrNull } from './reference';

/** A fit with its likelihood at hand: prepared once, evaluated often. */
export interface Likelihoods {
  readonly fitted: Fitted;
  readonly rows: LikelihoodRows;
  /** l and l_R at the fit's variance parameters; null where they have no bound or are undefined. */
  readonly full: number | null;
  readonly restricted: number | null;
}

/**
 * Both log-likelihoods of a fit at its variance parameters.
 *
 *     l   = -1/2 [ G ln 2pi + ln det Omega + r' Omega^-1 r ],                                        a common scale at r'Wr / G
 *     l_R = -1/2 [ (G-k) ln 2pi + ln det Omega + ln det(X' Omega^-1 X) + r' Omega^-1 r ],            a common scale at r'Wr / (G - k)
 *
 * r: generalised least squares under Omega, whatever the target of the plan is: both judge the structure, not the weights of the estimator.
 * Null where a common scale has no residuals to go by, and where Omega cannot be inverted.
 *
 * Example: ten cells of the physics data under 1/s^2 and a free scale: -37.834536 and -31.016011.
 * Source: Patterson & Thompson 1971; Harville 1977.
 */
export function likelihoodsOf(fitted: Fitted): Likelihoods {
  const { response, design, structure, residuals } = fitted;
  // A matrix of few degrees of freedom has no inverse, and so no likelihood.
  if (!factored(fitted.omegaShape).ok) return { fitted, rows: heldRows(residuals), full: null, restricted: null };
  const rows = likelihoodRows({ response, design, structure });
  const at = (restricted: boolean): number | null => {
    const theta = scaledFor(fitted, rows, restricted);
    const found = theta && likelihoodAt({ rows, structure, restricted, theta });
    return found ? numberOrNull(found.logLikelihood) : null;
  };
  return { fitted, rows, full: at(false), restricted: at(true) };
}

/** The fit's parameters, a free common scale at the divisor of the likelihood asked for. */
function scaledFor(fitted: Fitted, rows: LikelihoodRows, restricted: boolean): Float64Array | null {
  const { structure, theta } = fitted;
  if (!structure.commonScale) return theta;
  const counted = rows.cells - (restricted ? rows.terms : 0);
  if (rows.perfect || counted <= 0) return null;
  const scaled = theta.slice();
  scaled[structure.scaleAt] = sumOfSquares(underStructure(fitted).whitened) / counted;
  return scaled;
}

/**
 * The log-likelihoods that a result tells of a fit. Where variances were iterated to fitted means, that of the counts alone: what is maximised beside
 * it holds those variances, and is no likelihood of the data.
 */
export function toldLikelihoods({ fitted, full, restricted }: Likelihoods): {
  readonly logLikelihood: number | null;
  readonly restrictedLogLikelihood: number | null;
} {
  const { fixedPoint } = fitted;
  if (fixedPoint) return { logLikelihood: fixedPoint.logLikelihood, restrictedLogLikelihood: null };
  return { logLikelihood: full, restrictedLogLikelihood: restricted };
}

/** True where the method's own likelihood is the restricted one. */
export function isRestricted(fitted: Fitted): boolean {
  return fitted.estimate.method === 'restricted';
}

/** The likelihood that the method maximises (full for least squares); null for moments and two-step, which maximise none of the whole model. */
export function ownLikelihood(likelihoods: Likelihoods): number | null {
  const { method } = likelihoods.fitted.estimate;
  if (method === 'moments' || method === 'two-step') return null;
  return method === 'restricted' ? likelihoods.restricted : likelihoods.full;
}
