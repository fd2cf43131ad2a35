import {
  CholeskyDecomposition,
  EigenvalueDecomposition,
  LuDecomposition,
  Matrix,
  SingularValueDecomposition,
} from 'ml-matrix';
import { powerOfTwoBelow } from './powers-of-two';

/**
 * Small dense matrices, given as rows. The only door to ml-matrix: entries are checked to be finite here, and rank is judged relative to the
 * matrix, neither of which the library does.
 */
export type Rows = readonly ArrayLike<number>[];

/** Singular values without their vectors: a fraction of the work. */
const VALUES_ALONE = { computeLeftSingularVectors: false, computeRightSingularVectors: false };

/** Below this share of the largest, an eigenvalue of a scaled matrix counts as nothing. */
const SINGULAR = 1e-14;

/**
 * The eigenvalues of a symmetric matrix, largest first.
 *
 * rows: k x k, finite; the lower triangle is taken as the mirror of the upper. An entry that is not finite is a bug and throws.
 *
 * Example: `symmetricEigenvalues([[2, 0], [0, 3]])` gives [3, 2].
 */
export function symmetricEigenvalues(rows: Rows): Float64Array {
  return symmetricEigen(rows).values;
}

/** Eigenvalues, largest first, and the unit eigenvector of each. */
export function symmetricEigen(rows: Rows): {
  readonly values: Float64Array;
  readonly vectors: readonly Float64Array[];
} {
  const k = rows.length;
  if (k === 0) return { values: new Float64Array(0), vectors: [] };
  const matrix = symmetric(rows);
  const unit = toUnitSize(matrix);
  const parts = new EigenvalueDecomposition(matrix, { assumeSymmetric: true });
  const order = parts.realEigenvalues
    .map((_, i) => i)
    .sort((i, j) => (parts.realEigenvalues[j] as number) - (parts.realEigenvalues[i] as number));
  return {
    values: Float64Array.from(order, (i) => (parts.realEigenvalues[i] as number) * unit),
    vectors: order.map((i) => Float64Array.from(parts.eigenvectorMatrix.getColumn(i))),
  };
}

/**
 * The inverse of a symmetric positive definite matrix; null where it is not one, or so nearly singular that its inverse would be noise.
 * It is scaled to a unit diagonal first, so that units do not matter.
 *
 * rows: k x k, finite. Example: `symmetricInverse([[4]])` gives [[0.25]].
 */
export function symmetricInverse(rows: Rows): Float64Array[] | null {
  if (rows.length === 0) return [];
  const scaled = unitDiagonal(rows);
  if (!scaled) return null;
  const { matrix, roots } = scaled;
  const values = new EigenvalueDecomposition(matrix, { assumeSymmetric: true }).realEigenvalues;
  if (Math.min(...values) <= SINGULAR * Math.max(...values)) return null;
  const inverse = new CholeskyDecomposition(matrix).solve(Matrix.eye(rows.length));
  return rows.map((_, i) =>
    Float64Array.from(
      rows,
      (__, j) => (inverse.get(i, j) + inverse.get(j, i)) / 2 / (roots[i] as number) / (roots[j] as number),
    ),
  );
}

/** Solves A x = b for a square A; null where A is singular to working precision. */
export function solve(rows: Rows, b: ArrayLike<number>): Float64Array | null {
  const matrix = checked(rows);
  if (rows.length === 0) return new Float64Array(0);
  const unit = toUnitSize(matrix);
  const singular = new SingularValueDecomposition(matrix, VALUES_ALONE).diagonal;
  if ((singular.at(-1) as number) <= SINGULAR * (singular[0] as number)) return null;
  const right = Matrix.columnVector(Array.from(b, (value) => value / unit));
  return Float64Array.from(new LuDecomposition(matrix).solve(right).to1DArray());
}

/** Singular values, largest first, of a matrix with at least as many rows as columns. */
export function singularValues(rows: Rows): Float64Array {
  const matrix = checked(rows);
  if (rows.length === 0) return new Float64Array(0);
  const unit = toUnitSize(matrix);
  return Float64Array.from(new SingularValueDecomposition(matrix, VALUES_ALONE).diagonal, (value) => value * unit);
}

function checked(rows: Rows): Matrix {
  const values = rows.map((row) => Array.from(row));
  if (!values.every((row) => row.every(Number.isFinite)))
    throw new RangeError('a dense matrix holds an entry that is not finite');
  return new Matrix(values);
}

/** Divides a matrix by the power of two below its largest entry, in place, so that no square in a decomposition runs over or under; returns it. */
function toUnitSize(matrix: Matrix): number {
  const unit = powerOfTwoBelow(Math.max(matrix.max(), -matrix.min()));
  matrix.div(unit);
  return unit;
}

function symmetric(rows: Rows): Matrix {
  const matrix = checked(rows);
  for (let i = 0; i < rows.length; i++) for (let j = 0; j < i; j++) matrix.set(i, j, matrix.get(j, i));
  return matrix;
}

function unitDiagonal(rows: Rows): { readonly matrix: Matrix; readonly roots: Float64Array } | null {
  const matrix = symmetric(rows);
  const roots = Float64Array.from(rows, (_, i) => Math.sqrt(matrix.get(i, i)));
  if (!roots.every((root) => root > 0)) return null;
  for (let i = 0; i < rows.length; i++)
    for (let j = i; j < rows.length; j++) {
      const value = i === j ? 1 : matrix.get(i, j) / (roots[i] as number) / (roots[j] as number);
      matrix.set(i, j, value);
      matrix.set(j, i, value);
    }
  return { matrix, roots };
}
