import type { Decimals } from '../numbers/decimals';
import { plainRestOfProduct } from '../numbers/error-free';

/** 2^27 + 1: splits a double into two halves of 26 bits (Dekker 1971). */
const SPLIT = 134217729;

/** A double-double number that a kernel writes into: [high, low]. */
export type WideNumber = Float64Array;

export function wideZeros(length: number): Decimals {
  return { high: new Float64Array(length), low: new Float64Array(length) };
}

export function wideCopy(column: Decimals): Decimals {
  return { high: column.high.slice(), low: column.low.slice() };
}

/**
 * The inner product of two double-double columns from one cell on, in about twice the precision of a double.
 *
 *     sum over g >= from of a_g b_g
 *
 * a, b: equal lengths, finite, none so large that 2^27 times it overflows. Writes [high, low] into `into` and returns it.
 *
 * Source: Ogita, Rump & Oishi 2005 (Dot2), with Dekker's product.
 */
export function wideDot(into: WideNumber, a: Decimals, b: Decimals, from = 0): WideNumber {
  into[0] = 0;
  into[1] = 0;
  wideAddProducts(into, { a, from, b, start: from, count: a.high.length - from, sign: 1 });
  return into;
}

/**
 * into += sign times the sum of a_(from + i) b_(start + i) over count places, in about twice the precision of a double.
 *
 * into: [high, low]. Source: Ogita, Rump & Oishi 2005 (Dot2), with Dekker's product.
 */
export function wideAddProducts(
  into: WideNumber,
  of: {
    readonly a: Decimals;
    readonly from: number;
    readonly b: Decimals;
    readonly start: number;
    readonly count: number;
    readonly sign: 1 | -1;
  },
): void {
  const { a, from, b, start, count, sign } = of;
  const { high: ah, low: al } = a;
  const { high: bh, low: bl } = b;
  let sum = into[0] as number;
  let rest = into[1] as number;
  for (let i = 0; i < count; i++) {
    const x = sign * (ah[from + i] as number);
    const y = bh[start + i] as number;
    const product = x * y;
    let t = SPLIT * x;
    const x1 = t - (t - x);
    const x2 = x - x1;
    t = SPLIT * y;
    const y1 = t - (t - y);
    const y2 = y - y1;
    const error =
      x1 * y1 -
      product +
      x1 * y2 +
      x2 * y1 +
      x2 * y2 +
      (x * (bl[start + i] as number) + y * sign * (al[from + i] as number));
    const next = sum + product;
    const part = next - sum;
    rest += sum - (next - part) + (product - part) + error;
    sum = next;
  }
  into[0] = sum + rest;
  into[1] = sum - into[0] + rest;
}

/**
 * Adds a multiple of one double-double column to another, in place, from one cell on: target += factor column.
 *
 * factor: [high, low]. The caller's target is changed; column is left alone.
 *
 * Source: Dekker 1971.
 */
export function wideAdd(target: Decimals, factor: ArrayLike<number>, column: Decimals, from = 0): void {
  const { high, low } = target;
  const { high: ch, low: cl } = column;
  const f = factor[0] as number;
  const fl = factor[1] as number;
  let t = SPLIT * f;
  const f1 = t - (t - f);
  const f2 = f - f1;
  for (let g = from; g < high.length; g++) {
    const x = ch[g] as number;
    const product = f * x;
    t = SPLIT * x;
    const x1 = t - (t - x);
    const x2 = x - x1;
    const error = f1 * x1 - product + f1 * x2 + f2 * x1 + f2 * x2 + (f * (cl[g] as number) + fl * x);
    const old = high[g] as number;
    const next = old + product;
    const part = next - old;
    const rest = old - (next - part) + (product - part) + ((low[g] as number) + error);
    const sum = next + rest;
    high[g] = sum;
    low[g] = next - sum + rest;
  }
}

/** Each cell of a column times a double-double factor of its own, as a new column. */
export function wideTimes(column: Decimals, factors: Decimals): Decimals {
  const result = wideZeros(column.high.length);
  for (let g = 0; g < column.high.length; g++)
    wideProduct(
      result,
      g,
      column.high[g] as number,
      column.low[g] as number,
      factors.high[g] as number,
      factors.low[g] as number,
    );
  return result;
}

/** Writes the product of two double-double numbers into place g of a column. */
export function wideProduct(into: Decimals, g: number, a: number, al: number, b: number, bl: number): void {
  const product = a * b;
  const rest = plainRestOfProduct(a, b, product) + (a * bl + al * b);
  const sum = product + rest;
  into.high[g] = sum;
  into.low[g] = product - sum + rest;
}

/** a / b of two double-double numbers, written into `into`. */
export function wideQuotient(into: WideNumber, a: ArrayLike<number>, b: ArrayLike<number>): WideNumber {
  const bh = b[0] as number;
  const first = (a[0] as number) / bh;
  const left = leftOver(a, first, b);
  const second = left / bh;
  into[0] = first + second;
  into[1] = first - into[0] + second;
  return into;
}

/** The root of a double-double number above 0, written into `into`; the root of 0 is 0. */
export function wideRoot(into: WideNumber, a: ArrayLike<number>): WideNumber {
  const first = Math.sqrt(a[0] as number);
  if (first === 0) {
    into[0] = 0;
    into[1] = 0;
    return into;
  }
  const second = leftOver(a, first, [first, 0]) / (2 * first);
  into[0] = first + second;
  into[1] = first - into[0] + second;
  return into;
}

/** a - q b, for a q that is close to a / b: what a division leaves over, exact enough for its second step. */
function leftOver(a: ArrayLike<number>, q: number, b: ArrayLike<number>): number {
  const bh = b[0] as number;
  const product = q * bh;
  return (a[0] as number) - product - plainRestOfProduct(q, bh, product) + (a[1] as number) - q * (b[1] as number);
}
