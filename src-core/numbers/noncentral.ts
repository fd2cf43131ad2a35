import { type BetaPoint, betaTails, betaTerm } from './beta-tails';
import { fromNumber, type Pair, twoProduct } from './double-double';
import { pow } from './elementary';
import { betaPoint } from './fisher';
import { gammaTails, poissonTerm } from './gamma-tails';
import { normalDensity, normalUpper } from './normal';
import { checkFreedom, checkPoint } from './quantile-search';
import { sizePoint } from './student';
import { FREEDOM_WITHOUT_END, POWER_TAIL_FROM } from './tolerances';

/** The central upper tails that a mixture weighs, step by step: each is the one before and a gain. */
interface Ladder {
  readonly tail: (step: number) => number;
  /** tail(step + 1) - tail(step). */
  readonly gain: (step: number) => number;
  /** gain(step + 1) / gain(step). */
  readonly growth: (step: number) => number;
}

/**
 * P(X > x) of the noncentral chi-square distribution.
 *
 *     sum_j Poisson(j; noncentrality / 2) P(chi-square on freedom + 2 j > x)
 *
 * freedom: above 0, finite; noncentrality: 0 or above, finite; anything else throws. Every term is positive: relative error about 1e-14.
 *
 * Example: noncentralChiSquareUpper(3.841458820694124, 1, 10) = 0.8853791407623516.
 * Source: Patnaik 1949.
 */
export function noncentralChiSquareUpper(x: number, freedom: number, noncentrality: number): number {
  checkPoint(x);
  checkFinite(freedom);
  checkNoncentrality(noncentrality);
  if (!(x > 0)) return 1;
  if (x === Infinity) return 0;
  const half: Pair = [x / 2, 0];
  return mixture({
    mean: fromNumber(noncentrality / 2),
    shift: 0,
    tail: (step) => gammaTails(freedom / 2 + step, half).upper,
    gain: (step) => poissonTerm(freedom / 2 + step, half),
    growth: (step) => half[0] / (freedom / 2 + step + 1),
  });
}

/**
 * P(X > x) of the noncentral F distribution, its numerator noncentral.
 *
 *     sum_j Poisson(j; noncentrality / 2) P(beta on freedom1 / 2 + j and freedom2 / 2 > f1 x / (f1 x + f2))
 *
 * freedom1: above 0, finite; freedom2: above 0, infinity for the noncentral chi-square; noncentrality: 0 or above, finite; anything else throws.
 *
 * Example: noncentralFUpper(4, 1, 20, 0) = fUpper(4, 1, 20).
 * Source: Johnson, Kotz & Balakrishnan 1995, chapter 30.
 */
export function noncentralFUpper(x: number, freedom1: number, freedom2: number, noncentrality: number): number {
  checkPoint(x);
  checkFinite(freedom1);
  checkFreedom(freedom2);
  checkNoncentrality(noncentrality);
  if (freedom2 >= FREEDOM_WITHOUT_END) return noncentralChiSquareUpper(freedom1 * x, freedom1, noncentrality);
  if (!(x > 0)) return 1;
  if (x > POWER_TAIL_FROM) {
    if (x === Infinity) return 0;
    return (
      noncentralFUpper(POWER_TAIL_FROM, freedom1, freedom2, noncentrality) * pow(x / POWER_TAIL_FROM, -freedom2 / 2)
    );
  }
  return mixture({
    mean: fromNumber(noncentrality / 2),
    shift: 0,
    ...betaLadder(betaPoint(x, freedom1, freedom2)),
  });
}

/**
 * P(T > t) of the noncentral t distribution, (Z + noncentrality) / root(chi-square / freedom).
 *
 *     half the sum of two mixtures of beta tails, at whole and at half steps
 *
 * freedom: above 0, infinity for the normal; noncentrality: finite, of either sign; anything else throws. Relative where t and the noncentrality
 * have one sign, else absolute error about 1e-14; with a noncentrality above 10,000 and a freedom hundreds of times t^2, about 1e-9.
 *
 * Example: noncentralTUpper(2, 10, 0) = tUpper(2, 10).
 * Source: Johnson, Kotz & Balakrishnan 1995, chapter 31.
 */
