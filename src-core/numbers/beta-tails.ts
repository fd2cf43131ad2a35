import { add, divide, fromNumber, multiply, type Pair, subtract, twoSum } from './double-double';
import { continuedFraction, expOfPair, type Tails } from './gamma-tails';
import { stirlingRest } from './stirling';
import { HALF_LAST_PLACE, MOST_STEPS } from './tolerances';
import { logOf, TWO_PI } from './transcendental';

/** Where a beta distribution is asked for: x and y = 1 - x, both as pairs so that neither loses digits, and its two shapes. */
export interface BetaPoint {
  readonly x: Pair;
  readonly y: Pair;
  readonly a: number;
  readonly b: number;
}

/**
 * The incomplete beta function, both tails.
 *
 *     lower = 1/B(a, b) integral from 0 to x of t^(a-1) (1-t)^(b-1) dt,   upper = 1 - lower
 *
 * x, y: 0 to 1 with x + y = 1; a, b: above 0. `slope` is d lower / d ln(x / y). The tail away from the mean is computed itself, to about
 * 1e-15 of its own size; the other as 1 less it.
 *
 * Example: x = y = 0.5, a = 2, b = 3: lower 11/16 = 0.6875.
 * Source: DLMF 8.17.8 (series); DiDonato & Morris 1992, section 3 (continued fraction).
 */
export function betaTails(point: BetaPoint): Tails {
  const { x, y, a, b } = point;
  if (!(x[0] > 0)) return { lower: 0, upper: 1, slope: 0 };
  if (!(y[0] > 0)) return { lower: 1, upper: 0, slope: 0 };
  const slope = betaTerm(point);
  if (x[0] <= 0.5 && (a + b) * x[0] <= a + 1) return fromLower((slope / a) * series(point), slope);
  const turned = { x: y, y: x, a: b, b: a };
  if (y[0] <= 0.5 && (a + b) * y[0] <= b + 1) return fromUpper((slope / b) * series(turned), slope);
  if ((a + b) * x[0] <= a) return fromLower(farTail(slope, point), slope);
  return fromUpper(farTail(slope, turned), slope);
}

function fromLower(found: number, slope: number): Tails {
  const lower = Math.min(1, found);
  return { lower, upper: 1 - lower, slope };
}

function fromUpper(found: number, slope: number): Tails {
  const upper = Math.min(1, found);
  return { lower: 1 - upper, upper, slope };
}

/**
 * x^a y^b / B(a, b), its exponent summed in double-double.
 *
 * Example: x = y = 0.5, a = b = 1: 0.25.
 * Source: the saddle-point form of Loader 2000.
 */
export function betaTerm({ x, y, a, b }: BetaPoint): number {
  const both = twoSum(a, b);
  const main = add(logShare({ part: x, both, shape: a }), logShare({ part: y, both, shape: b }));
  const rest = stirlingRest(both[0]) - stirlingRest(a) - stirlingRest(b);
  return expOfPair(fromNumber(rest), main) * Math.sqrt((a / (both[0] * TWO_PI)) * b);
}

/** shape ln(part both / shape): 0 at the mean. */
function logShare({ part, both, shape }: { part: Pair; both: Pair; shape: number }): Pair {
  return multiply(fromNumber(shape), logOf(divide(multiply(part, both), fromNumber(shape))));
}

/** 1 + (a+b)/(a+1) x + (a+b)(a+b+1)/((a+1)(a+2)) x^2 + ...: every term positive. */
function series({ x, a, b }: BetaPoint): number {
  let term = 1;
  let total = 1;
  for (let n = 0; n < MOST_STEPS; n++) {
    const ratio = ((a + b + n) / (a + 1 + n)) * x[0];
    total += term *= ratio;
    if (term <= HALF_LAST_PLACE * total * (1 - ratio)) break;
  }
  return total;
}

/** The lower tail below the mean: every step positive as long as it is shorter than b. */
function farTail(slope: number, { x, y, a, b }: BetaPoint): number {
  if (slope === 0) return 0;
  const below = subtract(multiply(y, fromNumber(a)), multiply(x, fromNumber(b)))[0];
  const share = x[0];
  const first = (a * (below + 1)) / (a + 1);
  return (
    slope /
    continuedFraction(first, (m) => {
      const place = a + 2 * m;
      const top = ((a + m - 1) / (place - 1)) * ((a + b + m - 1) / (place - 1)) * m * (b - m) * share * share;
      const bottom = m + (m * (b - m) * share) / (place - 1) + ((a + m) * (below + 1 + m * (2 - share))) / (place + 1);
      return [top, bottom];
    })
  );
}
