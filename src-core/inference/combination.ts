import { lengthOf } from '../numbers/sums';
import type { Estimated } from '../protocol/result';
import type { Inferred } from './inferred';
import { estimatedOf, judged, numberOrNull } from './reference';

/**
 * A linear combination of coefficients with its error and interval.
 *
 *     estimate = x'b,  se = root of x'V x (+ added)
 *
 * multipliers: x, length k; added: a variance that stands on its own, for the value of a cell not yet seen; 0 by default.
 * The error is null where V is undefined.
 *
 * Example: the row of one coefficient gives that coefficient's own error and reference.
 */
export function combinationOf(known: {
  readonly multipliers: Float64Array;
  readonly estimates: Float64Array;
  readonly inferred: Inferred;
  readonly level: number;
  readonly added?: number;
}): Estimated {
  const { multipliers, estimates, inferred, level, added = 0 } = known;
  const estimate = multipliers.reduce((sum, x, j) => sum + x * (estimates[j] as number), 0);
  const own = inferred.errorOf(multipliers);
  const se = own === null ? null : numberOrNull(lengthOf([own, Math.sqrt(added)]));
  const reference = se === null ? null : inferred.referenceOf(multipliers);
  return estimatedOf({ estimate, se, reference, level });
}

/** The same with a two-sided p value against a stated value, by the reference or by draws. */
export function testedAgainst(
  value: number,
  known: Parameters<typeof combinationOf>[0],
): Estimated & { p: number | null } {
  const estimated = combinationOf(known);
  const { drawnP } = known.inferred;
  const p = drawnP ? drawnP(known.multipliers, value) : judged(estimated.estimate - value, estimated).p;
  return { ...estimated, p };
}
