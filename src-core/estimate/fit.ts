import { type Covariance, independent } from '../algebra/covariance';
import { factored, factorOf } from '../algebra/factored';
import { leastSquares, type Solved } from '../algebra/least-squares';
import { freeParameters } from '../model/structure';
import { sumOfSquares } from '../numbers/sums';
import { done, type Outcome, refuse } from '../protocol/outcome';
import { alikeUnderWeights } from './alike-under-weights';
import { fitAt, ownWeighting, shapeAt } from './fit-at';
import { fitMeans } from './fit-means';
import type { Model } from './fit-model';
import type { Fitted } from './fitted';
import { heldRows, likelihoodRows } from './likelihood-rows';
import { maximise } from './maximise';
import { momentTau2 } from './moments';
import { startNear } from './near';
import { residualTrace } from './residual-trace';

export type { Model } from './fit-model';

/**
 * Fits the model: the variance parameters by the plan's method, then one refined least squares on whitened data.
 *
 *     b = (X' A^-1 X)^-1 X' A^-1 y,  Var(b) = C Omega C'
 *
 * Methods: least-squares (nothing or one common scale unknown; phi at divisor G - k), full (divisor G), restricted (G - k), two-step
 * (residuals of unweighted least squares held; divisor G), moments (between + given).
 * With G = k a common scale is NaN, and with it the covariance. Residuals that are all zero give the scale 0 under least-squares and
 * two-step. Refuses what a method cannot estimate (`not-together`), columns that the weights alone make depend on each other
 * (`dependent-columns`), a likelihood without residuals (`nothing-left-over`) and one whose maximum
 * was not found (`no-convergence`).
 *
 * Example: `fitStructure({ response, design, structure, estimate: { method: 'restricted' } })`.
 * Source: Aitken 1935; Patterson & Thompson 1971; Carroll & Ruppert 1988.
 */
export function fitStructure(model: Model): Outcome<Fitted> {
  const { meanDependent } = model.structure;
  return meanDependent ? fitMeans(model, meanDependent, fitSettled) : fitSettled(model);
}

function fitSettled(model: Model): Outcome<Fitted> {
  const estimated = thetaOf(model);
  if (!estimated.ok) return estimated;
  const { response, design, structure, estimate } = model;
  const { theta } = estimated.value;
  const weighting = weightingAt(model, theta);
  const known = weighting === null ? estimated.value.solved : undefined;
  const covariance = weighting ?? ownWeighting(structure, shapeAt(structure, theta));
  const solved = known ?? leastSquares({ columns: design.columns, y: response, covariance });
  if ('dependent' in solved) return alikeUnderWeights(design, solved.dependent);
  return done(fitAt({ response, design, structure, estimate, weighting, ...estimated.value, solved }));
}

/** With independent cells the structure's diagonal is the structure. */
function weightingAt({ structure, weighting = null }: Model, theta: Float64Array): Covariance | null {
  if (weighting !== 'diagonal') return weighting;
  const shape = shapeAt(structure, theta);
  return shape.blocks ? independent(shape.diagonal) : null;
}

/** The same fit with the weights of its own structure, whatever the target: itself where that is the target. */
export function underStructure(fitted: Fitted): Fitted {
  if (fitted.targetIsStructure) return fitted;
  const { response, design, structure, estimate, theta, startsTried, fixedPoint } = fitted;
  const own = fitAt({ response, design, structure, estimate, theta, startsTried, weighting: null });
  return fixedPoint ? { ...own, fixedPoint } : own;
}

interface Estimated {
  readonly theta: Float64Array;
  readonly startsTried: number;
  /** The solution under the structure's own weights, where it was met on the way. */
  readonly solved?: Solved;
}

function thetaOf(model: Model): Outcome<Estimated> {
  const { structure, estimate } = model;
  const free = freeParameters(structure);
  const known = Float64Array.from(structure.parameters, (parameter) => parameter.fixed ?? 1);
  if (free.length === 0) return done({ theta: known, startsTried: 0 });
  if (estimate.method === 'moments') return byMoments(model, known);
  if (estimate.method === 'two-step') return byHeldResiduals(model, known);
  if (free.length === 1 && structure.commonScale) return byScale(model, known);
  if (estimate.method === 'least-squares' || structure.byDiagonal)
    return refuse('not-together', { keys: ['estimate', 'variance'] }, '/estimate/method');
  return byLikelihood(model);
}

