import { plainDot } from '../numbers/sums';

/**
 * A diag(v) B', summed over the cells in their order.
 *
 * a, b: rows of length G, B = A unless given; v: length G. Returns one row for each of a.
 *
 * Example: `throughDiagonal([[1, 2]], [3, 4])` is [[19]].
 */
export function throughDiagonal(
  a: readonly Float64Array[],
  v: Float64Array,
  b: readonly Float64Array[] = a,
): Float64Array[] {
  return a.map((left) => {
    const scaled = left.map((value, g) => value * (v[g] as number));
    return Float64Array.from(b, (right) => plainDot(scaled, right));
  });
}
