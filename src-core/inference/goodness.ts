import { type Covariance, independent } from '../algebra/covariance';
import { factored } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';
import { plainSquares } from '../numbers/sums';
import type { FitResult } from '../protocol/result';
import { numberOrNull } from './reference';

/**
 * How much of the cells' differences the terms account for, on two scales.
 *
 *     weighted = 1 - r' Omega^-1 r / (y - c)' Omega^-1 (y - c),  c the GLS mean; c = 0 without an intercept
 *     adjusted = 1 - (1 - weighted)(G - 1)/(G - k); G/(G - k) without an intercept
 *     raw      = 1 - sum r^2 / sum (y - ybar)^2, always centred, may be negative
 *
 * Under maximum likelihood with a link raw is of the shares or rates themselves, and the weighted ones are null: there the deviance judges the fit.
 *
 * Without unit; of averages, not of persons. Null where all outcomes are alike, weighted where Omega has no inverse, adjusted also where no residual is free.
 *
 * Example: the physics data of Weisberg, weights 1/s^2: .9396812 weighted, .9302062 raw.
 * Source: Buse 1973; Willett & Singer 1988.
 */
export function goodnessOfFit(fitted: Fitted): FitResult['rSquared'] {
  const { residuals, omegaShape, design, residualFreedom } = fitted;
  const cells = residuals.length;
  const centred = design.intercept;
  const counted = onOwnScale(fitted);
  if (counted) {
    const equal = independent(new Float64Array(cells).fill(1));
    return { weighted: null, adjusted: null, raw: explained(counted, equal, true), centred };
  }
  const weighted = explained(fitted, omegaShape, centred);
  const raw = explained(fitted, independent(new Float64Array(cells).fill(1)), true);
  const compared = centred ? cells - 1 : cells;
  const adjusted = weighted === null || residualFreedom <= 0 ? null : 1 - ((1 - weighted) * compared) / residualFreedom;
  return { weighted, adjusted, raw, centred };
}

type Apart = Pick<Fitted, 'residuals' | 'response'>;

/** Shares or rates and what the means leave of them, under maximum likelihood with a link; else null. */
function onOwnScale({ fixedPoint }: Fitted): Apart | null {
  const link = fixedPoint?.link;
  if (!fixedPoint || !link) return null;
  const { observed } = link;
  return { response: observed, residuals: observed.high.map((y, g) => y - (fixedPoint.means[g] as number)) };
}

/** Null also for an Omega without an inverse. */
function explained({ residuals, response }: Apart, omega: Covariance, centred: boolean): number | null {
  const factoring = factored(omega);
  if (!factoring.ok) return null;
  const { whitened, solve } = factoring.factor;
  const centre = centred ? meanUnder(response.high, solve) : 0;
  const apart = response.high.map((y, g) => y - centre + (response.low[g] as number));
  const left = plainSquares(whitened(residuals));
  const total = plainSquares(whitened(apart));
  return total > 0 ? numberOrNull(1 - left / total) : null;
}

/** The GLS mean 1' Omega^-1 y / 1' Omega^-1 1, taken about the first outcome so that a large common level costs no digits. */
function meanUnder(y: Float64Array, solve: (x: Float64Array) => Float64Array): number {
  const origin = y[0] ?? 0;
  const weights = solve(new Float64Array(y.length).fill(1));
  let sum = 0;
  let total = 0;
  for (const [g, w] of weights.entries()) {
    sum += w * ((y[g] as number) - origin);
    total += w;
  }
  return origin + sum / total;
}
