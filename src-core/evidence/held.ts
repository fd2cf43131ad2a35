import { leastSquares } from '../algebra/least-squares';
import { leveragesOf } from '../algebra/orthonormal';
import { throughDiagonal } from '../algebra/through-diagonal';
import { errorsOf, pullsOf } from '../estimate/fit-at';
import type { Fitted } from '../estimate/fitted';
import { takeRows } from '../numbers/decimals';
import { sumOfSquares } from '../numbers/sums';
import { take, takeDesign, takeStructure } from './subset';

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
  const shape = take(fitted.shape, rows);
  const weighting = fitted.targetIsStructure ? shape : take(fitted.weighting, rows);
  const solved = leastSquares({ columns: design.columns, y: response, variances: weighting });
  if ('dependent' in solved) return null;
  const whitened = solved.residuals.map((r, g) => r / Math.sqrt(shape[g] as number));
  const scale = fitted.scale === null ? null : heldScale(fitted, whitened);
  const theta = fitted.theta.slice();
  if (scale !== null && fitted.structure.scaleAt >= 0) theta[fitted.structure.scaleAt] = scale;
  const variances = shape.map((v) => v * (scale ?? 1));
  const pulls = pullsOf(solved, weighting);
  const covariance = throughDiagonal(pulls, variances);
  return {
    ...fitted,
    response,
    design,
    structure: takeStructure(fitted.structure, rows),
    theta,
    variances,
    shape,
    scale,
    weighting,
    coefficients: solved.solution,
    residuals: solved.residuals,
    whitened,
    covariance,
    errors: errorsOf({ covariance, pulls, variances }),
    pulls,
    gramInverse: solved.gramInverse,
    leverages: leveragesOf(solved.basis, rows.length),
    residualFreedom: rows.length - design.names.length,
    condition: solved.condition,
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
