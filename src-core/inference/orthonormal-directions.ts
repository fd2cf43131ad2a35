import { choleskyOf, forwardInPlace } from '../algebra/cholesky';
import { lengthOf, plainDot } from '../numbers/sums';

/**
 * Orthonormal vectors with the span of some directions.
 *
 *     Y = Z D^-1 L^-T,  D the lengths, L L' = D^-1 Z'Z D^-1
 *
 * directions: l of length k. factor: L, l x l, row after row. Null where the directions depend on each other.
 */
export function orthonormal(
  directions: readonly Float64Array[],
): { readonly vectors: Float64Array[]; readonly factor: Float64Array } | null {
  const l = directions.length;
  const k = directions[0]?.length ?? 0;
  const unit = directions.map((direction) => {
    const size = lengthOf(direction);
    return direction.map((value) => value / size);
  });
  const gram = new Float64Array(l * l);
  for (const [a, x] of unit.entries()) for (const [b, y] of unit.entries()) gram[a * l + b] = plainDot(x, y);
  const factor = choleskyOf(gram, l);
  if (!factor) return null;
  const vectors = unit.map(() => new Float64Array(k));
  const column = new Float64Array(l);
  for (let i = 0; i < k; i++) {
    for (let a = 0; a < l; a++) column[a] = (unit[a] as Float64Array)[i] as number;
    forwardInPlace(factor, column, l);
    for (let a = 0; a < l; a++) (vectors[a] as Float64Array)[i] = column[a] as number;
  }
  return { vectors, factor };
}
