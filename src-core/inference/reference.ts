import { normalTwoSided, normalUpperQuantile, tTwoSided, tUpperQuantile } from '../numbers/distributions';
import type { Estimated, Reference } from '../protocol/result';

/** Where nothing in the variance was estimated. */
export const standardNormal: Reference = { kind: 'normal', freedom: null };

/**
 * Student's t on a freedom, null where the freedom is not above 0 or no number: there is then nothing to compare with.
 *
 * freedom: cells less coefficients, or Satterthwaite's, which need not be whole.
 *
 * Example: `studentOn(8)` is `{ kind: 't', freedom: 8 }`; `studentOn(0)` is null.
 */
export function studentOn(freedom: number | null): Reference | null {
  return freedom !== null && freedom > 0 && freedom < Infinity ? { kind: 't', freedom } : null;
}

/**
 * How many standard errors an interval reaches to either side.
 *
 *     q with P(|T| <= q) = level
 *
 * level: in (0, 1).
 *
 * Example: the standard normal at level 0.95 gives 1.959964.
 */
function reachOf(reference: Reference, level: number): number {
  const tail = (1 - level) / 2;
  return reference.freedom === null ? normalUpperQuantile(tail) : tUpperQuantile(tail, reference.freedom);
}

/**
 * Two-sided p value of a ratio of an estimate to its standard error.
 *
 * Example: 0 gives 1 under every reference.
 */
function twoSidedP(ratio: number, reference: Reference): number {
  const size = Math.abs(ratio);
  return reference.freedom === null ? normalTwoSided(size) : tTwoSided(size, reference.freedom);
}

/**
 * An estimate with its interval.
 *
 *     low, high = estimate -/+ reach x se
 *
 * se: in the estimate's unit; null or no number: neither error nor interval. reference: null leaves the error and withholds the interval.
 *
 * Example: estimate 2, se 1, the standard normal, level 0.95: 0.04 to 3.96.
 */
export function estimatedOf(known: {
  readonly estimate: number;
  readonly se: number | null;
  readonly reference: Reference | null;
  readonly level: number;
}): Estimated {
  const { estimate, reference, level } = known;
  const se = numberOrNull(known.se);
  if (se === null || reference === null) return { estimate, low: null, high: null, se, reference };
  const reach = reachOf(reference, level) * se;
  return { estimate, low: numberOrNull(estimate - reach), high: numberOrNull(estimate + reach), se, reference };
}

/** Ratio to the error and its p value; both null where the error is 0 or not there. */
export function judged(
  difference: number,
  of: { readonly se: number | null; readonly reference: Reference | null },
): { readonly ratio: number | null; readonly p: number | null } {
  if (of.se === null || of.se === 0) return { ratio: null, p: null };
  const ratio = numberOrNull(difference / of.se);
  return { ratio, p: ratio === null || of.reference === null ? null : twoSidedP(ratio, of.reference) };
}

/** A result holds numbers or null, never NaN or an infinity. */
export function numberOrNull(value: number | null): number | null {
  return value !== null && value - value === 0 ? value : null;
}
