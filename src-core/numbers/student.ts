import { type BetaPoint, betaTails } from './beta-tails';
import { add, divide, fromNumber, twoProduct } from './double-double';
import { pow } from './elementary';
import type { Tails } from './gamma-tails';
import { normalTwoSided, normalUpper, normalUpperQuantile } from './normal';
import { checkFreedom, checkPoint, checkProbability, pointOfTail } from './quantile-search';
import { FREEDOM_WITHOUT_END, POWER_TAIL_FROM } from './tolerances';

/**
 * P(T > t) of Student's distribution.
 *
 *     half the beta tail at f / (f + t^2), shapes f/2 and 1/2
 *
 * t: any number, NaN throws; freedom: above 0, whole or not, infinity for the normal distribution, anything else throws.
 * Relative error about 1e-15 above t = 0, however small the tail.
 *
 * Example: tUpper(12.706204736432095, 1) = 0.025.
 * Source: DLMF 8.17.
 */
export function tUpper(t: number, freedom: number): number {
  checkPoint(t);
  checkFreedom(freedom);
  if (freedom >= FREEDOM_WITHOUT_END) return normalUpper(t);
  const size = Math.abs(t);
  if (size > POWER_TAIL_FROM) {
    const tail = size === Infinity ? 0 : tUpper(POWER_TAIL_FROM, freedom) * pow(size / POWER_TAIL_FROM, -freedom);
    return t > 0 ? tail : 1 - tail;
  }
  const { lower, upper } = sizeTails(size, freedom);
  return t < 0 ? 0.5 + lower / 2 : upper / 2;
}

/** P(T < t). Example: tLower(-3, 8.1) = tUpper(3, 8.1). */
export function tLower(t: number, freedom: number): number {
  return tUpper(-t, freedom);
}

/** P(|T| > |t|). Example: tTwoSided(-12.706204736432095, 1) = 0.05. */
export function tTwoSided(t: number, freedom: number): number {
  return freedom >= FREEDOM_WITHOUT_END ? normalTwoSided(t) : 2 * tUpper(Math.abs(t), freedom);
}

/**
 * The point with probability p above it, from the tail beyond it or, near a half, from the part between it and 0.
 *
 * p: strictly between 0 and 1, anything else throws. Relative error about 1e-15.
 *
 * Example: tUpperQuantile(0.025, 1) = 12.706204736432095.
 */
export function tUpperQuantile(p: number, freedom: number): number {
  checkProbability(p);
  checkFreedom(freedom);
  if (freedom >= FREEDOM_WITHOUT_END) return normalUpperQuantile(p);
  if (p === 0.5) return 0;
  if (p > 0.5) return -pointAbove({ beyond: 1 - p, between: p - 0.5, freedom });
  return pointAbove({ beyond: p, between: 0.5 - p, freedom });
}

/** The point with probability p below it. Example: tQuantile(0.975, 3.6) = 2.90244523572036. */
export function tQuantile(p: number, freedom: number): number {
  const point = tUpperQuantile(p, freedom);
  return point === 0 ? 0 : -point;
}

function pointAbove(asked: { beyond: number; between: number; freedom: number }): number {
  const { beyond, between, freedom } = asked;
  const tail = beyond < 0.25 ? 'upper' : 'lower';
  return pointOfTail({
    tails: (t) => (t > POWER_TAIL_FROM ? farTails(t, freedom) : sizeTails(t, freedom)),
    tail,
    target: 2 * (tail === 'upper' ? beyond : between),
    start: normalUpperQuantile(beyond),
  });
}

/** The distribution of |T|. */
function sizeTails(size: number, freedom: number): Tails {
  const tails = betaTails(sizePoint(size, freedom));
  return { ...tails, slope: 2 * tails.slope };
}

/** Where the beta distribution stands for |T| at a size. */
export function sizePoint(size: number, freedom: number): BetaPoint {
  const square = twoProduct(size, size);
  const both = add(square, fromNumber(freedom));
  return { x: divide(square, both), y: divide(fromNumber(freedom), both), a: 0.5, b: freedom / 2 };
}

function farTails(size: number, freedom: number): Tails {
  const upper = 2 * tUpper(size, freedom);
  return { lower: 1 - upper, upper, slope: freedom * upper };
}
