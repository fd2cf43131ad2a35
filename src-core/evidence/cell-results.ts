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
 *     share_g = w_g / sum w,  effective cells = (sum w)^2 / sum w^2,  w = 1 / a, a the variances that the estimator weights by
 *
 * Observed, fitted and residual on the scale of the fit, in its unit; `weight` is 1 / v_g with a free scale left out, `weightShare` is of the
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
    const observed = fitted.response.high[g] as number;
    const residual = fitted.residuals[g] as number;
    const own = influence[g] as CellInfluence;
    return {
      label,
      size: cells.size?.[g] ?? null,
      effectiveSize: cells.effectiveSize?.[g] ?? null,
      variance: finiteOr(fitted.variances[g] as number, fitted.shape[g] as number),
      observed,
      fitted: observed - residual,
      residual,
      whitened: fitted.whitened[g] as number,
      leverage: fitted.leverages[g] as number,
      ...own,
      weight: 1 / (fitted.shape[g] as number),
      weightShare: shares[g] as number,
      ...(shrunken?.[g] ?? nothingShrunken),
    };
  });
  return { cells: results, effectiveCells };
}

const nothingShrunken = { shrunken: null, ownShare: null, mse: null, mseParts: null };

/** Where as many cells as terms leave the scale undefined, the variance is told with the scale left out. */
function finiteOr(value: number, otherwise: number): number {
  return Number.isFinite(value) ? value : otherwise;
}

/** Shares and effective number of weights 1 / a: length G, any unit; relative to the largest, so that no square overflows. */
export function concentrationOf(variances: Float64Array): { shares: Float64Array; effectiveCells: number } {
  let least = Infinity;
  for (const a of variances) least = Math.min(least, a);
  const relative = variances.map((a) => least / a);
  let total = 0;
  let squares = 0;
  for (const w of relative) {
    total += w;
    squares += w * w;
  }
  return { shares: relative.map((w) => w / total), effectiveCells: (total * total) / squares };
}
