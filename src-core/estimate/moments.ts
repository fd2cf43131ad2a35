import { applied, type Covariance, independent } from '../algebra/covariance';
import { factorOf } from '../algebra/factored';
import { leastSquares } from '../algebra/least-squares';
import type { Design } from '../model/design';
import { omegaAt, type Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import { findRoot } from '../numbers/roots';
import { plainDot, sumOfSquares } from '../numbers/sums';
import type { MomentRule } from '../protocol/plan';
import { residualTrace } from './residual-trace';

interface MomentModel {
  readonly response: Decimals;
  readonly design: Design;
  readonly structure: Structure;
}

/** Steps of the search for Paule and Mandel's root at most: Newton's steps on a falling convex curve, from below. */
const STEPS = 200;

/**
 * tau^2 of between + given by a moment rule; 0 where the cells vary no more than their errors say.
 *
 *     dersimonian-laird   (Q - (G-k)) / tr(M R),  Q = y'M y,  M = W - W X (X'W X)^-1 X'W,  W = S^-1
 *     paule-mandel        the root of r'W(tau^2) r = G - k,  W = (S + tau^2 R)^-1
 *     hanushek            (sum e^2 - tr S + tr((X'X)^-1 X'S X)) / tr((I - H) R),  e, H of unweighted least squares
 *
 * S: the covariance without tau^2, the squared errors or a matrix; R: the between part at tau^2 = 1, I without a correlation. A matrix that is not to be
 * inverted: W from the diagonal, and for G - k what the left side is expected to be, tr(M S) and tr(M (S + tau^2 R)).
 * In squared units of the outcome. With G = k there is nothing to estimate it from: NaN.
 *
 * Example: thirteen vaccine trials, mean log risk ratio: .30876026, .31806845.
 * Source: DerSimonian & Laird 1986; Paule & Mandel 1982; Hanushek 1974; Lewis & Linzer 2005.
 */
export function momentTau2(model: MomentModel, rule: MomentRule): number {
  const freedom = model.response.high.length - model.design.columns.length;
  if (freedom <= 0) return Number.NaN;
  if (rule === 'hanushek') return hanushek(model);
  const at = heterogeneityAt(model, 0);
  if (!(at.q > at.expected)) return 0;
  return rule === 'dersimonian-laird' ? (at.q - at.expected) / at.trace : pauleMandel(model);
}

/** Q at one tau^2. */
export interface Heterogeneity {
  /** r'W r. */
  readonly q: number;
  /** dQ/dtau^2 = - r'W R W r, W moving with tau^2; not told (NaN) where W goes by a diagonal alone. */
  readonly slope: number;
  /** tr(M R). */
  readonly trace: number;
  /** What Q is expected to be: tr(M Omega), G - k where W = Omega^-1. */
  readonly expected: number;
}

/** Q(tau^2) = r' W r with W the inverse of Omega at that tau^2: what moment rules solve with. */
export function heterogeneityAt(model: MomentModel, tau2: number): Heterogeneity {
  const { structure } = model;
  const omega = omegaWith(structure, tau2);
  const weighting = structure.byDiagonal ? independent(omega.diagonal) : omega;
  const solved = leastSquares({ columns: model.design.columns, y: model.response, covariance: weighting });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  const q = sumOfSquares(solved.whitened);
  const between = betweenOf(structure);
  const trace = residualTrace({ solved, weighting, omega: between });
  if (structure.byDiagonal)
    return { q, slope: Number.NaN, trace, expected: residualTrace({ solved, weighting, omega }) };
  const weighed = factorOf(omega).solve(solved.residuals);
  const slope = -plainDot(weighed, applied(between, weighed));
  return { q, slope, trace, expected: solved.residuals.length - model.design.columns.length };
}

/** Omega with tau^2 set; whatever else is fixed at its value. */
function omegaWith(structure: Structure, tau2: number): Covariance {
  return omegaAt(structure, withTau2(structure, tau2));
}

function withTau2(structure: Structure, tau2: number): Float64Array {
  const theta = Float64Array.from(structure.parameters, (parameter) => parameter.fixed ?? 1);
  theta[structure.betweenAt] = tau2;
  return theta;
}

/** R of the between part, as a covariance. */
function betweenOf(structure: Structure): Covariance {
  const { links, betweenAt } = structure;
  const theta = withTau2(structure, 1);
  const diagonal = structure.derivativesAt(theta)[betweenAt] as Float64Array;
  const blocks = (links?.blocks ?? []).flatMap((cells, b) => {
    const matrix = links?.blockDerivativesAt(theta, b)[betweenAt];
    return matrix ? [{ cells, matrix }] : [];
  });
  return { diagonal, blocks: blocks.length > 0 ? blocks : null };
}

function hanushek(model: MomentModel): number {
  const solved = leastSquares({ columns: model.design.columns, y: model.response, variances: null });
  if ('dependent' in solved) throw new RangeError('the design was not checked');
  const weighting = independent(new Float64Array(solved.residuals.length).fill(1));
  const traceOf = (omega: Covariance) => residualTrace({ solved, weighting, omega });
  const left = sumOfSquares(solved.residuals) - traceOf(omegaWith(model.structure, 0));
  return Math.max(0, left / traceOf(betweenOf(model.structure)));
}

/** Newton's steps on Q(tau^2) - (G-k): Q falls and is convex, so that from 0 every step stays below the root. */
function pauleMandel(model: MomentModel): number {
  if (model.structure.byDiagonal) return pauleMandelByDiagonal(model);
  let tau2 = 0;
  for (let step = 0; step < STEPS; step++) {
    const { q, slope, expected } = heterogeneityAt(model, tau2);
    const next = tau2 + (expected - q) / slope;
    if (!(next > tau2 * (1 + 1e-15))) return tau2;
    tau2 = next;
  }
  return tau2;
}

/** The root of Q(tau^2) = tr(M Omega(tau^2)), stepping out until Q has fallen below. */
function pauleMandelByDiagonal(model: MomentModel): number {
  const above = (tau2: number): number => {
    const { q, expected } = heterogeneityAt(model, tau2);
    return q - expected;
  };
  const sizes = omegaWith(model.structure, 0).diagonal;
  let high = sizes.reduce((sum, v) => sum + v / sizes.length, 0);
  for (let step = 0; step < STEPS && above(high) > 0; step++) high *= 2;
  return findRoot({ of: above, low: 0, high, tolerance: 1e-15 * high }) ?? Number.NaN;
}
