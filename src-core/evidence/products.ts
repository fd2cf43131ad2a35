/** A diag(v) B': rows of A and B of length G. */
export function productOf(a: readonly Float64Array[], b: readonly Float64Array[], v: Float64Array): Float64Array[] {
  return a.map((left) => {
    const scaled = left.map((value, g) => value * (v[g] as number));
    return Float64Array.from(b, (right) => {
      let sum = 0;
      for (const [g, value] of scaled.entries()) sum += value * (right[g] as number);
      return sum;
    });
  });
}

export function differenceOf(a: readonly Float64Array[], b: readonly Float64Array[]): Float64Array[] {
  return a.map((row, j) => row.map((value, g) => value - ((b[j] as Float64Array)[g] as number)));
}
