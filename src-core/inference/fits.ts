import { fitStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import { freeParameters, type Structure } from '../model/structure';
import { varianceOf } from '../model/structure-of';
import { done, type Outcome } from '../protocol/outcome';
import type { Estimate, Inference, Plan, Rival, Variance } from '../protocol/plan';
import type { Coefficient, VarianceParameter } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Model } from './check-model';
import { inferenceOf } from './inferred';
import { likelihoodsOf } from './likelihoods';
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
  /** Of the model stage, every structure fitted by this version. */
  readonly model: Model;
  readonly hooks: Hooks;
}

/** The plan's own fit. Refuses what `fitStructure` refuses. */
export function fitChosen(asked: Asked): Outcome<Fitted> {
  const { plan, model, hooks } = asked;
  const { response, design } = model;
  const weighting = weightingOf(asked);
  if (!weighting.ok) return weighting;
  const structure = present(model.chosen);
  return fitStructure({ response, design, structure, estimate: plan.estimate, weighting: weighting.value, hooks });
}

/** Every rival's fit, in the order of the plan; the first that cannot be had is refused. */
export function fitRivals(asked: Asked): Outcome<RivalFit[]> {
  const fits: RivalFit[] = [];
  for (const [i, rival] of asked.plan.beside.entries()) {
    const fit = fitRival(rival, present(asked.model.rivals[i] ?? null), asked);
    if (!fit.ok) return placed(fit.problems, `/beside/${i}`);
    fits.push(fit.value);
  }
  return done(fits);
}

function present(structure: Structure | null): Structure {
  if (!structure) throw new RangeError('a structure that this version does not fit came to the fit');
  return structure;
}

/** A refusal of a rival points at the rival. */
function placed(problems: Extract<Outcome<never>, { ok: false }>['problems'], at: string): Outcome<never> {
  return { ok: false, problems: problems.map((problem) => ({ ...problem, at })) };
}

/** a_g of the target's weights 1 / a_g; null: those of the structure itself. */
function weightingOf({ plan, model, hooks }: Asked): Outcome<Float64Array | null> {
  const { target } = plan;
  const { cells, response, design } = model;
  // With independent cells the structure's diagonal is the structure.
  if (target === 'structure' || target === 'diagonal') return done(null);
  if (target === 'cells') return done(new Float64Array(cells.count).fill(1));
  if (target === 'persons') return done((cells.size as Float64Array).map((n) => 1 / n));
  const structure = present(model.target);
  const estimate = estimateFor(target, structure, plan.estimate);
  const fitted = fitStructure({ response, design, structure, estimate, hooks });
  return fitted.ok ? done(fitted.value.shape) : placed(fitted.problems, '/target');
}

/** The plan's method where it applies to a rival, least squares where only a scale is unknown, else restricted likelihood. */
function estimateFor(variance: Variance, structure: Structure, own: Estimate): Estimate {
  const free = freeParameters(structure).length;
  const onlyScale = free === 0 || (free === 1 && structure.commonScale);
  const applies =
    own.method === 'moments'
      ? free === 1 && structure.betweenAt >= 0 && variance.parts.some((part) => part.kind === 'given')
      : own.method !== 'least-squares' || onlyScale;
  if (applies) return own;
  return { method: onlyScale ? 'least-squares' : 'restricted' };
}

/** The plan's inference where it applies to a rival, else the model's own. */
function inferenceFor({ parts }: Variance, own: Inference): Inference {
  const betweenGiven = parts.some((part) => part.kind === 'between') && parts.some((part) => part.kind === 'given');
  return own.kind === 'knapp-hartung' && !betweenGiven ? { kind: 'model', level: own.level } : own;
}

function fitRival(rival: Rival, structure: Structure, { plan, model, hooks }: Asked): Outcome<RivalFit> {
  const { response, design, cells } = model;
  const variance = varianceOf(rival);
  const estimate = estimateFor(variance, structure, plan.estimate);
  const fitted = fitStructure({ response, design, structure, estimate, hooks });
  if (!fitted.ok) return fitted;
  const inference = inferenceFor(variance, plan.inference);
  const own: Plan = { ...plan, variance, estimate, target: 'structure', inference };
  const inferred = inferenceOf({ fitted: fitted.value, cells, plan: own });
  if (!inferred.ok) return inferred;
  const likelihoods = likelihoodsOf(fitted.value);
  return done({
    rival,
    fitted: fitted.value,
    parameters: varianceParametersOf(likelihoods, plan.inference.level, hooks),
    coefficients: inferred.value.coefficients,
    logLikelihood: likelihoods.full,
    restrictedLogLikelihood: likelihoods.restricted,
  });
}
