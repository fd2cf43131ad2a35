import { type BetaPoint, betaTails } from './beta-tails';
import { chiSquareTails, chiSquareUpperQuantile } from './chi-square';
import { add, divide, fromNumber, twoProduct } from './double-double';
import { pow } from './elementary';
import { gammaTails, type Tails } from './gamma-tails';
import { checkFreedom, checkPoint, checkProbability, pointOfTail } from './quantile-search';
import { FREEDOM_WITHOUT_END, POWER_TAIL_FROM } from './tolerances';

/**
 * Both tails of Fisher's F distribution at x.
 *
 *     beta tails at f1 x / (f1 x + f2), shapes f1/2 and f2/2
 *
 * freedom1 (above), freedom2 (below): above 0, whole or not, infinity for the chi-square limit, not both; anything else throws, as does NaN.
 * 0 and below have lower tail 0. Relative error of the smaller tail about 1e-15.
 *
 * Example: fTails(4, 1, 20).upper = 0.0592655354465705.
 * Source: DLMF 8.17.
 */
export function fTails(x: number, freedom1: number, freedom2: number): Tails {
  checkPoint(x);
  checkFreedom(freedom1);
  checkFreedom(freedom2);
  if (!(x > 0)) return { lower: 0, upper: 1, slope: 0 };
  if (x === Infinity) return { lower: 1, upper: 0, slope: 0 };
  if (freedom2 >= FREEDOM_WITHOUT_END) return chiSquareTails(freedom1 * x, freedom1);
  if (freedom1 >= FREEDOM_WITHOUT_END) return turned(gammaTails(freedom2 / 2, divide([freedom2 / 2, 0], [x, 0])));
  if (x > POWER_TAIL_FROM) return farTails(x, freedom1, freedom2);
  return betaTails(betaPoint(x, freedom1, freedom2));
}

/** P(F > x). Example: fUpper(2.3, 3, 55) = 0.0873894040537244. */
export function fUpper(x: number, freedom1: number, freedom2: number): number {
  return fTails(x, freedom1, freedom2).upper;
}

/** P(F < x). Example: fLower(0.05, 3, 17.2) = 0.0152905698944768. */
export function fLower(x: number, freedom1: number, freedom2: number): number {
  return fTails(x, freedom1, freedom2).lower;
}

/**
 * The point with probability p above it, from whichever tail is smaller.
 *
 * p: strictly between 0 and 1, anything else throws. Relative error about 1e-15.
 *
 * Example: fUpperQuantile(0.05, 3, 55) = 2.77253690783625.
 */
export function fUpperQuantile(p: number, freedom1: number, freedom2: number): number {
  checkProbability(p);
  return p <= 0.5
    ? pointOf({ tail: 'upper', target: p, freedom1, freedom2 })
    : pointOf({ tail: 'lower', target: 1 - p, freedom1, freedom2 });
}

/** The point with probability p below it. Example: fQuantile(0.95, 3, 55) = 2.77253690783625. */
export function fQuantile(p: number, freedom1: number, freedom2: number): number {
  checkProbability(p);
  return p >= 0.5
    ? pointOf({ tail: 'upper', target: 1 - p, freedom1, freedom2 })
    : pointOf({ tail: 'lower', target: p, freedom1, freedom2 });
}

/** Where the beta distribution stands for F at x. */
export function betaPoint(x: number, freedom1: number, freedom2: number): BetaPoint {
  const above = twoProduct(freedom1, x);
  const both = add(above, fromNumber(freedom2));
  return { x: divide(above, both), y: divide(fromNumber(freedom2), both), a: freedom1 / 2, b: freedom2 / 2 };
}

interface Asked {
  readonly tail: 'lower' | 'upper';
  readonly target: number;
  readonly freedom1: number;
  readonly freedom2: number;
}

function pointOf({ tail, target, freedom1, freedom2 }: Asked): number {
  const tails = (x: number) => fTails(x, freedom1, freedom2);
  const upper = tail === 'upper' ? target : 1 - target;
  const start =
    freedom1 < FREEDOM_WITHOUT_END && upper > 1e-17 && upper < 1
      ? chiSquareUpperQuantile(upper, freedom1) / freedom1
      : 1;
  return pointOfTail({ tails, tail, target, start: start > 1e-300 ? start : 1 });
}

function turned({ lower, upper, slope }: Tails): Tails {
  return { lower: upper, upper: lower, slope };
}

function farTails(x: number, freedom1: number, freedom2: number): Tails {
  const upper =
    betaTails(betaPoint(POWER_TAIL_FROM, freedom1, freedom2)).upper * pow(x / POWER_TAIL_FROM, -freedom2 / 2);
  return { lower: 1 - upper, upper, slope: (freedom2 / 2) * upper };
}
