import { independent } from '../algebra/covariance';
import { leastSquares } from '../algebra/least-squares';
import { pullsOf } from '../estimate/fit-at';
import type { Fitted } from '../estimate/fitted';
import type { BreakEven } from '../protocol/result';
import type { Cells } from '../table/cells';

/** Shares of a coefficient's own pull below which two weightings differ by rounding alone. */
const SAME_WEIGHTING = 1e-20;

/**
 * The intraclass share at which equal weights and weights by size are equally precise for each coefficient.
 *
 *     Omega = tau^2 I + sigma^2 diag(1/m),  D = C_size - C_equal
 *     tau^2 / sigma^2 = sum D^2 / m / sum D^2,  share = tau^2 / (tau^2 + sigma^2)
 *
 * Each weighting is best at its own end of Omega, so that what it loses at the other is the sum of D^2 there: both sums are positive, nothing cancels.
 * m: effective sizes; none where the role is not there. Null where the two weightings coincide (sizes all equal, or the pulls do not depend on them), and
 * where weights by size leave nothing to tell the columns apart by.
 *
 * Example: the mean of cells of 5, 10, 20, 50, 100 and 400: ratio .026305771096, share .02563.
 * Source: PRACTICE of the program, 15, recomputed for every coefficient.
 */
export function breakEvenOf(of: { readonly fitted: Fitted; readonly cells: Cells }): BreakEven[] {
  const { design, response } = of.fitted;
  const sizes = of.cells.effectiveSize;
  if (!sizes) return [];
  const under = (variances: Float64Array): Float64Array[] | null => {
    const solved = leastSquares({ columns: design.columns, y: response, variances });
    return 'dependent' in solved ? null : pullsOf(solved, independent(variances));
  };
  const equal = under(new Float64Array(sizes.length).fill(1));
  const sized = under(sizes.map((m) => 1 / m));
  if (!equal || !sized) return design.names.map((term) => ({ term, intraclass: null }));
  return breakEvenBetween({ terms: design.names, equal, sized, sizes });
}

/** Equal and sized: C under either weighting, k rows of length G, in units of coefficient over outcome; sizes: m, length G, above 0. */
export function breakEvenBetween(of: {
  readonly terms: readonly string[];
  readonly equal: readonly Float64Array[];
  readonly sized: readonly Float64Array[];
  readonly sizes: Float64Array;
}): BreakEven[] {
  return of.terms.map((term, j) => {
    const equal = of.equal[j] as Float64Array;
    const sized = of.sized[j] as Float64Array;
    let apart = 0;
    let apartBySize = 0;
    let whole = 0;
    for (const [g, pull] of equal.entries()) {
      const difference = (sized[g] as number) - pull;
      apart += difference * difference;
      apartBySize += (difference * difference) / (of.sizes[g] as number);
      whole += pull * pull;
    }
    return { term, intraclass: apart <= SAME_WEIGHTING * whole ? null : apartBySize / (apartBySize + apart) };
  });
}
