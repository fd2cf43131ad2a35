import { NOT_DEFINITE } from '../numbers/tolerances';
import { largeCholesky } from './large-cholesky';

/** From here on tiles are worth their bookkeeping. */
const LARGE = 96;

/**
 * The lower Cholesky factor of a symmetric matrix, row after row; null where it is not positive definite to working precision.
 *
 *     A = L L'
 *
 * matrix: k x k, row after row, of which the lower triangle is read.
 */
export function choleskyOf(matrix: Float64Array, k: number): Float64Array | null {
  if (k >= LARGE) return largeCholesky(matrix, k, NOT_DEFINITE);
  const factor = new Float64Array(k * k);
  for (let i = 0; i < k; i++)
    for (let j = 0; j <= i; j++) {
      let left = matrix[i * k + j] as number;
      for (let l = 0; l < j; l++) left -= (factor[i * k + l] as number) * (factor[j * k + l] as number);
      if (i !== j) factor[i * k + j] = left / (factor[j * k + j] as number);
      else if (!(left > NOT_DEFINITE * (matrix[i * k + i] as number)) || left === Infinity) return null;
      else factor[i * k + i] = Math.sqrt(left);
    }
  return factor;
}

/** The same factor in the place of the matrix, whose entries above the diagonal are left as they were. */
export function choleskyInPlace(matrix: Float64Array, k: number): Float64Array | null {
  if (k >= LARGE) return largeCholesky(matrix, k, NOT_DEFINITE);
  for (let j = 0; j < k; j++) {
    const own = j * k;
    const whole = matrix[own + j] as number;
    let left = whole;
    for (let l = 0; l < j; l++) left -= (matrix[own + l] as number) * (matrix[own + l] as number);
    if (!(left > NOT_DEFINITE * whole) || left === Infinity) return null;
    const pivot = Math.sqrt(left);
    matrix[own + j] = pivot;
    columnBelow(matrix, { k, j, pivot });
  }
  return matrix;
}

/** Column j under its pivot: four rows at a time, each in its own order of sums. */
function columnBelow(
  matrix: Float64Array,
  { k, j, pivot }: { readonly k: number; readonly j: number; readonly pivot: number },
): void {
  const own = j * k;
  let i = j + 1;
  for (; i + 3 < k; i += 4) {
    const from = i * k;
    let a = matrix[from + j] as number;
    let b = matrix[from + k + j] as number;
    let c = matrix[from + 2 * k + j] as number;
    let d = matrix[from + 3 * k + j] as number;
    for (let l = 0; l < j; l++) {
      const share = matrix[own + l] as number;
      a -= (matrix[from + l] as number) * share;
      b -= (matrix[from + k + l] as number) * share;
      c -= (matrix[from + 2 * k + l] as number) * share;
      d -= (matrix[from + 3 * k + l] as number) * share;
    }
    matrix[from + j] = a / pivot;
    matrix[from + k + j] = b / pivot;
    matrix[from + 2 * k + j] = c / pivot;
    matrix[from + 3 * k + j] = d / pivot;
  }
  for (; i < k; i++) {
    const from = i * k;
    let left = matrix[from + j] as number;
    for (let l = 0; l < j; l++) left -= (matrix[from + l] as number) * (matrix[own + l] as number);
    matrix[from + j] = left / pivot;
  }
}

/** Solves L x = b in place. */
export function forwardInPlace(factor: Float64Array, x: Float64Array, k: number): void {
  if (k >= LARGE) {
    forwardLarge(factor, x, k);
    return;
  }
  for (let i = 0; i < k; i++) {
    let left = x[i] as number;
    for (let j = 0; j < i; j++) left -= (factor[i * k + j] as number) * (x[j] as number);
    x[i] = left / (factor[i * k + i] as number);
  }
}

/** Solves L L' x = b; b is left alone. */
export function solveByFactor(factor: Float64Array, b: Float64Array, k: number): Float64Array {
  const x = b.slice();
  forwardInPlace(factor, x, k);
  for (let i = k - 1; i >= 0; i--) {
    const value = (x[i] as number) / (factor[i * k + i] as number);
    x[i] = value;
    for (let j = 0; j < i; j++) x[j] = (x[j] as number) - (factor[i * k + j] as number) * value;
  }
  return x;
}

/** In four strands: one after another, additions would wait for each other. */
function forwardLarge(factor: Float64Array, x: Float64Array, k: number): void {
  for (let i = 0; i < k; i++) {
    const row = i * k;
    let [a, b, c, d] = [0, 0, 0, 0];
    let j = 0;
    for (; j + 3 < i; j += 4) {
      a += (factor[row + j] as number) * (x[j] as number);
      b += (factor[row + j + 1] as number) * (x[j + 1] as number);
      c += (factor[row + j + 2] as number) * (x[j + 2] as number);
      d += (factor[row + j + 3] as number) * (x[j + 3] as number);
    }
    for (; j < i; j++) a += (factor[row + j] as number) * (x[j] as number);
    x[i] = ((x[i] as number) - (a + b + (c + d))) / (factor[row + i] as number);
  }
}
