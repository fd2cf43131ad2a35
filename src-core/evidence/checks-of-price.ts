import { errorOf, factored } from '../algebra/factored';
import { underStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import type { RivalFit } from '../inference/fits';
import type { SelfCheck } from '../protocol/result';

/** The least of Var_A / Var_GLS - 1 over rivals and coefficients, each variance by its own product, a free scale left out: never below 0 but for rounding. */
export function priceCheck(of: { readonly fitted: Fitted; readonly rivals: readonly RivalFit[] }): SelfCheck[] {
  const { fitted, rivals } = of;
  if (rivals.length === 0 || !factored(fitted.omegaShape).ok) return [];
  const best = underStructure(fitted).pulls;
  let least = Infinity;
  for (const rival of rivals)
    for (const [j, row] of rival.fitted.pulls.entries()) {
      const own = best[j] as Float64Array;
      const ratio = errorOf(row, fitted.omegaShape) / errorOf(own, fitted.omegaShape);
      least = Math.min(least, ratio * ratio - 1);
    }
  return [{ check: 'price-not-negative', passed: least >= -Math.max(1e-10, fitted.condition * 1e-14), figure: least }];
}
