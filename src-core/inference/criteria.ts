import { log } from '../numbers/elementary';
import type { FitResult } from '../protocol/result';

/**
 * Information criteria of a fit by its own likelihood.
 *
 *     AIC = -2 l + 2 (k + q),  AICc = AIC + 2 (k + q)(k + q + 1) / (G - k - q - 1),  BIC = -2 l + (k + q) ln N
 *
 * N: G under the full likelihood, G - k under the restricted; q: variance parameters that were estimated, the scale included.
 * logLikelihood: null where the method maximises none (moments, two-step) or the fit is perfect: all three are then null.
 * AICc is null where its divisor is not above 0, BIC where N is not.
 *
 * Example: l = -37.834536, k = 2, q = 1, G = 10: AIC 81.669072, AICc 85.669072, BIC 82.576827.
 * Source: Akaike 1974; Schwarz 1978; Hurvich & Tsai 1989.
 */
export function informationCriteria(known: {
  readonly logLikelihood: number | null;
  readonly cells: number;
  readonly coefficients: number;
  readonly varianceParameters: number;
  readonly restricted: boolean;
}): Pick<FitResult, 'aic' | 'aicc' | 'bic'> {
  const { logLikelihood, cells, coefficients, varianceParameters, restricted } = known;
  if (logLikelihood === null) return { aic: null, aicc: null, bic: null };
  const parameters = coefficients + varianceParameters;
  const aic = -2 * logLikelihood + 2 * parameters;
  const left = cells - parameters - 1;
  const counted = restricted ? cells - coefficients : cells;
  return {
    aic,
    aicc: left > 0 ? aic + (2 * parameters * (parameters + 1)) / left : null,
    bic: counted > 0 ? -2 * logLikelihood + parameters * log(counted) : null,
  };
}
