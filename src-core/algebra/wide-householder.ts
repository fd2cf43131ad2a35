import type { Decimals } from '../numbers/decimals';
import { type WideNumber, wideAdd, wideCopy, wideDot, wideProduct, wideQuotient, wideRoot, wideZeros } from './wide';

/** What a wholly double-double solve gives: everything that hangs on the triangle, to more digits than a double holds. */
export interface WideSolved {
  readonly solution: Decimals;
  /** R^-1 as columns. */
  readonly inverse: readonly Decimals[];
  readonly triangle: readonly Decimals[];
}

/**
 * Least squares by Householder reflections in double-double.
 *
 *     min || y - X b ||,  X = Q R
 *
 * columns, y: k columns of length G >= k and one more, scaled to entries near 1 at most. None is changed.
 * The columns must be independent: rank is judged before.
 *
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.2-5.3; Dekker 1971.
 */
export function wideLeastSquares(columns: readonly Decimals[], y: Decimals): WideSolved {
  const k = columns.length;
  const work = columns.map(wideCopy);
  const target = wideCopy(y);
  const triangle = columns.map(() => wideZeros(k));
  for (let j = 0; j < k; j++) {
    const pivotal = work[j] as Decimals;
    const column = triangle[j] as Decimals;
    column.high.set(pivotal.high.subarray(0, j));
    column.low.set(pivotal.low.subarray(0, j));
    makeMirror(pivotal, j, column);
    for (let i = j + 1; i < k; i++) reflect(work[i] as Decimals, pivotal, j);
    reflect(target, pivotal, j);
  }
  const inverse = triangle.map((_, j) => {
    const unit = wideZeros(k);
    unit.high[j] = 1;
    return solveUpper(triangle, unit);
  });
  return { solution: solveUpper(triangle, target), inverse, triangle };
}

/** X R^-1: the orthonormal basis of the columns, rounded to doubles. */
export function wideBasis(columns: readonly Decimals[], inverse: readonly Decimals[]): Float64Array[] {
  return inverse.map((shares, j) => {
    const sum = wideZeros(columns[0]?.high.length ?? 0);
    for (let i = 0; i <= j; i++)
      wideAdd(sum, [shares.high[i] as number, shares.low[i] as number], columns[i] as Decimals);
    return sum.high;
  });
}

/** R^-1 R^-T as rows, rounded to doubles. */
export function wideGramInverse(inverse: readonly Decimals[]): Float64Array[] {
  const k = inverse.length;
  const rowsOfInverse = inverse.map((_, i) => {
    const row = wideZeros(k);
    for (let j = 0; j < k; j++) {
      row.high[j] = (inverse[j] as Decimals).high[i] as number;
      row.low[j] = (inverse[j] as Decimals).low[i] as number;
    }
    return row;
  });
  const sum: WideNumber = new Float64Array(2);
  return rowsOfInverse.map((a) => Float64Array.from(rowsOfInverse, (b) => wideDot(sum, a, b)[0] as number));
}

function solveUpper(triangle: readonly Decimals[], q: Decimals): Decimals {
  const k = triangle.length;
  const x = { high: q.high.slice(0, k), low: q.low.slice(0, k) };
  const value: WideNumber = new Float64Array(2);
  for (let j = k - 1; j >= 0; j--) {
    const column = triangle[j] as Decimals;
    const pivot = [column.high[j] as number, column.low[j] as number];
    wideQuotient(value, [x.high[j] as number, x.low[j] as number], pivot);
    x.high[j] = value[0] as number;
    x.low[j] = value[1] as number;
    const above = { high: x.high.subarray(0, j), low: x.low.subarray(0, j) };
    wideAdd(above, [-(value[0] as number), -(value[1] as number)], column);
  }
  return x;
}

/** Turns a column's tail into a unit mirror; what arrives on its first place goes to the diagonal of the triangle. */
function makeMirror(column: Decimals, from: number, triangleColumn: Decimals): void {
  const { high, low } = column;
  const number: WideNumber = new Float64Array(2);
  wideRoot(number, wideDot(number, column, column, from));
  const sign = (high[from] as number) < 0 ? 1 : -1;
  const arrives = [sign * (number[0] as number), sign * (number[1] as number)];
  triangleColumn.high[from] = arrives[0] as number;
  triangleColumn.low[from] = arrives[1] as number;
  const first = { high: high.subarray(from, from + 1), low: low.subarray(from, from + 1) };
  wideAdd(first, [-1, 0], { high: Float64Array.of(arrives[0] as number), low: Float64Array.of(arrives[1] as number) });
  wideRoot(number, wideDot(number, column, column, from));
  const share = wideQuotient(new Float64Array(2), [1, 0], number);
  for (let g = from; g < high.length; g++)
    wideProduct(column, g, high[g] as number, low[g] as number, share[0] as number, share[1] as number);
}

const along: WideNumber = new Float64Array(2);

function reflect(column: Decimals, mirror: Decimals, from: number): void {
  wideDot(along, mirror, column, from);
  along[0] = -2 * (along[0] as number);
  along[1] = -2 * (along[1] as number);
  wideAdd(column, along, mirror, from);
}
