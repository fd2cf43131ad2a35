import type { Covariance } from '../algebra/covariance';
import { errorOf, factored } from '../algebra/factored';
import { leastSquares } from '../algebra/least-squares';
import { omegaAt } from '../model/structure';
import { chiSquareUpper, normalUpperQuantile, tUpperQuantile } from '../numbers/distributions';
import { lengthOf, plainSquares } from '../numbers/sums';
import type { DetailValue, Evidence } from '../protocol/result';
import type { Frame } from './frame';
import { type Common, heterogeneityDeparture } from './heterogeneity-departure';
import { evidenceOf, notApplicable, withDeparture } from './reading';

/**
 * Do cells differ beyond their given errors?
 *
 *     Q = r'Wr of the fit weighted by W = 1 / s^2, or by the inverse of a given matrix, chi-square on G - k
 *     I^2 = max(0, 1 - (G-k) / Q), H^2 = Q / (G-k);  with tau^2: I^2 = tau^2 / (tau^2 + s), H^2 = 1 + tau^2 / s, s = (G-k) / tr M
 *     prediction: x'b -/+ q root(tau^2 + x' Var(b) x), the true value of a new cell; x: the columns' means over the cells
 *
 * Only where the structure is given errors or a matrix of fixed scale, alone or with a between part; not applicable otherwise, nor to a matrix
 * without an inverse.
 * detail: iSquaredQ, hSquaredQ, iSquaredTau2, hSquaredTau2 (null without tau^2), prediction by the normal, t with G - k and with
 * G - k - 1 (empty without tau^2), predictionAt (x by coefficient), level.
 * Source: Cochran 1954; Higgins & Thompson 2002; Higgins, Thompson & Spiegelhalter 2009.
 */
export function heterogeneity(frame: Frame, cancelled: () => boolean): Evidence {
  const test = 'heterogeneity';
  if (!hasGivenErrors(frame)) return notApplicable(test, 'structure');
  if (frame.freedom < 1) return notApplicable(test, 'no-residual-freedom');
  const { fitted, freedom } = frame;
  const common = commonOf(frame);
  if (!common) return notApplicable(test, 'structure');
  const tau2 = fitted.structure.betweenAt < 0 ? null : (fitted.theta[fitted.structure.betweenAt] as number);
  const typical = freedom / common.traceM;
  const detail = {
    iSquaredQ: common.q > freedom ? 1 - freedom / common.q : 0,
    hSquaredQ: common.q / freedom,
    iSquaredTau2: tau2 === null ? null : tau2 / (tau2 + typical),
    hSquaredTau2: tau2 === null ? null : 1 + tau2 / typical,
    ...(tau2 === null ? { prediction: [] } : predictionOf(frame, tau2)),
  };
  const p = chiSquareUpper(common.q, freedom);
  const evidence = evidenceOf(test, { statistic: common.q, freedom1: freedom, p, detail });
  return withDeparture(evidence, heterogeneityDeparture({ frame, common, guess: typical, cancelled }));
}

function hasGivenErrors({ plan }: Frame): boolean {
  const others = plan.variance.parts.filter((part) => part.kind !== 'between');
  const [part] = others;
  if (others.length !== 1 || part === undefined) return false;
  if (part.kind === 'matrix') return part.scale === 'fixed';
  return part.kind === 'given' && part.scale === 'fixed' && part.correlation === null;
}

/** Null where the errors have no inverse, or leave nothing to tell the columns apart by. */
function commonOf({ fitted }: Frame): Common | null {
  const { structure, theta, design, response } = fitted;
  const { betweenAt } = structure;
  const own = omegaAt(structure, betweenAt < 0 ? theta : theta.with(betweenAt, 0));
  const omegaWith = (tau2: number): Covariance =>
    betweenAt < 0 ? withDiagonal(own, tau2) : omegaAt(structure, theta.with(betweenAt, tau2));
  const factoring = factored(own);
  if (!factoring.ok) return null;
  const solved = leastSquares({ columns: design.columns, y: response, covariance: own });
  if ('dependent' in solved) return null;
  const { inverseDiagonal, backwards } = factoring.factor;
  const taken = solved.basis.reduce((sum, q) => sum + plainSquares(backwards(q)), 0);
  return {
    basis: solved.basis,
    errors: own.diagonal.map(Math.sqrt),
    omegaWith,
    linked: structure.links !== null,
    q: plainSquares(solved.whitened),
    traceM: inverseDiagonal().reduce((sum, w) => sum + w, 0) - taken,
  };
}

/** Independent errors of one variance more on every cell. */
function withDiagonal({ diagonal, blocks }: Covariance, more: number): Covariance {
  return {
    diagonal: diagonal.map((v) => v + more),
    blocks:
      blocks?.map(({ cells, matrix }) => ({
        cells,
        matrix: matrix.map((value, i) => (i % (cells.length + 1) === 0 ? value + more : value)),
      })) ?? null,
  };
}

function predictionOf({ fitted, design, freedom, plan }: Frame, tau2: number) {
  const x = design.columns.map(({ high }) => high.reduce((sum, value) => sum + value, 0) / high.length);
  const centre = x.reduce((sum, value, j) => sum + value * (fitted.coefficients[j] as number), 0);
  const pull = fitted.response.high.map((_, g) =>
    x.reduce((sum, value, j) => sum + value * ((fitted.pulls[j] as Float64Array)[g] as number), 0),
  );
  const spread = lengthOf([Math.sqrt(tau2), errorOf(pull, fitted.omega)]);
  const { level } = plan.inference;
  const tail = (1 - level) / 2;
  const entry = (kind: 'normal' | 't', degrees: number | null): DetailValue => {
    if (degrees !== null && degrees < 1) return { reference: { kind, freedom: degrees }, low: null, high: null };
    const reach = spread * (degrees === null ? normalUpperQuantile(tail) : tUpperQuantile(tail, degrees));
    return { reference: { kind, freedom: degrees }, low: centre - reach, high: centre + reach };
  };
  return {
    prediction: [entry('normal', null), entry('t', freedom), entry('t', freedom - 1)],
    predictionAt: Object.fromEntries(design.names.map((name, j) => [name, x[j] as number])),
    level,
  };
}
