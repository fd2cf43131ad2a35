import { FIRST_PLACE, roomFor } from '../kernels/kernels';

/**
 * The lower Cholesky factor of a large symmetric matrix, by the kernels; null where a pivot is at or below `least` of its diagonal entry.
 *
 * matrix: n x n, row after row, of which the lower triangle is read.
 */
export function largeCholesky(matrix: Float64Array, n: number, least: number): Float64Array | null {
  const padded = Math.ceil(n / 8) * 8;
  const pitch = padded + 8; // rows must not all lie on the same lines of the cache
  const a = FIRST_PLACE;
  const diagonal = a + (padded + 4) * pitch;
  const { m, run } = roomFor(diagonal + n);
  m.fill(0, a, diagonal);
  for (let i = 0; i < n; i++) m.set(matrix.subarray(i * n, i * n + i + 1), a + i * pitch);
  if (run.factor({ a, pitch, n, least, diagonal }) >= 0) return null;
  const factor = new Float64Array(n * n);
  for (let i = 0; i < n; i++) factor.set(m.subarray(a + i * pitch, a + i * pitch + i + 1), i * n);
  return factor;
}
