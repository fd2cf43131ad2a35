import errorFunctionComplement from '@stdlib/math-base-special-erfc';
import { restOfProduct } from './double-double';
import { exp } from './elementary';
import { normalStart } from './normal-start';
import { checkPoint, checkProbability } from './quantile-search';

const HALF_ROOT = Math.SQRT1_2;
const HALF_ROOT_REST = -4.833646656726457e-17;
const TWO_OVER_ROOT_PI = 1.1283791670955126;
const ROOT_TWO_PI = 2.5066282746310007;

/**
 * The upper tail of the standard normal distribution.
 *
 *     P(Z > z) = erfc(z / root 2) / 2
 *
 * z: any number; NaN throws. Relative error about 3e-16 down to 1e-307: what rounding takes from z / root 2 is put back to first order.
 *
 * Example: normalUpper(1.959963984540054) = 0.025.
 * Source: fdlibm 5.3 s_erf.
 */
export function normalUpper(z: number): number {
  checkPoint(z);
  const place = z * HALF_ROOT;
  const value = errorFunctionComplement(place);
  if (!(place > 0.5) || value === 0) return value / 2;
  const rest = restOfProduct(z, HALF_ROOT, place) + z * HALF_ROOT_REST;
  return (value - rest * TWO_OVER_ROOT_PI * exp(-place * place)) / 2;
}

/** The lower tail, P(Z < z): the upper tail at -z. Example: normalLower(-1.959963984540054) = 0.025. */
export function normalLower(z: number): number {
  return normalUpper(-z);
}

/** Both tails, P(|Z| > |z|). Example: normalTwoSided(-1.959963984540054) = 0.05. */
export function normalTwoSided(z: number): number {
  return 2 * normalUpper(Math.abs(z));
}

/** The density at z. Example: normalDensity(0) = 0.3989422804014327. */
export function normalDensity(z: number): number {
  const high = Math.fround(z);
  return (exp(-0.5 * high * high) * exp(-0.5 * (z - high) * (z + high))) / ROOT_TWO_PI;
}

/**
 * The point with probability p above it.
 *
 * p: strictly between 0 and 1, anything else throws. Relative error about 4e-16, also at p = 1e-300 and near a half.
 *
 * Example: normalUpperQuantile(0.025) = 1.959963984540054.
 * Source: Wichura 1988 (AS 241) as the start, one Halley step on the accurate tail.
 */
export function normalUpperQuantile(p: number): number {
  checkProbability(p);
  const start = normalStart(p);
  if (Math.abs(0.5 - p) <= 0.425) return start;
  if (p > 0.5) return -refined(1 - p, -start);
  return refined(p, start);
}

/** The point with probability p below it. Example: normalQuantile(0.975) = 1.959963984540054. */
export function normalQuantile(p: number): number {
  checkProbability(p);
  return p < 0.5 ? -normalUpperQuantile(p) : normalUpperQuantile(1 - p);
}

function refined(p: number, start: number): number {
  const move = (normalUpper(start) - p) / normalDensity(start);
  return start + move / (1 - (start * move) / 2);
}