/** phi = r~'r~ / f: f = G - k, or G under full likelihood. */
function byScale(model: Model, known: Float64Array): Outcome<Estimated> {
  const { response, design, structure, estimate } = model;
  if (structure.byDiagonal) return byDiagonal(model, known);
  const solved = leastSquares({ columns: design.columns, y: response, covariance: shapeAt(structure, known) });
  if ('dependent' in solved) return alikeUnderWeights(design, solved.dependent);
  const cells = response.high.length;
  const freedom = cells - design.columns.length;
  const likelihood = estimate.method !== 'least-squares';
  if (likelihood && (freedom === 0 || solved.perfect))
    return refuse('nothing-left-over', { cells, coefficients: design.columns.length }, '/estimate/method');
  const phi =
    freedom === 0 ? Number.NaN : sumOfSquares(solved.whitened) / (estimate.method === 'full' ? cells : freedom);
  return done({ theta: withValue(known, structure.scaleAt, phi), startsTried: 1, solved });
}

/** phi = r' D^-1 r / tr(M_D V), D the diagonal of a V that is not inverted: unbiased, and G - k where V is diagonal. */
function byDiagonal(model: Model, known: Float64Array): Outcome<Estimated> {
  const { response, design, structure, estimate } = model;
  if (estimate.method !== 'least-squares')
    return refuse('not-together', { keys: ['estimate', 'variance'] }, '/estimate/method');
  const shape = shapeAt(structure, known);
  const solved = leastSquares({ columns: design.columns, y: response, variances: shape.diagonal });
  if ('dependent' in solved) return alikeUnderWeights(design, solved.dependent);
  const left = residualTrace({ solved, weighting: independent(shape.diagonal), omega: shape });
  const empty = response.high.length === design.columns.length;
  const phi = empty || !(left > 0) ? Number.NaN : sumOfSquares(solved.whitened) / left;
  return done({ theta: withValue(known, structure.scaleAt, phi), startsTried: 1 });
}

function byLikelihood(model: Model): Outcome<Estimated> {
  const { structure, estimate, hooks, near } = model;
  const rows = likelihoodRows(model);
  const restricted = estimate.method === 'restricted';
  if (near) {
    const from = startNear(structure, near);
    return maximise({ rows, structure, restricted, from, brief: true, ...(hooks && { hooks }) });
  }
  return maximise({ rows, structure, restricted, ...(hooks && { hooks }) });
}

/** Variance parameters from the residuals of unweighted least squares, held. */
function byHeldResiduals(model: Model, known: Float64Array): Outcome<Estimated> {
  const { response, design, structure, hooks } = model;
  const solved = leastSquares({ columns: design.columns, y: response, variances: null });
  if ('dependent' in solved) throw new RangeError('the design was not checked');
  if (freeParameters(structure).length === 1 && structure.commonScale) {
    const shape = shapeAt(structure, known);
    const cells = response.high.length;
    const weights = structure.byDiagonal ? independent(shape.diagonal) : shape;
    const phi = cells === design.columns.length ? Number.NaN : weightedSquares(solved.residuals, weights) / cells;
    return done({ theta: withValue(known, structure.scaleAt, phi), startsTried: 1 });
  }
  const cells = response.high.length;
  if (cells === design.columns.length || solved.perfect)
    return refuse('nothing-left-over', { cells, coefficients: design.columns.length }, '/estimate/method');
  return maximise({ rows: heldRows(solved.residuals), structure, restricted: false, ...(hooks && { hooks }) });
}

/** r' A^-1 r. */
function weightedSquares(residuals: Float64Array, covariance: Covariance): number {
  if (covariance.blocks) return sumOfSquares(factorOf(covariance).whitened(residuals));
  return residuals.reduce((sum, r, g) => sum + (r * r) / (covariance.diagonal[g] as number), 0);
}

function byMoments(model: Model, known: Float64Array): Outcome<Estimated> {
  const { structure, estimate, response, design } = model;
  const free = freeParameters(structure);
  if (estimate.method !== 'moments' || free.length !== 1 || free[0] !== structure.betweenAt)
    return refuse('not-together', { keys: ['estimate', 'variance'] }, '/estimate/method');
  if (estimate.rule !== 'hanushek') {
    // The other rules weigh by the errors alone, tau^2 left out.
    const covariance = ownWeighting(structure, shapeAt(structure, withValue(known, structure.betweenAt, 0)));
    if (!factored(covariance).ok) return refuse('not-together', { keys: ['estimate', 'variance'] }, '/estimate/method');
    const without = leastSquares({ columns: design.columns, y: response, covariance });
    if ('dependent' in without) return alikeUnderWeights(design, without.dependent);
  }
  const tau2 = momentTau2(model, estimate.rule);
  if (Number.isNaN(tau2))
    return refuse(
      'nothing-left-over',
      { cells: response.high.length, coefficients: design.columns.length },
      '/estimate/method',
    );
  return done({ theta: withValue(known, structure.betweenAt, tau2), startsTried: 1 });
}

function withValue(theta: Float64Array, at: number, value: number): Float64Array {
  const next = theta.slice();
  next[at] = value;
  return next;
}
