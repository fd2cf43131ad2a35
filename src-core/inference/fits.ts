import { type Covariance, independent } from '../algebra/covariance';
import { fitStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import { meansAt, samplingAt } from '../model/mean-dependent';
import { freeParameters, type Structure } from '../model/structure';
import { withSampling } from '../model/structure-join';
import { structureOf, varianceOf } from '../model/structure-of';
import { done, type Outcome } from '../protocol/outcome';
import type { Estimate, Plan, Rival, Variance } from '../protocol/plan';
import type { Coefficient, VarianceParameter } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Model } from './check-model';
import { inferenceFor } from './inference-for';
import { inferenceOf } from './inferred';
import { likelihoodsOf, toldLikelihoods } from './likelihoods';
import { varianceParametersOf } from './variance-parameters';

/** A rival structure, fitted on the same cells with the same terms, and what the inference says of it. */
export interface RivalFit {
  readonly rival: Rival;
  readonly fitted: Fitted;
  readonly parameters: VarianceParameter[];
  readonly coefficients: Coefficient[];
  readonly logLikelihood: number | null;
  readonly restrictedLogLikelihood: number | null;
}

interface Asked {
  readonly plan: Plan;
  readonly model: Model;
  readonly hooks: Hooks;
  /** True where the response is the working one of another fit: nothing on it has a likelihood. */
  readonly onWorkingScale?: boolean;
}

/** The plan's own fit. Refuses what `fitStructure` refuses. */
export function fitChosen(asked: Asked): Outcome<Fitted> {
  const { plan, model, hooks } = asked;
  const { response, design } = model;
  const weighting = weightingOf(asked);
  if (!weighting.ok) return weighting;
  const structure = model.chosen;
  return fitStructure({ response, design, structure, estimate: plan.estimate, weighting: weighting.value, hooks });
}

/**
 * Every rival's fit, in the order of the plan; the first that cannot be had is refused.
 *
 * chosen: the plan's own fit. Under maximum likelihood with a link rivals weight its working response, each by least squares or restricted likelihood.
 */
export function fitRivals(given: Asked & { readonly chosen: Fitted }): Outcome<RivalFit[]> {
  const fits: RivalFit[] = [];
  const linearised = linearisedAt(given);
  if (!linearised.ok) return linearised;
  const asked = linearised.value;
  for (const [i, rival] of asked.plan.beside.entries()) {
    const { cancelled, progress } = asked.hooks;
    const share = (own: number): number => (i + own) / asked.plan.beside.length;
    const hooks: Hooks = { cancelled, progress: (step, own) => progress(step, share(own)) };
    const fit = fitRival(rival, asked.model.rivals[i] as Structure, { ...asked, hooks });
    if (!fit.ok) return placed(fit.problems, `/beside/${i}`);
    fits.push(fit.value);
  }
  return done(fits);
}

/** What is asked on the working scale of a fit with a link; otherwise as it is. */
function linearisedAt(asked: Asked & { readonly chosen: Fitted }): Outcome<Asked> {
  const { plan, model, chosen } = asked;
  const link = chosen.fixedPoint?.link;
  if (!link) return done(asked);
  const { response, residuals } = chosen;
  const error = model.cells.error?.map((s, g) => s / (link.slopes[g] as number)) ?? null;
  // The outcome stays in shares or rates, from which a part of counts begins.
  const cells = { ...model.cells, error };
  const predictor = residuals.map((r, g) => (response.high[g] as number) - r);
  const rivals: Structure[] = [];
  for (const [i, variance] of plan.beside.entries()) {
    const structure = structureOf({ variance, cells, at: `/beside/${i}` });
    if (!structure.ok) return structure;
    const part = structure.value.meanDependent;
    rivals.push(part ? withSampling(structure.value, samplingAt(part, meansAt(part, predictor))) : structure.value);
  }
  const estimate: Estimate = { method: 'least-squares' };
  return done({
    ...asked,
    plan: { ...plan, estimate },
    model: { ...model, response, cells, rivals },
    onWorkingScale: true,
  });
}

/** A refusal of a rival points at the rival. */
function placed(problems: Extract<Outcome<never>, { ok: false }>['problems'], at: string): Outcome<never> {
  return { ok: false, problems: problems.map((problem) => ({ ...problem, at })) };
}

/** A of the target's weights A^-1; null: those of the structure itself. */
function weightingOf({ plan, model, hooks }: Asked): Outcome<Covariance | 'diagonal' | null> {
  const { target } = plan;
  const { cells, response, design } = model;
  if (target === 'structure') return done(null);
  if (target === 'diagonal') return done('diagonal');
  if (target === 'cells') return done(independent(new Float64Array(cells.count).fill(1)));
  if (target === 'persons') return done(independent((cells.size as Float64Array).map((n) => 1 / n)));
  const structure = model.target as Structure;
  const estimate = estimateFor(target, structure, plan.estimate);
  const fitted = fitStructure({ response, design, structure, estimate, hooks });
  if (!fitted.ok) return placed(fitted.problems, '/target');
  return done(fitted.value.weighting);
}

/** The plan's method where it applies to a rival, least squares where only a scale is unknown, else restricted likelihood. */
export function estimateFor(variance: Variance, structure: Structure, own: Estimate): Estimate {
  const free = freeParameters(structure).length;
  const onlyScale = free === 0 || (free === 1 && structure.commonScale);
  const applies =
    own.method === 'moments'
      ? free === 1 &&
        structure.betweenAt >= 0 &&
        variance.parts.some(({ kind }) => kind === 'given' || kind === 'matrix')
      : own.method !== 'least-squares' || onlyScale;
  if (applies) return own;
  return { method: onlyScale ? 'least-squares' : 'restricted' };
}

function fitRival(
  rival: Rival,
  structure: Structure,
  { plan, model, hooks, onWorkingScale = false }: Asked,
): Outcome<RivalFit> {
  const { response, design, cells } = model;
  const variance = varianceOf(rival);
  const estimate = estimateFor(variance, structure, plan.estimate);
  const fitted = fitStructure({ response, design, structure, estimate, hooks });
  if (!fitted.ok) return fitted;
  const inference = inferenceFor({ variance, estimate }, plan.inference, cells);
  const own: Plan = { ...plan, variance, estimate, target: 'structure', inference };
  const inferred = inferenceOf({ fitted: fitted.value, cells, plan: own, hooks });
  if (!inferred.ok) return inferred;
  const likelihoods = likelihoodsOf(fitted.value);
  return done({
    rival,
    fitted: fitted.value,
    parameters: varianceParametersOf(likelihoods, plan.inference.level, hooks),
    coefficients: inferred.value.coefficients,
    ...(onWorkingScale ? { logLikelihood: null, restrictedLogLikelihood: null } : toldLikelihoods(likelihoods)),
  });
}
