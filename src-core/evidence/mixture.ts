import { chiSquareUpper } from '../numbers/distributions';
import { arcsin } from '../numbers/elementary';

/**
 * Weights of chi-square on 0, 1 and 2 for a likelihood ratio of variances at their boundary, all else interior.
 *
 *     one: 1/2, 1/2, 0;  two: 1/4 - a, 1/2, 1/4 + a, a = arcsin(r) / 2 pi
 *
 * correlation: r of the two estimators at the fit with both at zero; null for one variance.
 * Source: Self & Liang 1987.
 */
export function mixtureWeights(correlation: number | null): [number, number, number] {
  if (correlation === null) return [0.5, 0.5, 0];
  const a = arcsin(correlation) / (2 * Math.PI);
  return [0.25 - a, 0.5, 0.25 + a];
}

/** P(mixture >= statistic): 1 at a statistic of 0, where the boundary itself is the estimate. */
export function mixtureUpper(statistic: number, weights: readonly [number, number, number]): number {
  if (!(statistic > 0)) return 1;
  return weights[1] * chiSquareUpper(statistic, 1) + weights[2] * chiSquareUpper(statistic, 2);
}
