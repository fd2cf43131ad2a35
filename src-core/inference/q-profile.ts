import { chiSquareUpperQuantile } from '../numbers/distributions';
import { findRoot } from '../numbers/roots';
import type { Ends } from './profile';

const DOUBLINGS = 200;

/**
 * Interval of tau^2 from the generalised Q statistic, which falls as tau^2 rises.
 *
 *     Q(low) = chi-square quantile (1 + level)/2,  Q(high) = quantile (1 - level)/2,  on G - k
 *     Q(tau^2) = r' (tau^2 I + S)^-1 r, r the residuals at that tau^2
 *
 * statistic: Q at a tau^2; scale: a variance to step out with, in squared units of the outcome; freedom: G - k.
 * low is 0 where Q(0) does not reach the upper quantile. Q(0) below the lower quantile leaves no tau^2 at all: both null. So does freedom 0.
 *
 * Example: thirteen vaccine trials, mean alone: 0.1197 to 1.1115.
 * Source: Viechtbauer 2007.
 */
export function qProfile(known: {
  readonly statistic: (tau2: number) => number;
  readonly freedom: number;
  readonly level: number;
  readonly scale: number;
}): Ends {
  const { statistic, freedom, level, scale } = known;
  if (freedom <= 0) return { low: null, high: null };
  const tail = (1 - level) / 2;
  const upper = chiSquareUpperQuantile(tail, freedom);
  const lower = chiSquareUpperQuantile(1 - tail, freedom);
  const atZero = statistic(0);
  if (atZero < lower) return { low: null, high: null };
  return {
    low: atZero <= upper ? 0 : solve(statistic, upper, scale),
    high: atZero === lower ? 0 : solve(statistic, lower, scale),
  };
}

/** Where a falling statistic takes a value that it exceeds at 0. */
function solve(statistic: (tau2: number) => number, value: number, scale: number): number | null {
  let low = 0;
  let high = scale;
  for (let i = 0; i < DOUBLINGS && statistic(high) > value; i++) {
    low = high;
    high *= 2;
  }
  if (!(statistic(high) <= value)) return null;
  return findRoot({ of: (tau2) => statistic(tau2) - value, low, high, tolerance: 1e-14 * high });
}
