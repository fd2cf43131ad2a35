import { allOf } from '../kernels/kernels';
import { choleskyOf } from './cholesky';
import type { TallPlaces } from './tall';
import { solveUpper } from './triangle';

/** Inner products this close to those of orthonormal columns are left as they are: 2^-48. */
const CLOSE = 3.552713678800501e-15;

/**
 * The orthonormal basis of a tall whitened design.
 *
 *     Q = X R^-1, and where that has lost digits once more Q S^-1 with Q'Q = S'S
 *
 * places: with their columns and roots still in the memory, and room behind them for k rounded up to 4 columns and their inner products.
 * Returns k columns of length G.
 * Source: Yamamoto, Nakatsukasa, Yanagisawa & Fukaya 2015, with R from reflections.
 */
export function tallBasis(places: TallPlaces, inverse: readonly Float64Array[]): Float64Array[] {
  const { room, rows, k, chunks, cells, stride, columns, roots, block, end } = places;
  const { m, run } = room;
  const wide = 4 * Math.ceil(k / 4);
  const matrix = end;
  const into = matrix + wide * k;
  const grams = into + wide * stride;
  const all = allOf(rows);
  const common = { k, matrix, upTo: 1, into, intoStride: stride, after: 0, block, stride };
  putTriangle(m, matrix, inverse);
  run.times({ ...common, columns, factors: roots, grams }, all);
  run.joinSums(grams, chunks, wide * wide);
  const second = orthonormalising(m, { grams, wide, k });
  if (second) {
    putTriangle(m, matrix, second);
    run.times({ ...common, columns: into, factors: 0, grams: 0 }, all);
  }
  return inverse.map((_, j) => m.slice(into + j * stride, into + j * stride + cells));
}

/** S^-1 as columns; null where the inner products are those of an orthonormal basis as they are. */
function orthonormalising(
  m: Float64Array,
  { grams, wide, k }: { readonly grams: number; readonly wide: number; readonly k: number },
): Float64Array[] | null {
  const gram = new Float64Array(k * k);
  let farthest = 0;
  for (let i = 0; i < k; i++)
    for (let j = i; j < k; j++) {
      const value = m[grams + i * wide + j] as number;
      gram[j * k + i] = value;
      farthest = Math.max(farthest, Math.abs(value - (i === j ? 1 : 0)));
    }
  if (farthest <= CLOSE) return null;
  const lower = choleskyOf(gram, k);
  if (!lower) return null;
  const upper = Array.from({ length: k }, (_, j) => lower.subarray(j * k, j * k + k));
  return upper.map((_, j) => {
    const unit = new Float64Array(k);
    unit[j] = 1;
    return solveUpper(upper, unit);
  });
}

/** An upper triangle as the kernels take it: for each pair of columns two numbers a row. */
function putTriangle(m: Float64Array, at: number, columns: readonly Float64Array[]): void {
  const k = columns.length;
  m.fill(0, at, at + 4 * Math.ceil(k / 4) * k);
  for (const [c, column] of columns.entries())
    for (let j = 0; j <= c; j++) m[at + (c - (c % 2)) * k + 2 * j + (c % 2)] = column[j] as number;
}
