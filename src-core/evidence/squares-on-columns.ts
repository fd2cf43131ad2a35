import { plainDot } from '../numbers/sums';
import { upperOfSquares } from './quadratic-form';

/** |Z'u|^2 over its spread, u the squares over their mean. The one scratch vector is the test's own. */
export function strengthOn(
  vectors: readonly Float64Array[],
  studentised: boolean,
): (residuals: Float64Array) => number {
  const squares = new Float64Array(vectors[0]?.length ?? 0);
  return (residuals) => {
    const count = squares.length;
    let sum = 0;
    for (let g = 0; g < count; g++) {
      const square = (residuals[g] as number) * (residuals[g] as number);
      squares[g] = square;
      sum += square;
    }
    const mean = sum / count;
    let explained = 0;
    for (const z of vectors) explained += squareOf(plainDot(z, squares));
    let spread = 2 * mean * mean;
    if (studentised) {
      spread = 0;
      for (let g = 0; g < count; g++) spread += squareOf((squares[g] as number) - mean);
      spread /= count;
    }
    return spread > 0 ? explained / spread : 0;
  };
}

/**
 * Large-sample power where u has mean d_g over their mean: Z'u normal, the spread at its expectation.
 *
 *     E Z'u = Z'd,  Cov = 2 sum (z_j - E_j / G)(z_l - E_l / G) d^2,  E sum (u - 1)^2 / G = mean(3 d^2) - 1
 */
export function powerOn(rule: {
  readonly vectors: readonly Float64Array[];
  readonly studentised: boolean;
  readonly critical: number;
}): (multipliers: Float64Array) => number {
  const { vectors, studentised, critical } = rule;
  return (multipliers) => {
    const count = multipliers.length;
    const total = multipliers.reduce((sum, d) => sum + d, 0);
    const relative = multipliers.map((d) => (d * count) / total);
    const mean = vectors.map((z) => plainDot(z, relative));
    const moved = vectors.map((z, j) => z.map((x, g) => (x - (mean[j] as number) / count) * (relative[g] as number)));
    const covariance = moved.map((a) => moved.map((b) => 2 * plainDot(a, b)));
    const spread = studentised ? (3 * plainDot(relative, relative)) / count - 1 : 2;
    return upperOfSquares({ mean, covariance, threshold: critical * spread });
  };
}

function squareOf(x: number): number {
  return x * x;
}
