import type { Fitted } from '../estimate/fitted';
import { betweenVariance } from './new-cell';
import { numberOrNull } from './reference';

/**
 * How far full likelihood undershoots tau^2 for having fitted k coefficients, with given errors.
 *
 *     b = -tr[Phi X' Omega^-2 X] / sum (tau^2 + s^2)^-2 = -sum h_g / v_g over sum 1 / v_g^2
 *
 * underStructure: a full-likelihood fit of between + given whose weights come from the structure; b in squared units of the outcome.
 *
 * Example: 43 areas: -0.003924 beside a tau^2 of 0.009081.
 * Source: Datta & Lahiri 2000.
 */
export function tau2BiasOf(underStructure: Fitted): number | null {
  const { leverages, variances, structure } = underStructure;
  if (structure.betweenAt < 0 || !(betweenVariance(underStructure) >= 0)) return null;
  let above = 0;
  let below = 0;
  const smallest = variances.reduce((least, v) => Math.min(least, v), Infinity);
  for (let g = 0; g < variances.length; g++) {
    const relative = smallest / (variances[g] as number);
    above += (leverages[g] as number) * relative;
    below += relative * relative;
  }
  return numberOrNull((-above / below) * smallest);
}
