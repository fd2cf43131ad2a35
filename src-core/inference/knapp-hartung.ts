import type { Fitted } from '../estimate/fitted';
import { sumOfSquares } from '../numbers/sums';
import { numberOrNull } from './reference';

/**
 * The factor by which the residuals say that the stated variances are too small or too large.
 *
 *     q = r' Omega^-1 r / (G - k)
 *
 * underStructure: the fit whose weights come from Omega itself, whatever the target of the plan is.
 * Without unit. Null where no residual is free. It is 1 identically under a restricted free scale and an interior Paule-Mandel fit.
 * floor: never below 1.
 *
 * Example: thirteen vaccine trials on latitude, restricted: 1.2992.
 * Source: Knapp & Hartung 2003; the floor: Röver, Knapp & Friede 2015.
 */
export function knappHartungFactor(underStructure: Fitted, floor: boolean): number | null {
  const { whitened, scale, residualFreedom } = underStructure;
  if (residualFreedom <= 0) return null;
  const q = numberOrNull(sumOfSquares(whitened) / (scale ?? 1) / residualFreedom);
  return q !== null && floor ? Math.max(1, q) : q;
}
