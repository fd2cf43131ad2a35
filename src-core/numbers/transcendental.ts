import { add, divide, fromNumber, multiply, negate, ONE, type Pair, subtract, ZERO } from './double-double';
import { log } from './elementary';

export const LN2: Pair = [Math.LN2, 2.3190468138462996e-17];
export const TWO_PI = 6.283185307179586;

const HALVINGS = 9;
const REDUCTION = 1 / 512; // 2^-9
const TINY = 1e-150;
const HUGE = 1e150;
const TWO_TO_512 = 1.3407807929942597e154;

/** 1/9!, ..., 1/2!, 1. */
const COEFFICIENTS: readonly Pair[] = reciprocalFactorials(9);

function reciprocalFactorials(upTo: number): Pair[] {
  const found: Pair[] = [];
  let term = ONE;
  for (let n = 1; n <= upTo; n++) found.unshift((term = divide(term, fromNumber(n))));
  return found;
}

/**
 * e^a in double-double, with an error below 1e-29 of the result for |a| up to 700.
 *
 * Infinite above 709.78, 0 below -745.
 *
 * Example: expOf([1, 0]) = [2.718281828459045, 1.4456468917292502e-16].
 * Source: argument reduced by ln 2 and halved nine times, Taylor's series of e^r - 1, doubled back (Hida, Li & Bailey 2001).
 */
export function expOf(a: Pair): Pair {
  if (!(a[0] < 709.79)) return [a[0] * Infinity, 0];
  if (a[0] < -745.2) return ZERO;
  const twos = Math.round(a[0] / LN2[0]);
  const reduced = subtract(a, multiply(LN2, [twos, 0]));
  const small: Pair = [reduced[0] * REDUCTION, reduced[1] * REDUCTION];
  let grown: Pair = ZERO;
  for (const coefficient of COEFFICIENTS) grown = multiply(add(grown, coefficient), small);
  for (let n = 0; n < HALVINGS; n++) grown = add([2 * grown[0], 2 * grown[1]], multiply(grown, grown));
  const value = add(grown, ONE);
  const half = Math.trunc(twos / 2);
  const [first, second] = [powerOfTwo(half), powerOfTwo(twos - half)];
  return [value[0] * first * second, value[1] * first * second];
}

/**
 * ln a in double-double, by one step of third order on e^a from the double logarithm; absolute error below 2e-32 (1 + |ln a|).
 *
 * -Infinity at 0, NaN below.
 *
 * Example: logOf([2, 0]) = [0.6931471805599453, 2.3190468138462996e-17].
 */
export function logOf(a: Pair): Pair {
  if (!(a[0] > 0) || a[0] === Infinity) return [log(a[0]), 0];
  if (a[0] > HUGE) return add(logOf(scaled(a, 1 / TWO_TO_512)), multiply(LN2, [512, 0]));
  if (a[0] < TINY) return subtract(logOf(scaled(a, TWO_TO_512)), multiply(LN2, [512, 0]));
  const start = fromNumber(log(a[0]));
  const rest = subtract(multiply(a, expOf(negate(start))), ONE);
  return add(start, subtract(rest, fromNumber((rest[0] * rest[0]) / 2)));
}

function scaled(a: Pair, by: number): Pair {
  return [a[0] * by, a[1] * by];
}

function powerOfTwo(power: number): number {
  let value = 1;
  for (let n = Math.abs(power); n > 0; n--) value *= 2;
  return power < 0 ? 1 / value : value;
}
