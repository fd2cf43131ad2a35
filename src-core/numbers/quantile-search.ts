import { exp, log } from './elementary';
import type { Tails } from './gamma-tails';

const LOWEST = -744;
const HIGHEST = 709;
const LONGEST_STEP = 4;
/** From here one more Newton step leaves the square of this, below rounding. */
const NEAR_ENOUGH = 1e-8;

/**
 * The point at which a tail of a distribution on the positive numbers has a given size.
 *
 *     tail(x) = target, by Newton steps of ln tail on ln x inside a bracket
 *
 * tails: both tails at x, and d lower / d ln x; target: above 0, below 1; start: above 0, any guess.
 * Ask for the smaller tail: it alone keeps its digits. The end of the doubles' range where the answer lies beyond it.
 *
 * Example: chi-square on 1, upper, 0.05, from 1: 3.841458820694124.
 */
export function pointOfTail(search: {
  readonly tails: (x: number) => Tails;
  readonly tail: 'lower' | 'upper';
  readonly target: number;
  readonly start: number;
}): number {
  const { tails, tail, target } = search;
  const rising = tail === 'lower' ? 1 : -1;
  let low = LOWEST;
  let high = HIGHEST;
  let x = search.start;
  for (let step = 0; step < 200; step++) {
    const at = tails(x);
    const found = at[tail];
    if (found === target) return x;
    const place = log(x);
    if (rising * (found - target) > 0) high = place;
    else low = place;
    const gap = log(found / target);
    const wanted = (-rising * gap * found) / at.slope;
    const move = Math.max(-LONGEST_STEP, Math.min(LONGEST_STEP, wanted));
    const inside = place + move > low && place + move < high;
    if (Math.abs(move) < NEAR_ENOUGH && Math.abs(gap) < NEAR_ENOUGH) return x * (1 + move + (move * move) / 2);
    if (high - low < 1e-15 * (1 + Math.abs(low))) return x;
    x = inside ? x * exp(move) : exp((low + high) / 2);
  }
  return x;
}

/** Throws where a probability is not strictly between 0 and 1: a caller's bug. */
export function checkProbability(p: number): void {
  if (!(p > 0 && p < 1)) throw new RangeError(`${p} is no probability between 0 and 1`);
}

/** Throws where a freedom is not above 0 (infinity is): a caller's bug. */
export function checkFreedom(freedom: number): void {
  if (!(freedom > 0)) throw new RangeError(`${freedom} is no freedom above 0`);
}

/** Throws where a statistic is not a number: a caller's bug. */
export function checkPoint(x: number): void {
  if (Number.isNaN(x)) throw new RangeError('a statistic that is not a number has no tail');
}
