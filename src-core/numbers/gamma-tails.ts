import { add, divide, fromNumber, multiply, type Pair, subtract } from './double-double';
import { exp } from './elementary';
import { stirlingRest } from './stirling';
import { HALF_LAST_PLACE, MOST_STEPS } from './tolerances';
import { logOf, TWO_PI } from './transcendental';

/** Both tails of a distribution at one point, and how fast the lower one grows with the logarithm of the point. */
export interface Tails {
  readonly lower: number;
  readonly upper: number;
  /** d lower / d ln x: the density times x. */
  readonly slope: number;
}

const SMALL = 1e-290;

/**
 * The Poisson probability of a at mean x, for any real a.
 *
 *     x^a e^-x / Gamma(a + 1)
 *
 * a: 0 or above; x: 0 or above, as a pair. The exponent is summed in double-double, so that digits do not go with its size.
 *
 * Example: poissonTerm(2, [2, 0]) = 2 / e^2 = 0.2706705664732254.
 * Source: the saddle-point form of Loader 2000.
 */
export function poissonTerm(a: number, x: Pair): number {
  if (a === 0) return expOfPair(fromNumber(0), [-x[0], -x[1]]);
  if (x[0] === 0) return 0;
  const size = fromNumber(a);
  const exponent = add(multiply(size, logOf(divide(x, size))), subtract(size, x));
  return expOfPair(fromNumber(-stirlingRest(a)), exponent) / Math.sqrt(TWO_PI * a);
}

/**
 * The incomplete gamma function, both tails.
 *
 *     lower = 1/Gamma(a) integral from 0 to x of t^(a-1) e^-t dt,   upper = 1 - lower
 *
 * a: above 0; x: 0 or above, as a pair. The tail away from the mean is computed itself, to about 1e-15 of its own size; the other as 1 less it.
 *
 * Example: gammaTails(1, [1, 0]) has upper 1/e = 0.36787944117144233.
 * Source: DLMF 8.7.1 (series) and 8.9.2 (continued fraction).
 */
export function gammaTails(a: number, x: Pair): Tails {
  if (!(x[0] > 0)) return { lower: 0, upper: 1, slope: 0 };
  if (x[0] === Infinity) return { lower: 1, upper: 0, slope: 0 };
  const term = poissonTerm(a, x);
  const slope = term * a;
  if (x[0] <= a + 1) {
    const lower = Math.min(1, term * lowerSeries(a, x[0]));
    return { lower, upper: 1 - lower, slope };
  }
  const upper = Math.min(1, slope === 0 ? 0 : slope / upperFraction(a, x));
  return { lower: 1 - upper, upper, slope };
}

/** 1 + x/(a+1) + x^2/((a+1)(a+2)) + ...: every term positive. */
function lowerSeries(a: number, x: number): number {
  let term = 1;
  let total = 1;
  for (let n = 1; n < MOST_STEPS && term > HALF_LAST_PLACE * total * (1 - x / (a + n)); n++)
    total += term *= x / (a + n);
  return total;
}

function upperFraction(a: number, x: Pair): number {
  const first = subtract(x, fromNumber(a));
  return continuedFraction(first[0] + 1, (n) => [n * (a - n), first[0] + 1 + 2 * n]);
}

/**
 * The continued fraction b0 + a1/(b1 + a2/(b2 + ...)), until it no longer changes.
 *
 * Source: modified Lentz, Thompson & Barnett 1986.
 */
export function continuedFraction(b0: number, step: (n: number) => readonly [a: number, b: number]): number {
  let value = b0 === 0 ? SMALL : b0;
  let above = value;
  let below = 0;
  for (let n = 1; n < MOST_STEPS; n++) {
    const [a, b] = step(n);
    below = b + a * below;
    above = b + a / above;
    if (below === 0) below = SMALL;
    if (above === 0) above = SMALL;
    below = 1 / below;
    const change = above * below;
    value *= change;
    if (Math.abs(change - 1) <= 2 * HALF_LAST_PLACE) return value;
  }
  return value;
}

/** e^(a + b), the exponent given as two pairs: the low half of their sum joins as a factor. */
export function expOfPair(a: Pair, b: Pair): number {
  const [high, low] = add(a, b);
  const value = exp(high);
  return value + value * low;
}
