/** Small square matrices, row after row in one array, as loops over many clusters need them: no allocation but the result. */

/** a b; both m x m. */
export function productOf(a: Float64Array, b: Float64Array, m: number): Float64Array {
  const result = new Float64Array(m * m);
  for (let i = 0; i < m; i++)
    for (let l = 0; l < m; l++) {
      const left = a[i * m + l] as number;
      if (left === 0) continue;
      for (let j = 0; j < m; j++) result[i * m + j] = (result[i * m + j] as number) + left * (b[l * m + j] as number);
    }
  return result;
}

/** tr(a b); both m x m, b symmetric. */
export function traceOfProduct(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += (a[i] as number) * (b[i] as number);
  return sum;
}

/** x'a y; a m x m. */
export function through(x: ArrayLike<number>, a: Float64Array, y: ArrayLike<number>): number {
  const m = x.length;
  let sum = 0;
  for (let i = 0; i < m; i++) {
    let row = 0;
    for (let j = 0; j < m; j++) row += (a[i * m + j] as number) * (y[j] as number);
    sum += (x[i] as number) * row;
  }
  return sum;
}

/** Rows of a matrix kept row after row. */
export function rowsOf(a: Float64Array, m: number): Float64Array[] {
  return Array.from({ length: m }, (_, i) => a.subarray(i * m, (i + 1) * m));
}
