import { throughDiagonal } from '../algebra/through-diagonal';
import { underStructure } from '../estimate/fit';
import { errorOf } from '../estimate/fit-at';
import type { Fitted } from '../estimate/fitted';
import { done, type Outcome, refuse, refuseAll } from '../protocol/outcome';
import type { Inference, Plan } from '../protocol/plan';
import type { Coefficient, FitResult, Reference } from '../protocol/result';
import type { Cells } from '../table/cells';
import { coefficientsOf } from './coefficients';
import { knappHartungFactor } from './knapp-hartung';
import { numberOrNull, standardNormal, studentOn } from './reference';
import { checkLeverage, robustSpread } from './robust';
import { errorFreedomsOf, freedomRange, satterthwaiteFreedom } from './satterthwaite';

/** A variance below this, the smallest normal double, has lost its digits: it is undefined, and not 0. */
const LEAST_VARIANCE = 2.2250738585072014e-308;

interface Spread {
  readonly spread: Float64Array | null;
  readonly factor: number | null;
}

/** What is claimed about the coefficients of a fit, under the inference that the plan asks for. */
export interface Inferred {
  readonly coefficients: Coefficient[];
  /** k x k, the one behind the standard errors; null entries where it is undefined. */
  readonly covariance: (number | null)[][];
  /** In coefficient order. */
  readonly references: readonly (Reference | null)[];
  /** Standard error of a combination of coefficients, from its k multipliers, by its own pulls: the root of x'Vx without the cancellation. */
  readonly errorOf: (multipliers: ArrayLike<number>) => number | null;
  /** Reference of a combination of coefficients, from its k multipliers. */
  readonly referenceOf: (multipliers: ArrayLike<number>) => Reference | null;
  readonly knappHartungQ: number | null;
  readonly errorFreedom: FitResult['errorFreedom'];
}

const later: readonly Inference['kind'][] = ['clustered', 'wild', 'kenward-roger'];

/** Refuses the kinds of inference that this version does not hold. */
function checkInference(plan: Pick<Plan, 'inference'>): Outcome<null> {
  const { kind } = plan.inference;
  return later.includes(kind) ? refuse('not-available', { what: kind }, '/inference/kind') : done(null);
}

/**
 * Errors, intervals and p values of the coefficients.
 *
 *     model           C Omega C'                     normal where every variance is known, t with G - k otherwise
 *     knapp-hartung   q C Omega C'                   t with G - k
 *     robust          HC0 to HC4, whitened           t with G - k
 *
 * Given errors that carry a freedom are never referred to the normal: t with Satterthwaite's freedom, coefficient by coefficient.
 * With as many cells as coefficients what rests on residuals is null.
 * Refuses the kinds of later versions (`not-available`) and a cell of leverage 1 under HC2 to HC4 (`leverage-one`).
 *
 * Example: `inferenceOf({ fitted, cells, plan })` with the plan of `fitted`; for a rival, a plan that holds the rival's variance.
 * Source: Knapp & Hartung 2003; White 1980; MacKinnon & White 1985; Satterthwaite 1946.
 */
export function inferenceOf(known: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
}): Outcome<Inferred> {
  const { fitted, cells, plan } = known;
  const available = checkInference(plan);
  if (!available.ok) return available;
  const { leverages, residualFreedom, design } = fitted;
  const pinned = checkLeverage({ plan, leverages, residualFreedom, labels: cells.labels });
  if (pinned.length > 0) return refuseAll(pinned);

  const factor = factorOf(fitted, plan.inference);
  const freedoms = errorFreedomsOf(plan, cells);
  const spread = spreadOf(fitted, plan.inference, factor);
  const covariance = covarianceOf(fitted, plan.inference, { spread, factor });
  const referenceOf = referencesOf(fitted, plan.inference, freedoms);
  const references = design.names.map((_, j) => referenceOf(design.names.map((_, l) => (l === j ? 1 : 0))));
  const { level } = plan.inference;
  return done({
    coefficients: coefficientsOf({
      names: design.names,
      estimates: fitted.coefficients,
      errors: errorsFor(fitted, plan.inference, { spread, factor }),
      references,
      level,
    }),
    covariance,
    references,
    referenceOf,
    errorOf: (multipliers) =>
      spread === null ? null : numberOrNull(errorOf(pullsOf(fitted.pulls, multipliers), spread)),
    knappHartungQ: factor,
    errorFreedom: freedomRange(freedoms),
  });
}

function factorOf(fitted: Fitted, inference: Inference): number | null {
  return inference.kind === 'knapp-hartung' ? knappHartungFactor(underStructure(fitted), inference.floor) : null;
}

/** V = C diag(spread) C'; null where it rests on residuals and none is free. */
function spreadOf(fitted: Fitted, inference: Inference, factor: number | null): Float64Array | null {
  if (inference.kind === 'robust') return robustSpread(fitted, inference.correction);
  if (inference.kind === 'knapp-hartung' && factor === null) return null;
  return fitted.variances.map((v) => v * (factor ?? 1));
}

function covarianceOf(fitted: Fitted, inference: Inference, known: Spread): (number | null)[][] {
  const { spread, factor } = known;
  if (spread === null) return fitted.pulls.map(() => fitted.pulls.map(() => null));
  if (inference.kind === 'robust')
    return throughDiagonal(fitted.pulls, spread).map((row) => Array.from(row, numberOrNull));
  return fitted.covariance.map((row, i) =>
    Array.from(row, (value, j) => {
      const vanished = i === j && Math.abs(value) < LEAST_VARIANCE && fitted.scale !== 0;
      return vanished ? null : numberOrNull(value * (factor ?? 1));
    }),
  );
}

function errorsFor(fitted: Fitted, inference: Inference, { spread, factor }: Spread): (number | null)[] {
  if (spread === null) return fitted.pulls.map(() => null);
  if (inference.kind === 'robust') return fitted.pulls.map((pull) => numberOrNull(errorOf(pull, spread)));
  return Array.from(fitted.errors, (error) => numberOrNull(error * Math.sqrt(factor ?? 1)));
}

function referencesOf(
  fitted: Fitted,
  inference: Inference,
  freedoms: Float64Array | null,
): (multipliers: ArrayLike<number>) => Reference | null {
  const onResiduals = studentOn(fitted.residualFreedom);
  if (inference.kind !== 'model' || fitted.estimatedParameters > 0) return () => onResiduals;
  if (freedoms === null) return () => standardNormal;
  const { pulls, variances, structure } = fitted;
  const scale = structure.scaleAt < 0 ? 1 : (fitted.theta[structure.scaleAt] as number);
  const estimated = structure.sampling.map((a) => a * scale);
  return (multipliers) => {
    const combined = pullsOf(pulls, multipliers);
    return studentOn(satterthwaiteFreedom({ pulls: combined, variances, estimated, freedoms }));
  };
}

/** Pulls of a combination of coefficients on the cells: sum of multipliers times the rows of C. */
function pullsOf(pulls: readonly Float64Array[], multipliers: ArrayLike<number>): Float64Array {
  const combined = new Float64Array(pulls[0]?.length ?? 0);
  for (const [j, row] of pulls.entries()) {
    const share = multipliers[j] as number;
    if (share === 0) continue;
    for (let g = 0; g < row.length; g++) combined[g] = (combined[g] as number) + share * (row[g] as number);
  }
  return combined;
}
