import { freeParameters } from '../model/structure';
import { log } from '../numbers/elementary';
import { informationOf, rowSlopes, scoreOf, turnedRows } from './likelihood-derivatives';
import { linkedLikelihood, linkedLikelihoodAt } from './likelihood-linked';
import { type Height, heightOf, type Likelihood, type LikelihoodPlace, unitOf } from './likelihood-place';
import { type WeighedRows, weighedRows } from './weighed-rows';

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
  if (place.structure.links) return linkedLikelihoodAt(place);
  const weighed = weigh(place);
  if (!weighed) return null;
  const { logLikelihood, scaleRatio, rescaled } = weighed;
  const { units, derived } = derivedOf(place, weighed);
  return { logLikelihood, scaleRatio, rescaled, units, score: scoreOf(derived), information: informationOf(derived) };
}

/** The score alone, in units of its own: a fraction of the work where there are many coefficients. */
export function scoreAt(place: LikelihoodPlace): Pick<Likelihood, 'units' | 'score'> | null {
  if (place.structure.links) {
    const found = linkedLikelihood(place);
    return found && { units: found.units(), score: found.score() };
  }
  const weighed = weigh(place);
  if (!weighed) return null;
  const { units, derived } = derivedOf(place, weighed);
  return { units, score: scoreOf(derived) };
}

function derivedOf({ rows, structure, restricted, theta }: LikelihoodPlace, weighed: Weighed) {
  const { variances } = weighed;
  const derivatives = rows.structureOf(structure).derivativesAt(theta);
  const free = freeParameters(structure);
  const units = Float64Array.from(free, (i) =>
    unitOf(structure.parameters[i], derivatives[i] as Float64Array, variances),
  );
  const slopes = free.map((i, a) =>
    rowSlopes(rows, { derivative: derivatives[i] as Float64Array, unit: units[a] as number, variances }),
  );
  const turned = turnedRows({ rows, weighed, restricted });
  return { units, derived: { rows, weighed, slopes, restricted, turned } };
}

/** The same log-likelihood without its derivatives: a quarter of the work. */
export function heightAt(place: LikelihoodPlace): Height | null {
  const weighed = place.structure.links ? linkedLikelihood(place) : weigh(place);
  if (!weighed) return null;
  const { logLikelihood, scaleRatio, rescaled } = weighed;
  return { logLikelihood, scaleRatio, rescaled };
}

function weigh(place: LikelihoodPlace): Weighed | null {
  const { rows, structure, theta } = place;
  const { terms: k, cellOf, middle, count } = rows;
  const variances = rows.structureOf(structure).variancesAt(theta);
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
  const height = heightOf(place, { logOmega: logVariances, logGram, squares: solved.weightedRss });
  return height && { ...solved, ...height, variances, relative };
}
