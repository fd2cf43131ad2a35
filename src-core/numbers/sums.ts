import { add, type Pair, restOfProduct, twoProduct, twoSum, ZERO } from './double-double';

/**
 * The sum of values in their order, as if added in twice the digits and rounded once.
 *
 *     relative error below eps + n^2 eps^2 sum |x| / |sum x|
 *
 * values: any length, 0 where empty; a NaN makes the sum NaN.
 *
 * Example: sum([1e16, 1, -1e16]) = 1.
 * Source: Ogita, Rump & Oishi 2005, algorithm 4.4.
 */
export function sum(values: ArrayLike<number>): number {
  let high = 0;
  let low = 0;
  for (let g = 0; g < values.length; g++) {
    const value = values[g] as number;
    const total = high + value;
    const part = total - high;
    low += high - (total - part) + (value - part);
    high = total;
  }
  return rounded(high, low);
}

/**
 * The sum of products of two equally long lists, as if in twice the digits and rounded once.
 *
 *     sum_g a_g b_g
 *
 * Lists of different lengths are the caller's bug and throw.
 *
 * Example: dot([1e8, 1], [1e8, 1]) = 10000000000000001 rounded to a double.
 * Source: Ogita, Rump & Oishi 2005, algorithm 5.3.
 */
export function dot(a: ArrayLike<number>, b: ArrayLike<number>): number {
  if (a.length !== b.length) throw new RangeError(`lists of ${a.length} and ${b.length} have no product`);
  let high = 0;
  let low = 0;
  for (let g = 0; g < a.length; g++) {
    const left = a[g] as number;
    const right = b[g] as number;
    const product = left * right;
    const total = high + product;
    const part = total - high;
    low += high - (total - part) + (product - part) + restOfProduct(left, right, product);
    high = total;
  }
  return rounded(high, low);
}

/** The sum of squares, as dot of the list with itself. Example: sumOfSquares([3, 4]) = 25. */
export function sumOfSquares(values: ArrayLike<number>): number {
  return dot(values, values);
}

/** The sum of products as doubles add up: for loops over draws, where last digits do not count and time does. Example: plainDot([1, 2], [3, 4]) = 11. */
export function plainDot(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let total = 0;
  for (let g = 0; g < a.length; g++) total += (a[g] as number) * (b[g] as number);
  return total;
}

/** The sum of squares as doubles add up. Example: plainSquares([3, 4]) = 25. */
export function plainSquares(values: ArrayLike<number>): number {
  return plainDot(values, values);
}

/** The arithmetic mean; an empty list has none and throws, a caller's bug. Example: mean([1, 2, 6]) = 3. */
export function mean(values: ArrayLike<number>): number {
  if (values.length === 0) throw new RangeError('an empty list has no mean');
  return sum(values) / values.length;
}

/** The Euclidean length, safe from overflow and underflow. Example: lengthOf([3e200, 4e200]) = 5e200. */
export function lengthOf(values: ArrayLike<number>): number {
  let largest = 0;
  for (let g = 0; g < values.length; g++) largest = Math.max(largest, Math.abs(values[g] as number));
  if (largest === 0 || !(largest < Infinity)) return largest;
  if (largest > 1e-140 && largest < 1e140) return Math.sqrt(sumOfSquares(values));
  const unit = Math.max(largest, 1e-300);
  return unit * Math.sqrt(sumOfSquares(Array.from(values, (value) => value / unit)));
}

/**
 * The length of a list through a diagonal, safe from overflow and underflow.
 *
 *     root of sum a_g^2 v_g
 *
 * v: 0 or above; a NaN makes it NaN. All terms are of one sign, so that what additions lose is carried along and rounded once.
 *
 * Example: lengthThrough([3, 4], [1, 4]) = 8.54400374531753.
 */
export function lengthThrough(a: ArrayLike<number>, v: ArrayLike<number>): number {
  let largest = 0;
  let total = 0;
  let rest = 0;
  for (let g = 0; g < a.length; g++) {
    const part = (a[g] as number) * Math.sqrt(v[g] as number);
    const square = part * part;
    const next = total + square;
    const gained = next - total;
    rest += total - (next - gained) + (square - gained);
    total = next;
    const size = Math.abs(part);
    if (!(size <= largest)) largest = Number.isNaN(largest) ? largest : size;
  }
  if (largest > 1e-140 && largest < 1e140) return Math.sqrt(total + rest);
  return lengthOf(Float64Array.from(a, (value, g) => value * Math.sqrt(v[g] as number)));
}

/** The sum in double-double, of doubles or (with lows) of double-doubles. Example: sumPair([1, 1e-20]) = [1, 1e-20]. */
export function sumPair(highs: ArrayLike<number>, lows?: ArrayLike<number>): Pair {
  let total: Pair = ZERO;
  for (let g = 0; g < highs.length; g++) total = add(total, [highs[g] as number, lows ? (lows[g] as number) : 0]);
  return total;
}

/** The sum of products in double-double. Lists of different lengths throw. Example: dotPair([0.1], [3]) = [0.30000000000000004, ...]. */
export function dotPair(a: ArrayLike<number>, b: ArrayLike<number>): Pair {
  if (a.length !== b.length) throw new RangeError(`lists of ${a.length} and ${b.length} have no product`);
  let total: Pair = ZERO;
  for (let g = 0; g < a.length; g++) total = add(total, twoProduct(a[g] as number, b[g] as number));
  return total;
}

/** An infinite total keeps its sign: what rounding took from it is not a number. */
function rounded(high: number, low: number): number {
  return Math.abs(high) < Infinity ? twoSum(high, low)[0] : high;
}
