/** A double-double number, high + low: about 32 digits. low is at most half a unit in the last place of high. */
export type Pair = readonly [high: number, low: number];

const SPLITTER = 134217729; // 2^27 + 1
const LARGE = 6.696928794914171e299; // 2^996: above it the splitter would overflow
const DOWN = 3.725290298461914e-9; // 2^-28
const UP = 268435456; // 2^28

/**
 * The sum of two doubles, and exactly what rounding took from it.
 *
 *     high + low = a + b
 *
 * Example: twoSum(1, 1e-20) = [1, 1e-20].
 * Source: Knuth, The Art of Computer Programming 2, 4.2.2.
 */
export function twoSum(a: number, b: number): Pair {
  const high = a + b;
  const part = high - a;
  return [high, a - (high - part) + (b - part)];
}

/** The same for |a| >= |b| (or a = 0), in three operations. Source: Dekker 1971. */
export function quickTwoSum(a: number, b: number): Pair {
  const high = a + b;
  return [high, b - (high - a)];
}

/** The leading 26 bits of a double; the rest is a minus them, exactly. Source: Dekker 1971. */
export function leadingHalf(a: number): number {
  if (Math.abs(a) > LARGE) {
    const small = a * DOWN;
    const spread = SPLITTER * small;
    return (spread - (spread - small)) * UP;
  }
  const spread = SPLITTER * a;
  return spread - (spread - a);
}

/**
 * The product of two doubles, and exactly what rounding took from it.
 *
 *     high + low = a b
 *
 * Exact unless |a b| is below 2^-969, where the rest is too small to be held. A product beyond the range of a double has no rest.
 *
 * Example: twoProduct(0.1, 0.1) = [0.010000000000000002, -8.326672684688674e-19].
 * Source: Dekker 1971; Veltkamp 1968.
 */
export function twoProduct(a: number, b: number): Pair {
  const high = a * b;
  return [high, restOfProduct(a, b, high)];
}

/**
 * What rounding took from product = a b, for loops whose numbers are known to lie well inside the range of doubles: no splitter overflows.
 * Always summed in the same order, which compiled kernels follow to the bit.
 */
export function plainRestOfProduct(a: number, b: number, product: number): number {
  let spread = SPLITTER * a;
  const aHigh = spread - (spread - a);
  const aLow = a - aHigh;
  spread = SPLITTER * b;
  const bHigh = spread - (spread - b);
  const bLow = b - bHigh;
  return aHigh * bHigh - product + aHigh * bLow + aLow * bHigh + aLow * bLow;
}

/** What rounding took from high = a b: the second half of twoProduct, for loops that make no pair. */
export function restOfProduct(a: number, b: number, high: number): number {
  if (Math.abs(high) > LARGE) return Math.abs(high) < Infinity ? restOfProduct(a * DOWN, b, high * DOWN) * UP : 0;
  const aHigh = leadingHalf(a);
  const bHigh = leadingHalf(b);
  const aLow = a - aHigh;
  const bLow = b - bHigh;
  return aLow * bLow - (high - aHigh * bHigh - aLow * bHigh - aHigh * bLow);
}
