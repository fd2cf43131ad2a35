/** What is left of a diagonal entry below this share of it counts as nothing. */
const NOT_DEFINITE = 1e-14;

/**
 * The lower Cholesky factor of a small symmetric matrix, row after row; null where it is not positive definite to working precision.
 *
 *     A = L L'
 *
 * matrix: k x k, row after row, of which the lower triangle is read.
 */
export function choleskyOf(matrix: Float64Array, k: number): Float64Array | null {
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

/** Solves L x = b in place. */
export function forwardInPlace(factor: Float64Array, x: Float64Array, k: number): void {
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
