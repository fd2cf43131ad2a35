import { largestOf, powerOfTwoBelow } from '../algebra/powers-of-two';
import { freeParameters, type Structure } from '../model/structure';
import { log } from '../numbers/elementary';
import { informationOf, rowSlopes, scoreOf } from './likelihood-derivatives';
import type { LikelihoodRows } from './likelihood-rows';
import { type WeighedRows, weighedRows } from './weighed-rows';

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
  /** Of each free parameter: a power of two near the value at which it alone would make the variances what they are; 1 for an exponent. */
  readonly units: Float64Array;
  /** dl / d(theta_i / unit_i), one entry a free parameter. */
  readonly score: Float64Array;
  /** Expected information of theta_i / unit_i, as rows. */
  readonly information: readonly Float64Array[];
}

interface Weighed extends Height, WeighedRows {
  readonly variances: Float64Array;
  /** Middle variance over the variance, a row. */
  readonly relative: Float64Array;
}

/**
 * The full or the restricted log-likelihood at theta, the coefficients profiled out.
 *
 *     l   = -1/2 [ G ln 2pi + ln det Omega + r' Omega^-1 r ]
 *     l_R = -1/2 [ (G-k) ln 2pi + ln det Omega + ln det(X' Omega^-1 X) + r' Omega^-1 r ]
 *     dl/dtheta_i   = 1/2 sum d_i/v (r^2/v - 1),          I_ij = 1/2 sum d_i d_j / v^2
 *     dl_R/dtheta_i = 1/2 sum d_i/v (r^2/v - (1 - h)),    I_ij = 1/2 [ sum d_i d_j (1 - 2h) / v^2 + tr(S_i S_j) ]
 *
 * d_i: dv/dtheta_i, times the parameter's unit; h: leverages; S_i = Q' diag(d_i / v) Q, Q the whitened orthonormal design. Rows without a design (`heldRows`) give the
 * pseudo-likelihood. Null where a variance is not above 0 or so far from the middle that nothing can be computed.
 */
export function likelihoodAt(place: LikelihoodPlace): Likelihood | null {
  const weighed = weigh(place);
  if (!weighed) return null;
  const { logLikelihood, scaleRatio, rescaled } = weighed;
  const { units, derived } = derivedOf(place, weighed);
  return { logLikelihood, scaleRatio, rescaled, units, score: scoreOf(derived), information: informationOf(derived) };
}

/** The score alone, in units of its own: a fraction of the work where there are many coefficients. */
export function scoreAt(place: LikelihoodPlace): Pick<Likelihood, 'units' | 'score'> | null {
  const weighed = weigh(place);
  if (!weighed) return null;
  const { units, derived } = derivedOf(place, weighed);
  return { units, score: scoreOf(derived) };
}

function derivedOf({ rows, structure, restricted, theta }: LikelihoodPlace, weighed: Weighed) {
  const { variances } = weighed;
  const derivatives = structure.derivativesAt(theta);
  const free = freeParameters(structure);
  const units = Float64Array.from(free, (i) =>
    i === structure.exponentAt ? 1 : unitOf(derivatives[i] as Float64Array, variances),
  );
  const slopes = free.map((i, a) =>
    rowSlopes(rows, { derivative: derivatives[i] as Float64Array, unit: units[a] as number, variances }),
  );
  return { units, derived: { rows, weighed, slopes, restricted } };
}

/** Largest variance over largest derivative: neither is a sum, so that cells of any spread do not overflow. */
function unitOf(derivative: Float64Array, variances: Float64Array): number {
  return powerOfTwoBelow(largestOf(variances)) / powerOfTwoBelow(largestOf(derivative));
}

/** The same log-likelihood without its derivatives: a quarter of the work. */
export function heightAt(place: LikelihoodPlace): Height | null {
  const weighed = weigh(place);
  if (!weighed) return null;
  const { logLikelihood, scaleRatio, rescaled } = weighed;
  return { logLikelihood, scaleRatio, rescaled };
}

/** Cells, less coefficients under the restricted likelihood. */
export function freedomOf({ rows, restricted }: Pick<LikelihoodPlace, 'rows' | 'restricted'>): number {
  return rows.cells - (restricted ? rows.terms : 0);
}

function weigh(place: LikelihoodPlace): Weighed | null {
  const { rows, structure, restricted, theta } = place;
  const { terms: k, cellOf, middle, count } = rows;
  const variances = structure.variancesAt(theta);
  const relative = new Float64Array(cellOf.length);
  let logVariances = 0;
  for (let g = 0; g < relative.length; g++) {
    const v = variances[cellOf[g] as number] as number;
    if (!(v > 0 && v < Infinity)) return null;
    relative[g] = (middle[g] as number) / v;
    if (count[g] !== 0) logVariances += (count[g] as number) * log(v);
  }
  const solved = weighedRows(rows, relative);
  if (!solved) return null;
  let logGram = rows.logDeterminant;
  for (let i = 0; i < k; i++) logGram += 2 * log(solved.factor[i * k + i] as number);
  const freedom = freedomOf(place);
  const constant = freedom * LOG_TWO_PI + logVariances + (restricted ? logGram : 0);
  const scaleRatio = solved.weightedRss / freedom;
  const logLikelihood = -(constant + solved.weightedRss) / 2;
  if (!(Math.abs(logLikelihood) < Infinity)) return null;
  const rescaled = -(constant + freedom * (log(scaleRatio) + 1)) / 2;
  return { ...solved, logLikelihood, scaleRatio, rescaled, variances, relative };
}
