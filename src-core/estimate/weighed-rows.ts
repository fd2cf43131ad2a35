import { choleskyOf, solveByFactor } from '../algebra/cholesky';
import { reflectAll, towardsTriangle } from '../algebra/householder';
import { solveUpper } from '../algebra/triangle';
import { sumOfSquares } from '../numbers/sums';
import type { LikelihoodRows } from './likelihood-rows';

/** Below this pivot, as a share of its diagonal, normal equations would cost too many digits of the determinant. */
const SHAKY = 1e-6;
/** Below this share of its length a weighted column is explained by the others, to rounding. */
const NOTHING = 1e-14;

type Rows = Pick<LikelihoodRows, 'terms' | 'basis' | 'response'>;

/** Weighted least squares on the rows of a likelihood. */
export interface WeighedRows {
  /** Lower factor L of Q' W Q = L L', row after row. */
  readonly factor: Float64Array;
  /** Length of the rows, not weighted. */
  readonly residuals: Float64Array;
  readonly weightedRss: number;
}

/**
 * Weighted least squares on the orthonormal rows of a likelihood: by small normal equations, well conditioned by their making while weights are
 * near 1; by reflections where weights are so uneven that those would lose digits.
 *
 * weights: one a row, above 0. Null where the weights leave a column that the others explain.
 */
export function weighedRows(rows: Rows, weights: Float64Array): WeighedRows | null {
  const { gram, right } = normalEquations(rows, weights);
  const factor = choleskyOf(gram, rows.terms);
  if (!factor || smallestPivot(factor, gram, rows.terms) < SHAKY) return byReflections(rows, weights);
  return withResiduals({ rows, weights, factor, solution: solveByFactor(factor, right, rows.terms) });
}

function smallestPivot(factor: Float64Array, gram: Float64Array, k: number): number {
  let smallest = 1;
  for (let i = 0; i < k; i++) {
    const pivot = factor[i * k + i] as number;
    smallest = Math.min(smallest, (pivot * pivot) / (gram[i * k + i] as number));
  }
  return smallest;
}

function byReflections(rows: Rows, weights: Float64Array): WeighedRows | null {
  const { terms: k, basis, response } = rows;
  // Heaviest rows first: reflections are then stable row by row.
  const order = [...weights.keys()].sort((a, b) => (weights[b] as number) - (weights[a] as number) || a - b);
  const rooted = (of: (g: number) => number) =>
    Float64Array.from(order, (g) => Math.sqrt(weights[g] as number) * of(g));
  const columns = Array.from({ length: k }, (_, j) => rooted((g) => basis[g * k + j] as number));
  const lengths = columns.map((column) => Math.sqrt(sumOfSquares(column)));
  const reflected = reflectAll(columns);
  const signs = reflected.triangle.map((column, j) => ((column[j] as number) < 0 ? -1 : 1));
  const factor = new Float64Array(k * k);
  for (const [i, column] of reflected.triangle.entries()) {
    if (!(Math.abs(column[i] as number) > NOTHING * (lengths[i] as number))) return null;
    for (let j = 0; j <= i; j++) factor[i * k + j] = (signs[j] as number) * (column[j] as number);
  }
  const target = rooted((g) => response[g] as number);
  towardsTriangle(reflected, target);
  return withResiduals({ rows, weights, factor, solution: solveUpper(reflected.triangle, target) });
}

function normalEquations(rows: Rows, weights: Float64Array): { gram: Float64Array; right: Float64Array } {
  const { terms: k, basis, response } = rows;
  const gram = new Float64Array(k * k);
  const right = new Float64Array(k);
  for (let g = 0, at = 0; g < weights.length; g++, at += k) {
    const w = weights[g] as number;
    const y = w * (response[g] as number);
    for (let i = 0; i < k; i++) {
      const q = basis[at + i] as number;
      const wq = w * q;
      right[i] = (right[i] as number) + q * y;
      for (let j = 0; j <= i; j++) gram[i * k + j] = (gram[i * k + j] as number) + wq * (basis[at + j] as number);
    }
  }
  return { gram, right };
}

function withResiduals(solved: {
  readonly rows: Rows;
  readonly weights: Float64Array;
  readonly factor: Float64Array;
  readonly solution: Float64Array;
}): WeighedRows {
  const { rows, weights, factor, solution } = solved;
  const { terms: k, basis, response } = rows;
  const residuals = new Float64Array(weights.length);
  let weightedRss = 0;
  for (let g = 0, at = 0; g < weights.length; g++, at += k) {
    let r = response[g] as number;
    for (let i = 0; i < k; i++) r -= (basis[at + i] as number) * (solution[i] as number);
    residuals[g] = r;
    weightedRss += (weights[g] as number) * r * r;
  }
  return { factor, residuals, weightedRss };
}
