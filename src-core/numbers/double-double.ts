import { type Pair, quickTwoSum, twoProduct, twoSum } from './error-free';

export { parseDecimal } from './decimal-text';
export { type Pair, restOfProduct, twoProduct, twoSum } from './error-free';

export const ZERO: Pair = [0, 0];
export const ONE: Pair = [1, 0];

/** A double as a pair with nothing in its low half. Example: fromNumber(2) = [2, 0]. */
export function fromNumber(value: number): Pair {
  return [value, 0];
}

/** The double nearest to a pair. Example: toNumber([1, 1e-20]) = 1. */
export function toNumber(value: Pair): number {
  return value[0] + value[1];
}

/** -a, exactly. Example: negate([1, 1e-20]) = [-1, -1e-20]. */
export function negate(a: Pair): Pair {
  return [-a[0], -a[1]];
}

/**
 * a + b, with an error below 3 * 2^-106 of the result, signs differing or not.
 *
 * Example: add([1, 1e-20], [-1, 0]) = [1e-20, 0].
 * Source: Joldes, Muller & Popescu 2017, algorithm 6.
 */
export function add(a: Pair, b: Pair): Pair {
  const highs = twoSum(a[0], b[0]);
  if (!isBounded(highs[0])) return [highs[0], 0];
  const lows = twoSum(a[1], b[1]);
  const first = quickTwoSum(highs[0], highs[1] + lows[0]);
  return quickTwoSum(first[0], first[1] + lows[1]);
}

/** a - b, as accurate as add. Example: subtract([1, 0], [1, -1e-20]) = [1e-20, 0]. */
export function subtract(a: Pair, b: Pair): Pair {
  return add(a, [-b[0], -b[1]]);
}

/**
 * a b, with an error below 5 * 2^-106 of the result.
 *
 * Example: multiply([0.1, 0], [0.1, 0]) = [0.010000000000000002, -8.326672684688674e-19].
 * Source: Joldes, Muller & Popescu 2017, algorithm 11.
 */
export function multiply(a: Pair, b: Pair): Pair {
  const product = twoProduct(a[0], b[0]);
  if (!isBounded(product[0])) return [product[0], 0];
  return quickTwoSum(product[0], product[1] + (a[1] * b[1] + (a[0] * b[1] + a[1] * b[0])));
}

/**
 * a / b by long division in three steps, with an error below 2^-102 of the result. Division by zero gives what doubles give.
 *
 * Example: divide([1, 0], [3, 0]) = [0.3333333333333333, 1.850371707708594e-17].
 */
export function divide(a: Pair, b: Pair): Pair {
  const first = a[0] / b[0];
  if (!isBounded(first) || first === 0 || !isBounded(b[0])) return [first, 0];
  const afterFirst = subtract(a, multiply(b, [first, 0]));
  const second = afterFirst[0] / b[0];
  if (!isBounded(second)) return [first, 0];
  const third = subtract(afterFirst, multiply(b, [second, 0]))[0] / b[0];
  const sum = quickTwoSum(first, second);
  return quickTwoSum(sum[0], sum[1] + third);
}

/**
 * The square root, with an error below 2^-102 of the result; NaN below 0.
 *
 * Example: squareRoot([2, 0]) = [1.4142135623730951, -9.667293313452912e-17].
 * Source: Karp & Markstein 1997.
 */
export function squareRoot(a: Pair): Pair {
  const first = Math.sqrt(a[0]);
  if (!isBounded(first) || first === 0) return [first, 0];
  const rest = subtract(a, twoProduct(first, first))[0];
  return quickTwoSum(first, rest / (2 * first));
}

function isBounded(value: number): boolean {
  return Math.abs(value) < Infinity;
}
