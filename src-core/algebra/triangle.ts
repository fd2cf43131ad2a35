/** Solves R x = q; R: k columns, upper triangle. q is left alone. */
export function solveUpper(triangle: readonly Float64Array[], q: Float64Array, size = triangle.length): Float64Array {
  const x = q.slice(0, size);
  for (let j = size - 1; j >= 0; j--) {
    const column = triangle[j] as Float64Array;
    const value = (x[j] as number) / (column[j] as number);
    x[j] = value;
    for (let i = 0; i < j; i++) x[i] = (x[i] as number) - (column[i] as number) * value;
  }
  return x;
}

/** Solves R' x = q. */
export function solveLower(triangle: readonly Float64Array[], q: Float64Array): Float64Array {
  const x = q.slice();
  for (let j = 0; j < x.length; j++) {
    const column = triangle[j] as Float64Array;
    let left = x[j] as number;
    for (let i = 0; i < j; i++) left -= (column[i] as number) * (x[i] as number);
    x[j] = left / (column[j] as number);
  }
  return x;
}

/** R^-1 as columns, upper triangle. */
export function inverseUpper(triangle: readonly Float64Array[]): Float64Array[] {
  return triangle.map((_, j) => {
    const unit = new Float64Array(triangle.length);
    unit[j] = 1;
    return solveUpper(triangle, unit);
  });
}

/** R^-1 R^-T = (R'R)^-1 as rows, from R^-1 as columns. */
export function timesOwnTranspose(inverse: readonly Float64Array[]): Float64Array[] {
  const k = inverse.length;
  const rows = inverse.map(() => new Float64Array(k));
  for (let i = 0; i < k; i++)
    for (let j = i; j < k; j++) {
      let sum = 0;
      for (let l = k - 1; l >= j; l--)
        sum += ((inverse[l] as Float64Array)[i] as number) * ((inverse[l] as Float64Array)[j] as number);
      (rows[i] as Float64Array)[j] = sum;
      (rows[j] as Float64Array)[i] = sum;
    }
  return rows;
}
