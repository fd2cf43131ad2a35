import { choleskyOf, forwardInPlace } from '../algebra/cholesky';
import { heightOf } from '../estimate/likelihood-place';
import type { LikelihoodRows } from '../estimate/likelihood-rows';
import { growsTogether } from '../estimate/search-space';
import { freeParameters, type Structure } from '../model/structure';
import { log } from '../numbers/elementary';

/** Where the likelihood of a draw is looked at, as multiples of the fitted variance; steps of 1.6 lose some 5 % of a ratio at most. */
const MULTIPLES = [0.02, 0.032, 0.051, 0.082, 0.13, 0.21, 0.34, 0.54, 0.86, 1.4, 2.2, 3.5, 5.6, 9];
/** Below this share of the observed ratio on that grid a draw cannot reach it between the points. */
const FAR_BELOW = 0.6;

export type Screened = 'reaches' | 'falls-short' | 'open';

/**
 * Tells at a glance whether a draw's likelihood ratio for one variance reaches the observed one: likelihoods at fixed shapes, what depends on the shape
 * alone prepared once, so that a draw costs cells times terms.
 *
 * Exact where it says that a draw reaches it, as the grid bounds the maximum from below; what is near but short is left open. Null where the null has
 * more to estimate than one common scale, or cells go together.
 */
export function screenFor(of: {
  readonly rows: LikelihoodRows;
  readonly whole: Structure;
  readonly none: Structure;
  readonly restricted: boolean;
  readonly index: number;
  /** The fit without the variance, and the variance as fitted. */
  readonly theta: Float64Array;
  readonly fitted: number;
  readonly statistic: number;
}): ((rows: LikelihoodRows) => Screened) | null {
  const { rows, whole, none, restricted, index, theta, fitted, statistic } = of;
  const left = freeParameters(none).length;
  if (
    whole.links ||
    whole.parameters[index]?.role !== 'between' ||
    !(left === 0 || (left === 1 && growsTogether(none)))
  )
    return null;
  const scaled = left === 1;
  const at = (value: number) => shapeAt({ rows, structure: whole, restricted, scaled }, theta.with(index, value));
  const lowest = at(0);
  const others = MULTIPLES.flatMap((multiple) => at(multiple * fitted) ?? []);
  if (!lowest || others.length === 0) return null;
  return ({ response }) => {
    const none = lowest(response);
    let highest = none;
    for (const height of others) {
      highest = Math.max(highest, height(response));
      if (2 * (highest - none) >= statistic) return 'reaches';
    }
    return 2 * (highest - none) < FAR_BELOW * statistic ? 'falls-short' : 'open';
  };
}

/** The log-likelihood of a response at one point, a common scale at its best; null where it cannot be computed there. */
function shapeAt(
  of: {
    readonly rows: LikelihoodRows;
    readonly structure: Structure;
    readonly restricted: boolean;
    readonly scaled: boolean;
  },
  theta: Float64Array,
): ((response: Float64Array) => number) | null {
  const { rows, structure, restricted, scaled } = of;
  const { basis, cellOf, count, middle, terms: k } = rows;
  const variances = rows.structureOf(structure).variancesAt(theta);
  const weights = Float64Array.from(cellOf, (cell, i) => (middle[i] as number) / (variances[cell] as number));
  let logOmega = 0;
  for (const [i, cell] of cellOf.entries())
    if (count[i] !== 0) logOmega += (count[i] as number) * log(variances[cell] as number);
  const gram = new Float64Array(k * k);
  for (let i = 0; i < weights.length; i++)
    for (let a = 0; a < k; a++) {
      const share = (weights[i] as number) * (basis[i * k + a] as number);
      for (let b = 0; b <= a; b++) gram[a * k + b] = (gram[a * k + b] as number) + share * (basis[i * k + b] as number);
    }
  const factor = choleskyOf(gram, k);
  if (!factor || !weights.every((w) => w > 0 && w < Infinity)) return null;
  let logGram = rows.logDeterminant;
  for (let a = 0; a < k; a++) logGram += 2 * log(factor[a * k + a] as number);
  const right = new Float64Array(k);
  return (response) => {
    right.fill(0);
    let squares = 0;
    for (let i = 0; i < weights.length; i++) {
      const weighed = (weights[i] as number) * (response[i] as number);
      squares += weighed * (response[i] as number);
      for (let a = 0; a < k; a++) right[a] = (right[a] as number) + weighed * (basis[i * k + a] as number);
    }
    forwardInPlace(factor, right, k);
    for (let a = 0; a < k; a++) squares -= (right[a] as number) * (right[a] as number);
    const height = heightOf({ rows, restricted }, { logOmega, logGram, squares });
    return height ? (scaled ? height.rescaled : height.logLikelihood) : Number.NEGATIVE_INFINITY;
  };
}
