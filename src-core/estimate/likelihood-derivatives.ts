import { forwardInPlace } from '../algebra/cholesky';
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
}

/**
 * Score of one likelihood.
 *
 * rows, weighed: the least-squares solution at theta; slopes: d_i unit_i / v of each free parameter, a row. Formulas: `likelihoodAt`.
 */
export function scoreOf(model: Derived): Float64Array {
  const score = new Float64Array(model.slopes.length);
  const { relative, residuals } = model.weighed;
  overRows(model, (g, leverage) => {
    const square = (relative[g] as number) * (residuals[g] as number) * (residuals[g] as number);
    const excess = (square - ((model.rows.count[g] as number) - leverage)) / 2;
    for (let a = 0; a < score.length; a++)
      score[a] = (score[a] as number) + ((model.slopes[a] as Float64Array)[g] as number) * excess;
  });
  return score;
}

/** Expected information of one likelihood, as rows; what it takes as in `scoreOf`. */
export function informationOf(model: Derived): Float64Array[] {
  const { rows, slopes, restricted } = model;
  const { relative } = model.weighed;
  const q = slopes.length;
  const information = slopes.map(() => new Float64Array(q));
  const spreads = slopes.map(() => new Float64Array(rows.terms * rows.terms));
  overRows(model, (g, leverage, z) => {
    const left = ((rows.count[g] as number) - 2 * leverage) / 2;
    for (let a = 0; a < q; a++) {
      const d = (slopes[a] as Float64Array)[g] as number;
      const row = information[a] as Float64Array;
      for (let b = 0; b <= a; b++) row[b] = (row[b] as number) + d * ((slopes[b] as Float64Array)[g] as number) * left;
      if (restricted) addOuter(spreads[a] as Float64Array, z, d * (relative[g] as number));
    }
  });
  return completed(information, spreads, rows.terms);
}

/** Visits every row with its leverage (0 under the full likelihood) and L^-1 q, which is overwritten from row to row. */
function overRows(
  { rows, weighed, restricted }: Derived,
  visit: (g: number, leverage: number, z: Float64Array) => void,
): void {
  const { terms: k, basis } = rows;
  const { relative, factor } = weighed;
  const z = new Float64Array(k);
  for (let g = 0, at = 0; g < relative.length; g++, at += k) {
    let leverage = 0;
    if (restricted) {
      for (let i = 0; i < k; i++) z[i] = basis[at + i] as number;
      forwardInPlace(factor, z, k);
      for (let i = 0; i < k; i++) leverage += (relative[g] as number) * (z[i] as number) * (z[i] as number);
    }
    visit(g, leverage, z);
  }
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

/** Lower triangle of target += factor z z'. */
function addOuter(target: Float64Array, z: Float64Array, factor: number): void {
  const k = z.length;
  for (let i = 0; i < k; i++) {
    const fz = factor * (z[i] as number);
    for (let j = 0; j <= i; j++) target[i * k + j] = (target[i * k + j] as number) + fz * (z[j] as number);
  }
}

/** tr(A B) of two symmetric matrices of which the lower triangles are kept. */
function traceOfProduct(a: Float64Array, b: Float64Array, k: number): number {
  let sum = 0;
  for (let i = 0; i < k; i++)
    for (let j = 0; j <= i; j++) sum += (i === j ? 1 : 2) * (a[i * k + j] as number) * (b[i * k + j] as number);
  return sum;
}
