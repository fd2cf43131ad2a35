import { forwardInPlace } from '../algebra/cholesky';
import { plainDot } from '../numbers/sums';
import type { LikelihoodRows } from './likelihood-rows';

/** d_i unit_i / v for every row; derivative and variances: one entry a cell. */
export function rowSlopes(
  rows: LikelihoodRows,
  at: { readonly derivative: Float64Array; readonly unit: number; readonly variances: Float64Array },
): Float64Array {
  const slopes = new Float64Array(rows.cellOf.length);
  for (let g = 0; g < slopes.length; g++) {
    const cell = rows.cellOf[g] as number;
    slopes[g] = ((at.derivative[cell] as number) * at.unit) / (at.variances[cell] as number);
  }
  return slopes;
}

interface Derived {
  readonly rows: LikelihoodRows;
  readonly weighed: {
    readonly relative: Float64Array;
    readonly residuals: Float64Array;
    readonly factor: Float64Array;
  };
  readonly slopes: readonly Float64Array[];
  readonly restricted: boolean;
  readonly turned: Turned;
}

/** L^-1 q of every row, row after row, and the leverages relative q' (L L')^-1 q; under the full likelihood leverages are 0 and nothing is turned. */
interface Turned {
  readonly vectors: Float64Array;
  readonly leverages: Float64Array;
}

/** What score and information both need of the rows. */
export function turnedRows({ rows, weighed, restricted }: Omit<Derived, 'slopes' | 'turned'>): Turned {
  const { terms: k, basis } = rows;
  const { relative, factor } = weighed;
  const leverages = new Float64Array(relative.length);
  if (!restricted) return { vectors: new Float64Array(0), leverages };
  const inverse = inverseOfLower(factor, k);
  const vectors = new Float64Array(relative.length * k);
  for (let g = 0, at = 0; g < leverages.length; g++, at += k) {
    let squares = 0;
    for (let i = 0; i < k; i++) {
      let z = 0;
      for (let j = 0; j <= i; j++) z += (inverse[i * k + j] as number) * (basis[at + j] as number);
      vectors[at + i] = z;
      squares += z * z;
    }
    leverages[g] = (relative[g] as number) * squares;
  }
  return { vectors, leverages };
}

/** L^-1, row after row. */
function inverseOfLower(factor: Float64Array, k: number): Float64Array {
  const inverse = new Float64Array(k * k);
  const column = new Float64Array(k);
  for (let j = 0; j < k; j++) {
    column.fill(0);
    column[j] = 1;
    forwardInPlace(factor, column, k);
    for (let i = j; i < k; i++) inverse[i * k + j] = column[i] as number;
  }
  return inverse;
}

/**
 * Score of one likelihood.
 *
 * rows, weighed: the least-squares solution at theta; slopes: d_i unit_i / v of each free parameter, a row. Formulas: `likelihoodAt`.
 */
export function scoreOf({ rows, weighed, slopes, turned }: Derived): Float64Array {
  const { relative, residuals } = weighed;
  const excess = new Float64Array(relative.length);
  for (let g = 0; g < excess.length; g++) {
    const square = (relative[g] as number) * (residuals[g] as number) * (residuals[g] as number);
    excess[g] = (square - ((rows.count[g] as number) - (turned.leverages[g] as number))) / 2;
  }
  return Float64Array.from(slopes, (slope) => plainDot(slope, excess));
}

/** Expected information of one likelihood, as rows; what it takes as in `scoreOf`. */
export function informationOf({ rows, weighed, slopes, restricted, turned }: Derived): Float64Array[] {
  const { terms: k, count } = rows;
  const { relative } = weighed;
  const q = slopes.length;
  const information = slopes.map(() => new Float64Array(q));
  const spreads = slopes.map(() => new Float64Array(k * k));
  for (let a = 0; a < q; a++) {
    const slope = slopes[a] as Float64Array;
    const row = information[a] as Float64Array;
    for (let b = 0; b <= a; b++) {
      const other = slopes[b] as Float64Array;
      let sum = 0;
      for (let g = 0; g < slope.length; g++) {
        const left = ((count[g] as number) - 2 * (turned.leverages[g] as number)) / 2;
        sum += (slope[g] as number) * (other[g] as number) * left;
      }
      row[b] = sum;
    }
    if (!restricted) continue;
    const spread = spreads[a] as Float64Array;
    for (let g = 0, at = 0; g < slope.length; g++, at += k)
      addOuter(spread, turned.vectors, at, (slope[g] as number) * (relative[g] as number), k);
  }
  return completed(information, spreads, k);
}

/** Adds tr(S_i S_j) / 2 and mirrors the lower triangle. */
function completed(lower: readonly Float64Array[], spreads: readonly Float64Array[], k: number): Float64Array[] {
  const rows = lower.map((row) => row.slice());
  for (let a = 0; a < rows.length; a++)
    for (let b = 0; b <= a; b++) {
      const trace = traceOfProduct(spreads[a] as Float64Array, spreads[b] as Float64Array, k);
      const value = ((lower[a] as Float64Array)[b] as number) + trace / 2;
      (rows[a] as Float64Array)[b] = value;
      (rows[b] as Float64Array)[a] = value;
    }
  return rows;
}

/** Lower triangle of target += factor z z', z from a place on. */
function addOuter(target: Float64Array, vectors: Float64Array, at: number, factor: number, k: number): void {
  for (let i = 0; i < k; i++) {
    const fz = factor * (vectors[at + i] as number);
    for (let j = 0; j <= i; j++) target[i * k + j] = (target[i * k + j] as number) + fz * (vectors[at + j] as number);
  }
}

/** tr(A B) of two symmetric matrices of which the lower triangles are kept. */
function traceOfProduct(a: Float64Array, b: Float64Array, k: number): number {
  let sum = 0;
  for (let i = 0; i < k; i++)
    for (let j = 0; j <= i; j++) sum += (i === j ? 1 : 2) * (a[i * k + j] as number) * (b[i * k + j] as number);
  return sum;
}
