import { chiSquareUpper, noncentralChiSquareUpper, normalUpper } from '../numbers/distributions';

/** Above this sum of freedom and noncentrality the normal stands in: the skewness is about .02. */
const NEARLY_NORMAL = 2e4;

/**
 * P(x'x > t) for x normal with mean m and covariance S, by a scaled noncentral chi-square of the same freedom, mean and variance.
 *
 *     E = m'm + tr S,  V = 2 tr S^2 + 4 m'S m;  c chi-square(q, l):  c (q + l) = E,  c^2 (2 q + 4 l) = V
 *
 * mean: length q; covariance: q x q. Where no l >= 0 gives both moments, a scaled central chi-square does (freedom 2 E^2 / V).
 * Exact for S = s I. Far out (q + l above 20,000) the normal of the same mean and variance.
 * Source: Patnaik 1949; Satterthwaite 1946.
 */
export function upperOfSquares(form: {
  readonly mean: ArrayLike<number>;
  readonly covariance: readonly ArrayLike<number>[];
  readonly threshold: number;
  /** q less the directions in which x does not vary; q if absent. */
  readonly freedom?: number;
}): number {
  const { mean, covariance, threshold } = form;
  const q = mean.length;
  let expected = 0;
  let spread = 0;
  for (let i = 0; i < q; i++) {
    const m = mean[i] as number;
    const row = covariance[i] as ArrayLike<number>;
    expected += m * m + (row[i] as number);
    for (let j = 0; j < q; j++) {
      const s = row[j] as number;
      spread += 2 * s * s + 4 * m * s * (mean[j] as number);
    }
  }
  return upperByMoments({ expected, spread, freedom: form.freedom ?? q, threshold });
}

function upperByMoments(form: { expected: number; spread: number; freedom: number; threshold: number }): number {
  const { expected, spread, freedom, threshold } = form;
  if (!(expected > 0 && spread > 0)) return threshold < expected ? 1 : 0;
  const ratio = spread / (expected * expected);
  const root = 16 - 8 * ratio * freedom;
  const total = root > 0 ? (4 + Math.sqrt(root)) / (2 * ratio) : 0;
  if (total < freedom) return upperOfSum({ expected, spread, threshold });
  if (total > NEARLY_NORMAL) return normalUpper((threshold - expected) / Math.sqrt(spread));
  return noncentralChiSquareUpper((threshold * total) / expected, freedom, total - freedom);
}

/**
 * P(x > t) for a weighted sum of squares with the moments given, by the scaled chi-square that has them (freedom 2 E^2 / V).
 * Source: Satterthwaite 1946.
 */
export function upperOfSum(sum: {
  readonly expected: number;
  readonly spread: number;
  readonly threshold: number;
}): number {
  const freedom = (2 * sum.expected * sum.expected) / sum.spread;
  return chiSquareUpper((sum.threshold * freedom) / sum.expected, freedom);
}