export function noncentralTUpper(t: number, freedom: number, noncentrality: number): number {
  checkPoint(t);
  checkFreedom(freedom);
  checkNoncentrality(Math.abs(noncentrality));
  if (freedom >= FREEDOM_WITHOUT_END) return normalUpper(t - noncentrality);
  if (t < 0) return 1 - noncentralTUpper(-t, freedom, -noncentrality);
  if (t > POWER_TAIL_FROM) {
    if (t === Infinity) return 0;
    return noncentralTUpper(POWER_TAIL_FROM, freedom, noncentrality) * pow(t / POWER_TAIL_FROM, -freedom);
  }
  if (noncentrality < -NEVER) return 0;
  if (noncentrality > FAR) return farTUpper(t, freedom, noncentrality);
  const square = twoProduct(noncentrality, noncentrality);
  const mean: Pair = [square[0] / 2, square[1] / 2];
  const ladder = betaLadder(sizePoint(t, freedom));
  const size = mixture({ mean, shift: 0, ...ladder });
  if (noncentrality === 0) return size / 2;
  const sided = mixture({ mean, shift: 0.5, ...ladder });
  return noncentrality > 0 ? (size + sided) / 2 : Math.max(0, (size - sided) / 2);
}

/** From this noncentrality on the normal is integrated out: a mixture would take steps without end. */
const FAR = 1e4;
/** A normal this far out never occurs to any double. */
const NEVER = 38.6;
const EIGHTH = 0.125;
/** A term below this share of the sum ends it. */
const LOST = 1e-20;
/** Where the root of chi-square over freedom spreads by less than this beside the normal, it is taken as normal itself. */
const NARROW = 0.05;

/**
 * P(T > t) far from 0: the integral of phi(z) P(chi-square < freedom ((z + noncentrality) / t)^2) by the trapezoidal rule, exact to rounding for
 * what is smooth beside the normal density.
 */
function farTUpper(t: number, freedom: number, noncentrality: number): number {
  const spread = t / Math.sqrt(2 * freedom);
  if (!(t > 0)) return 1;
  if (spread < NARROW) return normalUpper((t - t / (4 * freedom) - noncentrality) / Math.sqrt(1 + spread * spread));
  const step = Math.min(EIGHTH, spread / 4);
  const termAt = (z: number): number => {
    const ratio = (z + noncentrality) / t;
    const half = (freedom / 2) * ratio * ratio;
    return normalDensity(z) * (half < Infinity ? gammaTails(freedom / 2, fromNumber(half)).lower : 1);
  };
  let total = termAt(0);
  for (const way of [step, -step])
    for (let z = way; Math.abs(z) < NEVER; z += way) {
      const term = termAt(z);
      total += term;
      if (term <= LOST * total) break;
    }
  return Math.min(1, total * step);
}

function betaLadder(point: BetaPoint): Ladder {
  const { x, a, b } = point;
  return {
    tail: (step) => betaTails({ ...point, a: a + step }).upper,
    gain: (step) => (x[0] > 0 ? betaTerm({ ...point, a: a + step }) / (a + step) : 0),
    growth: (step) => ((a + b + step) / (a + step + 1)) * x[0],
  };
}

/** Below this a gain may have lost digits to the end of the doubles' range, and the ladder is entered anew further up. */
const SAFE_GAIN = 1e-290;
const REENTRY = 16;

/** Sums weights of a Poisson law times tails upwards from below all that counts, so that nothing is ever subtracted. */
function mixture(of: Ladder & { readonly mean: Pair; readonly shift: number }): number {
  const middle = Math.floor(of.mean[0]);
  let step = of.shift + Math.max(0, Math.floor(middle - 12 * Math.sqrt(middle + 1) - 40));
  let weight = poissonTerm(step, of.mean);
  let tail = of.tail(step);
  let gain = of.gain(step);
  let total = 0;
  for (let count = 1; ; count++) {
    total += weight * tail;
    const ratio = of.mean[0] / (step + 1);
    weight *= ratio;
    if (step > middle && weight <= 1e-18 * total * (1 - ratio)) return total;
    if (step > middle && weight === 0) return total;
    tail = Math.min(1, tail + gain);
    gain *= of.growth(step);
    step++;
    if (gain < SAFE_GAIN && tail < SAFE_GAIN && count % REENTRY === 0) {
      tail = of.tail(step);
      gain = of.gain(step);
    }
  }
}

function checkNoncentrality(noncentrality: number): void {
  if (!(noncentrality >= 0 && noncentrality < Infinity)) throw new RangeError(`${noncentrality} is no noncentrality`);
}

function checkFinite(freedom: number): void {
  checkFreedom(freedom);
  if (freedom === Infinity) throw new RangeError('a noncentral numerator needs a finite freedom');
}
