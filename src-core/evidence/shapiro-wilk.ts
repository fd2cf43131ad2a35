import { normalQuantile, normalUpper } from '../numbers/distributions';
import { arcsin, exp, log } from '../numbers/elementary';

/** The approximation was made for this range. */
export const MOST_CELLS = 5000;

const FIRST = [0, 0.221157, -0.147981, -2.07119, 4.434685, -2.706056];
const SECOND = [0, 0.042981, -0.293762, -1.752461, 5.682633, -3.582633];
const GAMMA = [-2.273, 0.459];
const SMALL_MEAN = [0.544, -0.39978, 0.025054, -6.714e-4];
const SMALL_SPREAD = [1.3822, -0.77857, 0.062767, -0.0020322];
const LARGE_MEAN = [-1.5861, -0.31082, -0.083751, 0.0038915];
const LARGE_SPREAD = [-0.4803, -0.082676, 0.0030302];

/**
 * Shapiro & Wilk's W for normality, with its p value.
 *
 *     W = (sum a_i x_(i))^2 / sum (x_i - xbar)^2, a by Royston's approximation
 *
 * values: 3 to 5000 finite numbers, not all equal (otherwise null); not changed.
 * Far out on 11 values or fewer the algorithm gives 1e-99 for a p value beyond its range.
 *
 * Example: `shapiroWilk([1, 2, 3])` has w 1 and p 1.
 * Source: Royston 1995 (algorithm AS R94).
 */
export function shapiroWilk(values: Float64Array): { w: number; p: number } | null {
  const count = values.length;
  if (count < 3 || count > MOST_CELLS) return null;
  const x = values.slice().sort();
  const range = (x[count - 1] as number) - (x[0] as number);
  if (!(range > 0)) return null;
  for (let i = 0; i < count; i++) x[i] = (x[i] as number) / range;
  const a = halfWeights(count);

  const mean = x.reduce((sum, value) => sum + value, 0) / count;
  let along = 0;
  let weights = 0;
  for (const [i, weight] of a.entries()) {
    along += weight * ((x[count - 1 - i] as number) - (x[i] as number));
    weights += 2 * weight * weight;
  }
  const spread = x.reduce((sum, value) => sum + (value - mean) * (value - mean), 0);
  const root = Math.sqrt(weights * spread);
  const lack = Math.max(0, ((root - along) * (root + along)) / (weights * spread));
  return { w: 1 - lack, p: tailOf(lack, count) };
}

/** Weights of the upper half, the largest value first; the lower half has them with the other sign. */
function halfWeights(count: number): Float64Array {
  const half = count >> 1;
  if (count === 3) return Float64Array.of(Math.sqrt(0.5));
  const scores = Float64Array.from({ length: half }, (_, i) => -normalQuantile((i + 1 - 0.375) / (count + 0.25)));
  const total = 2 * scores.reduce((sum, m) => sum + m * m, 0);
  const length = Math.sqrt(total);
  const small = 1 / Math.sqrt(count);
  const first = (scores[0] as number) / length + polynomial(FIRST, small);
  const fixed = count > 5 ? [first, (scores[1] as number) / length + polynomial(SECOND, small)] : [first];
  let left = total;
  let share = 1;
  for (const [i, weight] of fixed.entries()) {
    left -= 2 * (scores[i] as number) * (scores[i] as number);
    share -= 2 * weight * weight;
  }
  const factor = Math.sqrt(left / share);
  return scores.map((m, i) => fixed[i] ?? m / factor);
}

/** p value of 1 - W. */
function tailOf(lack: number, count: number): number {
  if (count === 3) return Math.min(1, Math.max(0, (6 / Math.PI) * (arcsin(Math.sqrt(1 - lack)) - Math.PI / 3)));
  const y = log(lack);
  if (count > 11) {
    const ln = log(count);
    return normalUpper((y - polynomial(LARGE_MEAN, ln)) / exp(polynomial(LARGE_SPREAD, ln)));
  }
  const gamma = polynomial(GAMMA, count);
  if (y >= gamma) return 1e-99;
  return normalUpper((-log(gamma - y) - polynomial(SMALL_MEAN, count)) / exp(polynomial(SMALL_SPREAD, count)));
}

/** Coefficients from the constant upwards. */
function polynomial(coefficients: readonly number[], x: number): number {
  return coefficients.reduceRight((sum, c) => sum * x + c, 0);
}
