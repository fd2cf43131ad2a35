import { independent } from '../algebra/covariance';
import { leastSquares, type Solved } from '../algebra/least-squares';
import { leveragesOf } from '../algebra/orthonormal';
import { heldParts } from '../estimate/fit-at';
import type { Fitted } from '../estimate/fitted';
import { LOG_TWO_PI } from '../estimate/likelihood-place';
import { joinParts } from '../model/structure-join';
import { log, pow } from '../numbers/elementary';
import { dot, sum, sumOfSquares } from '../numbers/sums';
import type { Estimate } from '../protocol/plan';

/** The terms of a fit under variances that fall as size to the power delta, the scale profiled out. */
export interface ExponentFit {
  readonly delta: number;
  /** Made when asked for: the search along delta needs the likelihoods alone. */
  readonly fitted: () => Fitted;
  /** Both at their own scale: RSS / G and RSS / (G - k). */
  readonly logLikelihood: number;
  readonly restrictedLogLikelihood: number;
  /** Their derivatives by delta. */
  readonly slope: number;
  readonly restrictedSlope: number;
}

/**
 * The terms of a fit under v_g = phi m_g^-delta at a given delta; null where the residuals vanish, so that no likelihood has a maximum.
 *
 *     l   = -1/2 [ G ln 2 pi phi + sum ln a + G ],                                          phi = RSS / G,  a = m^-delta
 *     l_R = -1/2 [ (G - k) ln 2 pi phi + sum ln a + ln det(X' A^-1 X) + (G - k) ],           phi = RSS / (G - k)
 *     dl / ddelta = 1/2 [ sum ln m - G sum q ],  dl_R / ddelta = 1/2 [ sum (1 - h) ln m - (G - k) sum q ],  q = r^2 ln m / RSS  (r whitened)
 *
 * sizes: m with their logs (`sizeLogsOf`). Errors of the coefficients: phi at divisor G under full likelihood, else at G - k.
 *
 * Source: Carroll & Ruppert 1988.
 */
export function exponentFit(of: {
  readonly fitted: Fitted;
  readonly sizes: SizeLogs;
  readonly delta: number;
}): ExponentFit | null {
  const { fitted, sizes, delta } = of;
  const { design, response, residualFreedom: freedom } = fitted;
  const shape = shapeAt(sizes, delta);
  const solved = leastSquares({ columns: design.columns, y: response, variances: shape });
  if ('dependent' in solved || solved.perfect || freedom <= 0) return null;
  const cells = shape.length;
  const rss = sumOfSquares(solved.whitened);
  const leverages = leveragesOf(solved.basis, shape.length);
  const logShape = -delta * sizes.total;
  const logGram = 2 * sum(solved.triangle.map((column, j) => log(Math.abs(column[j] as number))));
  const shares = solved.whitened.map((r) => (r * r) / rss);
  const pulled = dot(shares, sizes.logs);
  return {
    delta,
    logLikelihood: -(cells * (LOG_TWO_PI + log(rss / cells) + 1) + logShape) / 2,
    restrictedLogLikelihood: -(freedom * (LOG_TWO_PI + log(rss / freedom) + 1) + logShape + logGram) / 2,
    slope: (sizes.total - cells * pulled) / 2,
    restrictedSlope: (sizes.total - dot(leverages, sizes.logs) - freedom * pulled) / 2,
    fitted: () => fittedWith({ fitted, shape, solved, rss }),
  };
}

/** Sizes with what every exponent needs of them, taken once: few sizes are distinct where many cells are. */
export interface SizeLogs {
  readonly sizes: Float64Array;
  readonly logs: Float64Array;
  /** sum ln m. */
  readonly total: number;
  readonly distinct: readonly number[];
}

/** sizes: m, length G, above 0. */
export function sizeLogsOf(sizes: Float64Array): SizeLogs {
  const distinct = [...new Set(sizes)];
  const known = new Map(distinct.map((m) => [m, log(m)]));
  const logs = sizes.map((m) => known.get(m) as number);
  return { sizes, logs, total: sum(logs), distinct };
}

/** m^-delta, with exponents 0 and 1 exact. */
function shapeAt({ sizes, distinct }: SizeLogs, delta: number): Float64Array {
  const known = new Map(distinct.map((m) => [m, delta === 1 ? 1 / m : pow(m, -delta)]));
  return sizes.map((m) => known.get(m) as number);
}

/** The fit as inference takes it: one scale, estimated, times what the exponent gives. */
function fittedWith(of: {
  readonly fitted: Fitted;
  readonly shape: Float64Array;
  readonly solved: Solved;
  readonly rss: number;
}): Fitted {
  const { fitted, shape, solved, rss } = of;
  const cells = shape.length;
  const estimate: Estimate = fitted.estimate.method === 'full' ? { method: 'full' } : { method: 'least-squares' };
  const scale = rss / (estimate.method === 'full' ? cells : fitted.residualFreedom);
  const omegaShape = independent(shape);
  const sampling = { kind: 'size-power', scale: 'free', at: () => shape, slopeAt: null } as const;
  return {
    ...fitted,
    structure: joinParts({ cells, sampling, between: 'none', fixed: {} }),
    estimate,
    theta: Float64Array.of(scale),
    ...heldParts({ solved, omegaShape, weighting: omegaShape, scale, targetIsStructure: true }),
    scale,
    targetIsStructure: true,
    estimatedParameters: 1,
  };
}
