import { plainDot, plainSquares } from '../numbers/sums';
import { rankTolerance } from '../numbers/tolerances';
import { largestOf } from './powers-of-two';

/**
 * Orthonormal vectors that span what the columns add to an orthonormal start; a column that the earlier ones explain is dropped.
 *
 *     z_j = (I - Z Z') x_j, scaled to unit length; twice, so that Z'Z = I to the last digits
 *
 * columns: of length G, any unit; start: orthonormal vectors of length G, not returned. None is changed.
 * A column is dropped where less than max(G, 10 k) eps of its length is left.
 *
 * Example: `spanOf([[1, 1], [2, 2]])` is one vector, (1, 1) / root 2.
 * Source: Giraud, Langou & Rozloznik 2005 (twice is enough).
 */
export function spanOf(columns: readonly Float64Array[], start: readonly Float64Array[] = []): Float64Array[] {
  const tolerance = rankTolerance(columns[0]?.length ?? 0, columns.length + start.length);
  const basis: Float64Array[] = [];
  for (const column of columns) {
    const vector = scaledToUnit(column);
    if (!vector) continue;
    const left = clear(vector, start, basis);
    if (left < tolerance) continue;
    divide(vector, left);
    divide(vector, clear(vector, start, basis));
    basis.push(vector);
  }
  return basis;
}

/** y less its projection on an orthonormal basis, into `into`. */
export function projectOut(
  basis: readonly Float64Array[],
  y: Float64Array,
  into: Float64Array = new Float64Array(y.length),
): Float64Array {
  into.set(y);
  for (const vector of basis) subtract(into, vector, plainDot(vector, into));
  return into;
}

/** The projection of y on an orthonormal basis, into `into`. */
export function projectOnto(basis: readonly Float64Array[], y: Float64Array, into: Float64Array): Float64Array {
  into.fill(0);
  for (const vector of basis) subtract(into, vector, -plainDot(vector, y));
  return into;
}

/** Diagonal of Q Q': what the span of an orthonormal basis takes of each cell, at most 1 to rounding. */
export function leveragesOf(basis: readonly Float64Array[], cells: number): Float64Array {
  const sums = new Float64Array(cells);
  for (const vector of basis)
    for (let g = 0; g < cells; g++) sums[g] = (sums[g] as number) + (vector[g] as number) * (vector[g] as number);
  for (let g = 0; g < cells; g++) if ((sums[g] as number) > 1) sums[g] = 1;
  return sums;
}

function clear(vector: Float64Array, ...bases: readonly (readonly Float64Array[])[]): number {
  for (const basis of bases) for (const earlier of basis) subtract(vector, earlier, plainDot(earlier, vector));
  return Math.sqrt(plainSquares(vector));
}

function subtract(from: Float64Array, vector: Float64Array, times: number): void {
  for (let g = 0; g < from.length; g++) from[g] = (from[g] as number) - times * (vector[g] as number);
}

function divide(vector: Float64Array, by: number): void {
  for (let g = 0; g < vector.length; g++) vector[g] = (vector[g] as number) / by;
}

/** Null for a column of zeros; divided by its largest entry first, so that no square runs over or under. */
function scaledToUnit(column: Float64Array): Float64Array | null {
  const largest = largestOf(column);
  if (largest === 0) return null;
  const vector = column.map((x) => x / largest);
  divide(vector, Math.sqrt(plainSquares(vector)));
  return vector;
}
