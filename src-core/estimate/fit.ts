import { leastSquares } from '../algebra/least-squares';
import type { Design } from '../model/design';
import { freeParameters, type Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import { sumOfSquares } from '../numbers/sums';
import { done, type Outcome, refuse } from '../protocol/outcome';
import type { Estimate } from '../protocol/plan';
import type { Hooks } from '../protocol/source';
import { fitAt, shapeAt } from './fit-at';
import type { Fitted } from './fitted';
import { heldRows, likelihoodRows } from './likelihood-rows';
import { maximise } from './maximise';
import { momentTau2 } from './moments';

export interface Model {
  /** Length G, on the scale of the fit. */
  readonly response: Decimals;
  readonly design: Design;
  readonly structure: Structure;
  readonly estimate: Estimate;
  /** a_g of the estimator's weights 1 / a_g, up to a factor; null or absent: from the structure. */
  readonly weighting?: Float64Array | null;
  readonly hooks?: Hooks;
}

/**
 * Fits the model: the variance parameters by the plan's method, then one refined least squares on whitened data.
 *
 *     b = (X' A^-1 X)^-1 X' A^-1 y,  Var(b) = C Omega C'
 *
 * Methods: least-squares (nothing or one common scale unknown; phi at divisor G - k), full (divisor G), restricted (G - k), two-step
 * (residuals of unweighted least squares held; divisor G), moments (between + given).
 * With G = k a common scale is NaN, and with it the covariance. Residuals that are all zero give the scale 0 under least-squares and
 * two-step. Refuses what a method cannot estimate (`not-together`), a likelihood without residuals (`nothing-left-over`) and one whose maximum
 * was not found (`no-convergence`).
 *
 * Example: `fitStructure({ response, design, structure, estimate: { method: 'restricted' } })`.
 * Source: Aitken 1935; Patterson & Thompson 1971; Carroll & Ruppert 1988.
 */
export function fitStructure(model: Model): Outcome<Fitted> {
  const estimated = thetaOf(model);
  if (!estimated.ok) return estimated;
  const { response, design, structure, estimate, weighting = null } = model;
  const fitted = fitAt({ response, design, structure, estimate, weighting, ...estimated.value });
  return done(fitted);
}

/** The same fit with the weights of its own structure, whatever the target: itself where that is the target. */
export function underStructure(fitted: Fitted): Fitted {
  if (fitted.targetIsStructure) return fitted;
  const { response, design, structure, estimate, theta, startsTried } = fitted;
  return fitAt({ response, design, structure, estimate, theta, startsTried, weighting: null });
}

interface Estimated {
  readonly theta: Float64Array;
  readonly startsTried: number;
}

function thetaOf(model: Model): Outcome<Estimated> {
  const { structure, estimate } = model;
  const free = freeParameters(structure);
  const known = Float64Array.from(structure.parameters, (parameter) => parameter.fixed ?? 1);
  if (free.length === 0) return done({ theta: known, startsTried: 0 });
  if (estimate.method === 'moments') return byMoments(model, known);
  if (estimate.method === 'two-step') return byHeldResiduals(model, known);
  if (free.length === 1 && structure.commonScale) return byScale(model, known);
  if (estimate.method === 'least-squares')
    return refuse('not-together', { keys: ['estimate', 'variance'] }, '/estimate/method');
  return byLikelihood(model);
}

/** phi = r~'r~ / f: f = G - k, or G under full likelihood. */
function byScale(model: Model, known: Float64Array): Outcome<Estimated> {
  const { response, design, structure, estimate } = model;
  const solved = leastSquares({ columns: design.columns, y: response, variances: shapeAt(structure, known) });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  const cells = response.high.length;
  const freedom = cells - design.columns.length;
  const likelihood = estimate.method !== 'least-squares';
  if (likelihood && (freedom === 0 || solved.perfect))
    return refuse('nothing-left-over', { cells, coefficients: design.columns.length }, '/estimate/method');
  const phi =
    freedom === 0 ? Number.NaN : sumOfSquares(solved.whitened) / (estimate.method === 'full' ? cells : freedom);
  return done({ theta: withValue(known, structure.scaleAt, phi), startsTried: 1 });
}

function byLikelihood(model: Model): Outcome<Estimated> {
  const { structure, estimate, hooks } = model;
  const rows = likelihoodRows(model);
  const restricted = estimate.method === 'restricted';
  return maximise({ rows, structure, restricted, ...(hooks && { hooks }) });
}

/** Variance parameters from the residuals of unweighted least squares, held. */
function byHeldResiduals(model: Model, known: Float64Array): Outcome<Estimated> {
  const { response, design, structure, hooks } = model;
  const solved = leastSquares({ columns: design.columns, y: response, variances: null });
  if ('dependent' in solved) throw new RangeError('the design was not checked');
  if (freeParameters(structure).length === 1 && structure.commonScale) {
    const shape = shapeAt(structure, known);
    const squares = solved.residuals.map((e, g) => (e * e) / (shape[g] as number));
    const sum = squares.reduce((total, square) => total + square, 0);
    const empty = response.high.length === design.columns.length;
    return done({
      theta: withValue(known, structure.scaleAt, empty ? Number.NaN : sum / squares.length),
      startsTried: 1,
    });
  }
  const cells = response.high.length;
  if (cells === design.columns.length || solved.perfect)
    return refuse('nothing-left-over', { cells, coefficients: design.columns.length }, '/estimate/method');
  return maximise({ rows: heldRows(solved.residuals), structure, restricted: false, ...(hooks && { hooks }) });
}

function byMoments(model: Model, known: Float64Array): Outcome<Estimated> {
  const { structure, estimate, response, design } = model;
  const free = freeParameters(structure);
  if (estimate.method !== 'moments' || free.length !== 1 || free[0] !== structure.betweenAt)
    return refuse('not-together', { keys: ['estimate', 'variance'] }, '/estimate/method');
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
