import type { Fitted } from '../estimate/fitted';
import type { FitResult } from '../protocol/result';
import { numberOrNull } from './reference';

/**
 * How much of the cells' differences the terms account for, on two scales.
 *
 *     weighted = 1 - r' Omega^-1 r / (y - c)' Omega^-1 (y - c),  c the GLS mean; c = 0 without an intercept
 *     adjusted = 1 - (1 - weighted)(G - 1)/(G - k); G/(G - k) without an intercept
 *     raw      = 1 - sum r^2 / sum (y - ybar)^2, always centred, may be negative
 *
 * Without unit; of averages, not of persons. Null where all outcomes are alike, adjusted also where no residual is free.
 *
 * Example: the physics data of Weisberg, weights 1/s^2: .9396812 weighted, .9302062 raw.
 * Source: Buse 1973; Willett & Singer 1988.
 */
export function goodnessOfFit(fitted: Fitted): FitResult['rSquared'] {
  const { residuals, shape, design, residualFreedom } = fitted;
  const cells = residuals.length;
  const centred = design.intercept;
  const one = new Float64Array(cells).fill(1);
  const weighted = explained(fitted, shape, centred);
  const raw = explained(fitted, one, true);
  const counted = centred ? cells - 1 : cells;
  const adjusted = weighted === null || residualFreedom <= 0 ? null : 1 - ((1 - weighted) * counted) / residualFreedom;
  return { weighted, adjusted, raw, centred };
}

function explained(fitted: Fitted, variances: Float64Array, centred: boolean): number | null {
  const { residuals, response } = fitted;
  const centre = centred ? meanUnder(response.high, variances) : 0;
  let left = 0;
  let total = 0;
  for (let g = 0; g < residuals.length; g++) {
    const v = variances[g] as number;
    const r = residuals[g] as number;
    const d = (response.high[g] as number) - centre + (response.low[g] as number);
    left += (r * r) / v;
    total += (d * d) / v;
  }
  return total > 0 ? numberOrNull(1 - left / total) : null;
}

/** Mean of the outcomes under diagonal variances: sum y/v over sum 1/v, taken about the first outcome so that a large common level costs no digits. */
function meanUnder(y: Float64Array, variances: Float64Array): number {
  const origin = y[0] ?? 0;
  let sum = 0;
  let total = 0;
  for (let g = 0; g < y.length; g++) {
    const v = variances[g] as number;
    sum += ((y[g] as number) - origin) / v;
    total += 1 / v;
  }
  return origin + sum / total;
}
