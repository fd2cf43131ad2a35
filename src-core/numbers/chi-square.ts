import { divide, fromNumber } from './double-double';
import { pow } from './elementary';
import { gammaTails, type Tails } from './gamma-tails';
import { normalUpperQuantile } from './normal';
import { checkPoint, checkProbability, pointOfTail } from './quantile-search';

/**
 * Both tails of the chi-square distribution at x.
 *
 *     gamma tails at freedom / 2 and x / 2
 *
 * freedom: above 0, finite, whole or not; anything else throws, as does a statistic that is not a number. 0 and below have lower tail 0.
 *
 * Example: chiSquareTails(2, 2).upper = 1/e.
 */
export function chiSquareTails(x: number, freedom: number): Tails {
  checkPoint(x);
  if (!(freedom > 0 && freedom < Infinity)) throw new RangeError(`${freedom} is no freedom of a chi-square`);
  return gammaTails(freedom / 2, divide(fromNumber(x), fromNumber(2)));
}

/** P(chi-square > x). Example: chiSquareUpper(3.841458820694124, 1) = 0.05. */
export function chiSquareUpper(x: number, freedom: number): number {
  return chiSquareTails(x, freedom).upper;
}

/** P(chi-square < x). Example: chiSquareLower(0.001, 2) = 0.000499875020830729. */
export function chiSquareLower(x: number, freedom: number): number {
  return chiSquareTails(x, freedom).lower;
}

/**
 * The point with probability p above it, from whichever tail is smaller.
 *
 * p: strictly between 0 and 1, anything else throws. Relative error about 1e-15.
 *
 * Example: chiSquareUpperQuantile(0.05, 1) = 3.841458820694124.
 * Source: Wilson & Hilferty 1931 for the start; pointOfTail.
 */
export function chiSquareUpperQuantile(p: number, freedom: number): number {
  checkProbability(p);
  const tail = p <= 0.5 ? 'upper' : 'lower';
  return pointOfTail({
    tails: (x) => chiSquareTails(x, freedom),
    tail,
    target: tail === 'upper' ? p : 1 - p,
    start: chiSquareStart(p, freedom),
  });
}

/** The point with probability p below it. Example: chiSquareQuantile(0.025, 7.5) = 1.930588620611. */
export function chiSquareQuantile(p: number, freedom: number): number {
  checkProbability(p);
  if (p >= 0.5) return chiSquareUpperQuantile(1 - p, freedom);
  return pointOfTail({
    tails: (x) => chiSquareTails(x, freedom),
    tail: 'lower',
    target: p,
    start: chiSquareStart(1 - p, freedom),
  });
}

/** A first guess at the point with probability p above it. */
function chiSquareStart(p: number, freedom: number): number {
  const spread = 2 / (9 * freedom);
  const root = 1 - spread + normalUpperQuantile(Math.min(p, 1 - 1e-16)) * Math.sqrt(spread);
  return root > 0.05 ? freedom * pow(root, 3) : freedom * 1e-3;
}
