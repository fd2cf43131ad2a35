import { takeCovariance } from '../algebra/covariance';
import { leastSquares } from '../algebra/least-squares';
import { heldParts } from '../estimate/fit-at';
import type { Fitted } from '../estimate/fitted';
import { takeStructure } from '../model/structure-join';
import { takeRows } from '../numbers/decimals';
import { sumOfSquares } from '../numbers/sums';
import { takeDesign } from './subset';

/**
 * The same model on some of the cells, or on all in another order: variance parameters held, a free common scale alone re-estimated.
 *
 *     phi' = phi (RSS' / f') / (RSS / f),  f = G under full likelihood and two-step, else G - k
 *
 * Under another target the scale is not the estimator's own and is held too.
 * Null where the cells left cannot carry the terms: fewer of them, or columns that depend on each other.
 *
 * Source: METHODS of the program, 5.
 */
export function heldFit(fitted: Fitted, rows: readonly number[]): Fitted | null {
  const design = takeDesign(fitted.design, rows);
  if (rows.length < design.names.length) return null;
  const response = takeRows(fitted.response, rows);
  const omegaShape = takeCovariance(fitted.omegaShape, rows);
  const { targetIsStructure } = fitted;
  const weighting = targetIsStructure ? omegaShape : takeCovariance(fitted.weighting, rows);
  const solved = leastSquares({ columns: design.columns, y: response, covariance: weighting });
  if ('dependent' in solved) return null;
  const scale = fitted.scale === null ? null : heldScale(fitted, solved.whitened);
  const theta = fitted.theta.slice();
  if (scale !== null && fitted.structure.scaleAt >= 0) theta[fitted.structure.scaleAt] = scale;
  return {
    ...fitted,
    ...heldParts({ solved, omegaShape, weighting, scale, targetIsStructure }),
    response,
    design,
    structure: takeStructure(fitted.structure, rows),
    theta,
    scale,
    residualFreedom: rows.length - design.names.length,
  };
}

function heldScale(fitted: Fitted, whitened: Float64Array): number {
  const scale = fitted.scale as number;
  if (!fitted.targetIsStructure) return scale;
  const byCells = fitted.estimate.method === 'full' || fitted.estimate.method === 'two-step';
  const k = fitted.design.names.length;
  const freedom = (cells: number): number => (byCells ? cells : cells - k);
  const left = freedom(whitened.length);
  const before = sumOfSquares(fitted.whitened);
  if (left <= 0) return Number.NaN;
  if (!(before > 0)) return sumOfSquares(whitened) / left;
  return ((scale * sumOfSquares(whitened)) / before / left) * freedom(fitted.whitened.length);
}
