import { factorOf } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';
import { dot, lengthOf, sum } from '../numbers/sums';
import type { SelfCheck } from '../protocol/result';

/** What must hold of one fit by itself, in the weights of its estimator. */
export function identityChecks(fitted: Fitted): SelfCheck[] {
  const { leverages, coefficients, condition } = fitted;
  const rounding = Math.max(1e-10, condition * 1e-14);
  const angle = largestAngle(fitted);
  const trace = Math.abs(sum(leverages) - coefficients.length);
  const pulled = worstPull(fitted);
  return [
    { check: 'residuals-orthogonal', passed: angle <= rounding, figure: angle },
    // Under correlation leverages have no such sum.
    ...(fitted.weighting.blocks
      ? []
      : [{ check: 'leverages-sum' as const, passed: trace <= rounding * coefficients.length, figure: trace }]),
    { check: 'pulls-sum', passed: pulled <= rounding, figure: pulled },
  ];
}

/** The largest cosine between the whitened residuals and a whitened column; 0 where no residuals are left. */
function largestAngle({ design, residuals, weighting }: Fitted): number {
  const whiten = factorOf(weighting).whitened;
  const left = whiten(residuals);
  const length = lengthOf(left);
  if (length === 0) return 0;
  let largest = 0;
  for (const column of design.columns) {
    const own = whiten(column.high);
    largest = Math.max(largest, Math.abs(dot(own, left)) / lengthOf(own) / length);
  }
  return largest;
}

/** The worst departure of sum C_jg y_g from the coefficient, as a share of sum |C_jg y_g|. */
function worstPull({ pulls, response, coefficients }: Fitted): number {
  let worst = 0;
  for (const [j, row] of pulls.entries()) {
    const size = sum(row.map((c, g) => Math.abs(c * (response.high[g] as number))));
    if (size > 0) worst = Math.max(worst, Math.abs(dot(row, response.high) - (coefficients[j] as number)) / size);
  }
  return worst;
}
