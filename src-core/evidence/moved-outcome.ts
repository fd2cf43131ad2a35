import { timesFactor } from '../algebra/covariance';
import { factored } from '../algebra/factored';
import { underStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import { fromDoubles } from '../numbers/decimals';
import { plainDot, sumOfSquares } from '../numbers/sums';

/** A fit whose outcome can be moved while its weights stay. */
export interface Movable {
  readonly fitted: Fitted;
  /** C d, k: what moves of the outcome do to the coefficients. */
  readonly through: (moves: Float64Array) => Float64Array;
  /** P^-1 of the residuals' moves under the structure's own weights, an unscaled Omega = P P'. */
  readonly whitenedMoves: (moves: Float64Array) => Float64Array;
  /** Whitened residuals under the structure's own weights, before any move. */
  readonly whitened: Float64Array;
  /** P^-T x: whitened residuals to the gradient Q y of their half sum of squares. */
  readonly backwards: (whitened: Float64Array) => Float64Array;
  /** The free common scale after the residuals' sum of squares became this; 1 where there is none. */
  readonly scaleRatio: (squares: number) => number;
  /** The whole fit after moves of the outcome. */
  readonly moved: (moves: Float64Array) => Fitted;
}

/**
 * A fit under moves of its outcome, weights held: b(y + d) = b + C d, residuals y - X b likewise, a free common scale by its own residuals.
 *
 *     phi' = phi r~'r~ after / r~'r~ before
 *
 * Under another target the scale is that of the structure's own residuals.
 */
export function movable(fitted: Fitted): Movable {
  const own = underStructure(fitted);
  const factoring = fitted.omegaShape.blocks ? factored(fitted.omegaShape) : null;
  const roots = fitted.shape.map(Math.sqrt);
  const byRoots = (x: Float64Array): Float64Array => x.map((value, g) => value / (roots[g] as number));
  const whiten = factoring?.ok ? factoring.factor.whitened : byRoots;
  const backwards = factoring?.ok ? factoring.factor.backwards : byRoots;
  const before = sumOfSquares(own.whitened);
  const through = (moves: Float64Array): Float64Array => shiftsOf(fitted, moves);
  const scaleRatio = (squares: number): number => (fitted.scale === null ? 1 : squares / before);
  const whitenedMoves = (moves: Float64Array): Float64Array => whiten(residualMoves(own, moves));
  return {
    fitted,
    through,
    whitened: own.whitened,
    whitenedMoves,
    backwards,
    scaleRatio,
    moved: (moves) => {
      const shifts = through(moves);
      const structural = own === fitted ? null : added(own.whitened, whitenedMoves(moves));
      const residuals = added(fitted.residuals, residualMoves(fitted, moves));
      const whitened = structural && fitted.targetIsStructure ? structural : whiten(residuals);
      const squares = sumOfSquares(structural ?? whitened);
      return withScale(
        {
          ...fitted,
          response: fromDoubles(added(fitted.response.high, moves)),
          coefficients: added(fitted.coefficients, shifts),
          residuals,
          whitened,
        },
        scaleRatio(squares),
      );
    },
  };
}

function shiftsOf(fitted: Fitted, moves: Float64Array): Float64Array {
  return Float64Array.from(fitted.pulls, (pull) => plainDot(pull, moves));
}

/** d - X C d. */
function residualMoves(fitted: Fitted, moves: Float64Array): Float64Array {
  const left = moves.slice();
  const { columns } = fitted.design;
  for (const [j, shift] of shiftsOf(fitted, moves).entries()) {
    if (shift === 0) continue;
    const { high } = columns[j] as (typeof columns)[number];
    for (let g = 0; g < left.length; g++) left[g] = (left[g] as number) - shift * (high[g] as number);
  }
  return left;
}

/** A fit whose free common scale is another: ratio times what it was. A scale of 0 stays. */
export function withScale(fitted: Fitted, ratio: number): Fitted {
  if (fitted.scale === null || ratio === 1) return fitted;
  const scale = fitted.scale * ratio;
  const theta = fitted.theta.with(fitted.structure.scaleAt, scale);
  const omega = timesFactor(fitted.omegaShape, scale);
  return {
    ...fitted,
    ...{ scale, theta, omega },
    variances: omega.diagonal,
    covariance: fitted.covariance.map((row) => row.map((value) => value * ratio)),
    errors: fitted.errors.map((error) => error * Math.sqrt(ratio)),
  };
}

function added(a: Float64Array, b: Float64Array): Float64Array {
  return a.map((value, g) => value + (b[g] as number));
}
