import { paddedTo } from '../kernels/chunks';
import { scratchOf } from '../kernels/compiled';
import { allOf, FIRST_PLACE, roomFor } from '../kernels/kernels';

/** Work G k^2 from which the kernels are worth their copies. */
const WORTH = 1e5;
/** Doubles between one column and the next beyond its rows: columns must not all lie on the same lines of the cache. */
const APART = 72;

/**
 * Columns times a lower triangle, each row then times a factor of its own: c_j = f sum over i >= j of t_ij q_i.
 *
 * columns: k of length G; triangle: k columns, t_ij = triangle[i][j], so that R^-1 as columns gives Q R^-T; factors: length G.
 *
 * Example: `timesTransposed([[1, 2]], [[3]], [1, 1])` is [[3, 6]].
 */
export function timesTransposed(
  columns: readonly Float64Array[],
  triangle: readonly Float64Array[],
  factors: Float64Array,
): Float64Array[] {
  const k = columns.length;
  const cells = factors.length;
  if (cells * k * k < WORTH) return timesPlainly(columns, triangle, factors);
  const rows = paddedTo(cells);
  const stride = rows + APART;
  const wide = 4 * Math.ceil(k / 4);
  const from = FIRST_PLACE;
  const into = from + k * stride;
  const after = into + wide * stride;
  const matrix = after + rows;
  const block = matrix + wide * k;
  const { m, run } = roomFor(block + 2 * scratchOf(k));
  for (const [j, column] of columns.entries()) m.set(column, from + j * stride);
  m.set(factors, after);
  m.fill(0, matrix, block);
  for (let i = 0; i < k; i++)
    for (let c = 0; c <= i; c++)
      m[matrix + (c - (c % 2)) * k + 2 * i + (c % 2)] = (triangle[i] as Float64Array)[c] as number;
  const product = { columns: from, stride, k, factors: 0, after, matrix, upTo: -1, into, intoStride: stride };
  run.times({ ...product, grams: 0, block }, allOf(rows));
  return columns.map((_, j) => m.slice(into + j * stride, into + j * stride + cells));
}

function timesPlainly(
  columns: readonly Float64Array[],
  triangle: readonly Float64Array[],
  factors: Float64Array,
): Float64Array[] {
  return columns.map((_, j) => {
    const row = new Float64Array(factors.length);
    for (let i = j; i < columns.length; i++) {
      const share = (triangle[i] as Float64Array)[j] as number;
      const column = columns[i] as Float64Array;
      for (let g = 0; g < row.length; g++) row[g] = (row[g] as number) + share * (column[g] as number);
    }
    for (let g = 0; g < row.length; g++) row[g] = (row[g] as number) * (factors[g] as number);
    return row;
  });
}

/**
 * The triangles of the rows of each group: R with X_g = Q_g R, k rows of k numbers, row after row.
 *
 * columns: k of length G; order: the cells group by group; starts: where each group begins in it, and the end. Groups of fewer rows than columns
 * have as many rows that say anything.
 */
export function trianglesOfGroups(
  columns: readonly Float64Array[],
  order: Int32Array,
  starts: Int32Array,
): Float64Array[] {
  const k = columns.length;
  const rows = paddedTo(order.length);
  const stride = rows + APART;
  const groups = starts.length - 1;
  const from = FIRST_PLACE;
  const ordered = from + k * stride;
  const starting = ordered + rows;
  const triangles = starting + groups + 8;
  const size = (k + 1) * (k + 2);
  const block = triangles + groups * size;
  const { m, run } = roomFor(block + 2 * scratchOf(k));
  for (const [j, column] of columns.entries()) m.set(column, from + j * stride);
  m.set(order, ordered);
  m.set(starts, starting);
  run.groups({ columns: from, stride, k, order: ordered, starts: starting, triangles, block }, { from: 0, to: groups });
  return Array.from({ length: groups }, (_, group) => {
    const triangle = new Float64Array(k * k);
    for (let i = 0; i < k; i++)
      for (let j = i; j < k; j++) triangle[i * k + j] = m[triangles + group * size + i * (k + 2) + j] as number;
    return triangle;
  });
}
