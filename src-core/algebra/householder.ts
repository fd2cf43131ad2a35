/**
 * A tall matrix as reflections times a triangle, X = Q R. `work` holds the reflections: column j is the unit mirror of step j from
 * cell j on (what stands above it is left over from the triangle).
 */
export interface Reflected {
  readonly work: readonly Float64Array[];
  /** R: k columns, the upper triangle alone filled. */
  readonly triangle: readonly Float64Array[];
}

/**
 * Householder reflections of a tall matrix, in doubles.
 *
 *     X = Q R
 *
 * columns: k of length G >= k, scaled by the caller so that no square overflows. They are overwritten.
 * A column that the earlier ones explain leaves a pivot near 0 on the triangle; nothing is judged here.
 *
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.2.
 */
export function reflectAll(columns: readonly Float64Array[]): Reflected {
  const k = columns.length;
  const triangle = columns.map(() => new Float64Array(k));
  for (let j = 0; j < k; j++) {
    const pivotal = columns[j] as Float64Array;
    (triangle[j] as Float64Array).set(pivotal.subarray(0, j));
    (triangle[j] as Float64Array)[j] = makeMirror(pivotal, j);
    for (let i = j + 1; i < k; i++) reflect(columns[i] as Float64Array, pivotal, j);
  }
  return { work: columns, triangle };
}

/** Q'v in place. */
export function towardsTriangle({ work }: Reflected, v: Float64Array): void {
  for (let j = 0; j < work.length; j++) reflect(v, work[j] as Float64Array, j);
}

/** Q v in place. */
export function awayFromTriangle({ work }: Reflected, v: Float64Array): void {
  for (let j = work.length - 1; j >= 0; j--) reflect(v, work[j] as Float64Array, j);
}

/** The first k columns of Q, orthonormal, each of length G. */
export function basisOf(reflected: Reflected, cells: number): Float64Array[] {
  return reflected.work.map((_, j) => {
    const column = new Float64Array(cells);
    column[j] = 1;
    awayFromTriangle(reflected, column);
    return column;
  });
}

/** Turns a column's tail into the unit mirror that sends it onto its first place; returns what arrives there. */
function makeMirror(column: Float64Array, from: number): number {
  const length = lengthFrom(column, from);
  if (length === 0) {
    column.fill(0, from);
    return 0;
  }
  const first = column[from] as number;
  const arrives = first < 0 ? length : -length;
  column[from] = first - arrives;
  const mirror = lengthFrom(column, from);
  for (let g = from; g < column.length; g++) column[g] = (column[g] as number) / mirror;
  return arrives;
}

function reflect(column: Float64Array, mirror: Float64Array, from: number): void {
  let along = 0;
  for (let g = from; g < column.length; g++) along += (mirror[g] as number) * (column[g] as number);
  along *= 2;
  for (let g = from; g < column.length; g++) column[g] = (column[g] as number) - along * (mirror[g] as number);
}

function lengthFrom(column: Float64Array, from: number): number {
  let sum = 0;
  for (let g = from; g < column.length; g++) sum += (column[g] as number) * (column[g] as number);
  return Math.sqrt(sum);
}
