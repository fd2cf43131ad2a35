import type { Decimals } from '../numbers/decimals';
import { type WideNumber, wideQuotient, wideRoot, wideZeros } from './wide';

/** 2^27 + 1: splits a double into two halves of 26 bits (Dekker 1971). */
const SPLIT = 134217729;
/** What is left of a diagonal entry below this share of it counts as nothing: entries are known to a double's digits, whatever is computed of them. */
const NOT_DEFINITE = 2e-15;

/**
 * The lower Cholesky factor of a symmetric matrix in double-double, row after row; null where it is not positive definite.
 *
 *     A = L L'
 *
 * matrix: n x n, row after row, of which the lower triangle is read; entries near 1 in size.
 */
export function wideCholeskyOf(matrix: Float64Array, n: number): Decimals | null {
  const factor = wideZeros(n * n);
  const { high, low } = factor;
  const left: WideNumber = new Float64Array(2);
  for (let i = 0; i < n; i++)
    for (let j = 0; j <= i; j++) {
      const entry = matrix[i * n + j] as number;
      left[0] = entry;
      left[1] = 0;
      takeProducts(left, { a: factor, from: i * n, b: factor, start: j * n, count: j });
      if (i !== j) wideQuotient(left, left, [high[j * n + j] as number, low[j * n + j] as number]);
      else if (!((left[0] as number) > NOT_DEFINITE * entry && (left[0] as number) < Infinity)) return null;
      else wideRoot(left, left);
      high[i * n + j] = left[0] as number;
      low[i * n + j] = left[1] as number;
    }
  return factor;
}

/** Solves L x = b in place, in double-double. factor: n x n, row after row; x: length n. */
export function wideForward(factor: Decimals, x: Decimals): void {
  const n = x.high.length;
  const left: WideNumber = new Float64Array(2);
  for (let i = 0; i < n; i++) {
    left[0] = x.high[i] as number;
    left[1] = x.low[i] as number;
    takeProducts(left, { a: factor, from: i * n, b: x, start: 0, count: i });
    wideQuotient(left, left, [factor.high[i * n + i] as number, factor.low[i * n + i] as number]);
    x.high[i] = left[0] as number;
    x.low[i] = left[1] as number;
  }
}

/** left -= sum of a b over count places of two double-double lists. */
function takeProducts(
  left: WideNumber,
  of: {
    readonly a: Decimals;
    readonly from: number;
    readonly b: Decimals;
    readonly start: number;
    readonly count: number;
  },
): void {
  const { a, from, b, start, count } = of;
  const { high: ah, low: al } = a;
  const { high: bh, low: bl } = b;
  let sum = left[0] as number;
  let rest = left[1] as number;
  for (let l = 0; l < count; l++) {
    const x = -(ah[from + l] as number);
    const y = bh[start + l] as number;
    const product = x * y;
    let t = SPLIT * x;
    const x1 = t - (t - x);
    const x2 = x - x1;
    t = SPLIT * y;
    const y1 = t - (t - y);
    const y2 = y - y1;
    const error =
      x1 * y1 - product + x1 * y2 + x2 * y1 + x2 * y2 + (x * (bl[start + l] as number) - (al[from + l] as number) * y);
    const next = sum + product;
    const part = next - sum;
    rest += sum - (next - part) + (product - part) + error;
    sum = next;
  }
  left[0] = sum + rest;
  left[1] = sum - left[0] + rest;
}
