import type { Decimals } from '../numbers/decimals';
import { NOT_DEFINITE_WIDE } from '../numbers/tolerances';
import { type WideNumber, wideAddProducts, wideQuotient, wideRoot, wideZeros } from './wide';

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
      wideAddProducts(left, { a: factor, from: i * n, b: factor, start: j * n, count: j, sign: -1 });
      if (i !== j) wideQuotient(left, left, [high[j * n + j] as number, low[j * n + j] as number]);
      else if (!((left[0] as number) > NOT_DEFINITE_WIDE * entry && (left[0] as number) < Infinity)) return null;
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
    wideAddProducts(left, { a: factor, from: i * n, b: x, start: 0, count: i, sign: -1 });
    wideQuotient(left, left, [factor.high[i * n + i] as number, factor.low[i * n + i] as number]);
    x.high[i] = left[0] as number;
    x.low[i] = left[1] as number;
  }
}
