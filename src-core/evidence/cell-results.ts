import type { Covariance } from '../algebra/covariance';
import { factorOf } from '../algebra/factored';
import { largestOf } from '../algebra/powers-of-two';
import type { Fitted } from '../estimate/fitted';
import type { CellResult } from '../protocol/result';
import type { Cells } from '../table/cells';
import { type CellInfluence, influenceOf } from './influence';
import { shrunkenOf } from './shrunken';

export interface CellResults {
  readonly cells: CellResult[];
  /** (sum w)^2 / sum w^2 of the estimator's weights. */
  readonly effectiveCells: number | null;
}

/**
 * What the result says of each used cell: its data, fit, weight, influence and shrunken estimate.
 *
 *     share_g = w_g / sum w,  effective cells = (sum w)^2 / sum w^2,  w = A^-1 1, A what the estimator weights by
 *
 * Observed, fitted and residual on the scale of the fit, in its unit; under maximum likelihood with a link as shares or rates, their variance with them; `weight` is 1 / v_g with a free scale left out, `weightShare` is of the
 * estimator's own weights (another target has others). Cells in data order. Nothing is missing in used cells; undefined figures are null.
 *
 * Example: weights 1, 1, 2 have shares .25, .25, .5 and 16 / 6 effective cells.
 * Source: METHODS of the program, 5 and 7.
 */
export function cellResultsOf(of: { readonly fitted: Fitted; readonly cells: Cells }): CellResults {
  const { fitted, cells } = of;
  const influence = influenceOf(fitted);
  const shrunken = shrunkenOf(fitted);
  const { shares, effectiveCells } = concentrationOf(fitted.weighting);
  const results = cells.labels.map((label, g): CellResult => {
    const { observed, residual, slope } = ownScale(fitted, g);
    const own = influence[g] as CellInfluence;
    return {
      label,
      size: cells.size?.[g] ?? null,
      effectiveSize: cells.effectiveSize?.[g] ?? null,
      variance: finiteOr(fitted.variances[g] as number, fitted.shape[g] as number) * slope * slope,
      observed,
      fitted: observed - residual,
      residual,
      whitened: fitted.whitened[g] as number,
      leverage: fitted.leverages[g] as number,
      ...own,
      weight: 1 / (fitted.shape[g] as number) / slope / slope,
      weightShare: shares[g] as number,
      ...(shrunken?.[g] ?? nothingShrunken),
    };
  });
  return { cells: results, effectiveCells };
}

/** A cell on the scale that its observation stands on: under a link the share or rate itself, whose variance is that of the working one times slope^2. */
function ownScale(
  { response, residuals, fixedPoint }: Fitted,
  g: number,
): { readonly observed: number; readonly residual: number; readonly slope: number } {
  const link = fixedPoint?.link;
  if (!fixedPoint || !link) return { observed: response.high[g] as number, residual: residuals[g] as number, slope: 1 };
  const observed = link.observed.high[g] as number;
  return { observed, residual: observed - (fixedPoint.means[g] as number), slope: link.slopes[g] as number };
}

const nothingShrunken = { shrunken: null, ownShare: null, mse: null, mseParts: null };

/** Where as many cells as terms leave the scale undefined, the variance is told with the scale left out. */
function finiteOr(value: number, otherwise: number): number {
  return Number.isFinite(value) ? value : otherwise;
}

/**
 * Shares and effective number of the estimator's weights.
 *
 *     w = A^-1 1,  1 / a_g where cells are independent; under correlation a weight may be negative
 *
 * weighting: A, any unit. Relative to the largest, so that no square overflows.
 */
export function concentrationOf(weighting: Covariance): { shares: Float64Array; effectiveCells: number } {
  const relative = relativeWeights(weighting);
  let total = 0;
  let squares = 0;
  for (const w of relative) {
    total += w;
    squares += w * w;
  }
  return { shares: relative.map((w) => w / total), effectiveCells: (total * total) / squares };
}

function relativeWeights(weighting: Covariance): Float64Array {
  const { diagonal } = weighting;
  if (!weighting.blocks) {
    let least = Infinity;
    for (const a of diagonal) least = Math.min(least, a);
    return diagonal.map((a) => least / a);
  }
  const weights = factorOf(weighting).solve(new Float64Array(diagonal.length).fill(1));
  const largest = largestOf(weights);
  return weights.map((w) => w / largest);
}
