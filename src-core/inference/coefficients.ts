import type { Coefficient, Reference } from '../protocol/result';
import { estimatedOf, judged } from './reference';

/**
 * Every coefficient with its error, interval, reference, ratio and p value.
 *
 * estimates, errors: length k, in units of the outcome per unit of the column, errors null or NaN where undefined;
 * references: one a coefficient, null where there is nothing to compare with.
 * An error of 0 (a perfect fit) leaves ratio and p null.
 *
 * Example: estimate 2 with error 1 under the standard normal: ratio 2, p 0.0455.
 */
export function coefficientsOf(known: {
  readonly names: readonly string[];
  readonly estimates: Float64Array;
  readonly errors: readonly (number | null)[];
  readonly references: readonly (Reference | null)[];
  readonly level: number;
}): Coefficient[] {
  const { names, estimates, errors, references, level } = known;
  return names.map((term, j) => {
    const { estimate, low, high, se, reference } = estimatedOf({
      estimate: estimates[j] as number,
      se: errors[j] ?? null,
      reference: references[j] ?? null,
      level,
    });
    // Without an error there is no distribution to name either.
    const named = se === null ? null : reference;
    return { term, estimate, low, high, se, reference: named, ...judged(estimate, { se, reference: named }) };
  });
}
