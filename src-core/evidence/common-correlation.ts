import { largestOf, powerOfTwoBelow } from '../algebra/powers-of-two';
import type { Fitted } from '../estimate/fitted';
import { numberOrNull } from '../inference/reference';
import { sum, sumOfSquares } from '../numbers/sums';
import type { Plan } from '../protocol/plan';
import type { CommonCorrelation } from '../protocol/result';

/** The common correlations at which errors are told: 0 to the bound of .5 by steps of .05. */
export const COMMON_CORRELATIONS: readonly number[] = Array.from({ length: 11 }, (_, i) => i / 20);

/**
 * The error of every coefficient were the cells' sampling errors to have one unknown common correlation: samples that share interviewers, units or a
 * frame.
 *
 *     V_j(rho) = c' Omega c + rho [ (sum c sqrt s)^2 - sum c^2 s ],  c = C_j.,  s the sampling variances at the fit
 *
 * Weights and every variance held; at rho 0 the model's own error. Linear in rho, so that the grid (0 to .5 by .05) says all. Nothing where the plan
 * states how sampling errors go together (a matrix, a correlation), where their variance is 0 in the fit, nor where a scale has no residuals to go by.
 *
 * Example: two cells of error 1 and pulls 1/2, 1/2: .707 at rho 0, .866 at .5; pulls 1, -1: 1.414 and 1.
 */
export function commonCorrelationOf({
  fitted,
  plan,
}: {
  readonly fitted: Fitted;
  readonly plan: Plan;
}): CommonCorrelation[] {
  const stated = plan.variance.parts.some(
    (part) =>
      part.kind === 'matrix' || (part.kind !== 'between' && part.kind !== 'shared' && part.correlation !== null),
  );
  if (stated) return [];
  const roots = fitted.structure.samplingAt(fitted.theta).map(Math.sqrt);
  const shares = fitted.pulls.map((pull) => shareOf(pull, roots));
  if (!roots.some((root) => root > 0) || !fitted.errors.every(Number.isFinite)) return [];
  return COMMON_CORRELATIONS.flatMap((rho) =>
    fitted.design.names.map((term, j): CommonCorrelation => {
      const error = fitted.errors[j] as number;
      const { unit, together, alone } = shares[j] as Share;
      const own = error / unit;
      const variance = own * own + rho * (together * together - alone);
      return { rho, term, se: rho === 0 ? error : (numberOrNull(unit * Math.sqrt(Math.max(0, variance))) ?? error) };
    }),
  );
}

/** In units of their own size, so that no square runs over or under. */
interface Share {
  readonly unit: number;
  /** sum c sqrt(s) */
  readonly together: number;
  /** sum c^2 s */
  readonly alone: number;
}

function shareOf(pull: Float64Array, roots: Float64Array): Share {
  const parts = pull.map((c, g) => c * (roots[g] as number));
  const unit = powerOfTwoBelow(largestOf(parts)) || 1;
  const scaled = parts.map((part) => part / unit);
  return { unit, together: sum(scaled), alone: sumOfSquares(scaled) };
}
