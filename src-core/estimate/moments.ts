import { leastSquares } from '../algebra/least-squares';
import { leveragesOf } from '../algebra/orthonormal';
import type { Design } from '../model/design';
import type { Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import type { MomentRule } from '../protocol/plan';

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
 *     dersimonian-laird   (Q - (G-k)) / tr M,  Q = y'M y,  M = W - W X (X'W X)^-1 X'W,  W = 1/s^2
 *     paule-mandel        the root of r'W(tau^2) r = G - k,  W = 1/(tau^2 + s^2)
 *     hanushek            (sum e^2 - sum s^2 (1 - h)) / (G-k),  e, h of unweighted least squares
 *
 * In squared units of the outcome. With G = k there is nothing to estimate it from: NaN.
 *
 * Example: thirteen vaccine trials, mean log risk ratio: .30876026, .31806845.
 * Source: DerSimonian & Laird 1986; Paule & Mandel 1982; Hanushek 1974; Lewis & Linzer 2005.
 */
export function momentTau2(model: MomentModel, rule: MomentRule): number {
  const freedom = model.response.high.length - model.design.columns.length;
  if (freedom <= 0) return Number.NaN;
  if (rule === 'hanushek') return hanushek(model, freedom);
  const at = heterogeneityAt(model, 0);
  if (!(at.q > freedom)) return 0;
  return rule === 'dersimonian-laird' ? (at.q - freedom) / at.trace : pauleMandel(model, freedom);
}

/**
 * Q(tau^2) = r' W r with W = 1/(tau^2 + s^2), its derivative, and tr M at that tau^2: what moment rules and Q-profile intervals solve with.
 *
 *     dQ/dtau^2 = - sum w^2 r^2
 */
export function heterogeneityAt(
  model: MomentModel,
  tau2: number,
): { readonly q: number; readonly slope: number; readonly trace: number } {
  const variances = variancesWith(model.structure, tau2);
  const solved = leastSquares({ columns: model.design.columns, y: model.response, variances });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  const leverages = leveragesOf(solved.basis, solved.residuals.length);
  let [q, slope, trace] = [0, 0, 0];
  for (let g = 0; g < variances.length; g++) {
    const v = variances[g] as number;
    const square = (solved.whitened[g] as number) * (solved.whitened[g] as number);
    q += square;
    slope -= square / v;
    trace += (1 - (leverages[g] as number)) / v;
  }
  return { q, slope, trace };
}

/** v_g with tau^2 set; a fixed scale of the given part at its value. */
function variancesWith(structure: Structure, tau2: number): Float64Array {
  const theta = Float64Array.from(structure.parameters, (parameter) => parameter.fixed ?? 1);
  theta[structure.betweenAt] = tau2;
  return structure.variancesAt(theta);
}

function hanushek(model: MomentModel, freedom: number): number {
  const sampling = variancesWith(model.structure, 0);
  const solved = leastSquares({ columns: model.design.columns, y: model.response, variances: null });
  if ('dependent' in solved) throw new RangeError('the design was not checked');
  const leverages = leveragesOf(solved.basis, solved.residuals.length);
  let left = 0;
  for (let g = 0; g < sampling.length; g++) {
    const e = solved.residuals[g] as number;
    left += e * e - (sampling[g] as number) * (1 - (leverages[g] as number));
  }
  return Math.max(0, left / freedom);
}

/** Newton's steps on Q(tau^2) - (G-k): Q falls and is convex, so that from 0 every step stays below the root. */
function pauleMandel(model: MomentModel, freedom: number): number {
  let tau2 = 0;
  for (let step = 0; step < STEPS; step++) {
    const { q, slope } = heterogeneityAt(model, tau2);
    const next = tau2 + (freedom - q) / slope;
    if (!(next > tau2 * (1 + 1e-15))) return tau2;
    tau2 = next;
  }
  return tau2;
}
