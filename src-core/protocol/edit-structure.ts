import { correlatingPart, curvedParameter } from './check-method';
import { isSamplingAndBetween, methodsFor, sameVariance, varianceOfRival } from './offered-parts';
import { isSampling, means, namedParameters } from './parameter-names';
import type { Estimate, Inference, Part, Plan, Rival, Roles, Target, Variance } from './plan';
import { defaultAddedHalf, defaultEstimate } from './plan-defaults';

/** What else had to change so that the plan stays whole; told beside the change, never done in silence. */
export type AlsoChanged =
  | 'estimate'
  | 'inference'
  | 'fixed'
  | 'rival-removed'
  | 'questions-removed'
  | 'matters-removed';

/** A changed plan, and what changed besides what was asked for. */
export interface Edited {
  readonly plan: Plan;
  readonly also: readonly AlsoChanged[];
}

/**
 * States another variance structure: the one that stood is kept beside, unless it stands there already.
 *
 * The method goes back to the structure's own where the old one cannot settle it, or where it was the old structure's own; inference goes back
 * to the model's where it is not made for the new structure; set parameters that the new one does not have are let go. refused: the structure that
 * stood could not be fitted; it is not kept beside, where it would refuse every fit to come.
 */
export function stateVariance(plan: Plan, variance: Variance, { refused = false } = {}): Edited {
  const others = plan.beside.filter((rival) => !sameVariance(rival, variance));
  const old: Rival[] =
    refused || sameVariance(plan.variance, variance) || stands(others, plan.variance) ? [] : [asRival(plan.variance)];
  return settled(plan, { ...plan, variance, beside: [...old, ...others] });
}

/** States a rival: it changes places with the structure that stood. */
export function stateRival(plan: Plan, index: number): Edited {
  const rival = plan.beside[index];
  if (rival === undefined) throw new RangeError(`no rival ${index}`);
  const beside = plan.beside.map((one, i) => (i === index ? asRival(plan.variance) : one));
  return settled(plan, { ...plan, variance: varianceOfRival(rival), beside });
}

/** The same structure with one of its parts taken out or put in another's place; part: null takes it out. */
export function withPart(variance: Variance, index: number, part: Part | null): Variance {
  const parts = part === null ? variance.parts.toSpliced(index, 1) : variance.parts.toSpliced(index, 1, part);
  return letGo({ parts, fixed: variance.fixed });
}

/** The same structure on another sampling part. */
export function withSampling(variance: Variance, part: Part): Variance {
  const index = variance.parts.findIndex(isSampling);
  return index < 0
    ? letGo({ parts: [part, ...variance.parts], fixed: variance.fixed })
    : withPart(variance, index, part);
}

/** The same structure with or without a between part. */
export function withBetween(variance: Variance, stands: boolean): Variance {
  const rest = variance.parts.filter(({ kind }) => kind !== 'between');
  const parts: Part[] = stands ? [...rest, { kind: 'between', correlation: null }] : rest;
  return letGo({ parts, fixed: variance.fixed });
}

/** Sets a variance parameter to a value, or (null) leaves it to be estimated. */
export function withFixed(variance: Variance, name: string, value: number | null): Variance {
  const { [name]: _, ...rest } = variance.fixed;
  return { parts: variance.parts, fixed: value === null ? rest : { ...rest, [name]: value } };
}

function letGo({ parts, fixed }: Variance): Variance {
  const parameters = namedParameters({ parts });
  const kept = Object.entries(fixed).filter(([name]) => parameters.some((one) => means(name, one)));
  return { parts, fixed: Object.fromEntries(kept) };
}

/**
 * What stands beside a structure that is stated for the first time, so that it can be priced: the rivals that a draft names already, the structure
 * that the draft held before; where there is none, equal weights, or those by size.
 */
export function besideAtFirst(
  { variance, beside, roles }: { variance: Variance | null; beside: readonly Rival[]; roles: Roles },
  stated: Variance,
): Rival[] {
  const former: Rival[] = variance === null || stands(beside, variance) ? [] : [asRival(variance)];
  const plain: Rival[] = ['constant', ...(roles.size === null ? [] : (['per-size'] as const))];
  const others = [...former, ...beside].filter(
    (rival, i, all) => !sameVariance(rival, stated) && all.findIndex((one) => sameVariance(one, rival)) === i,
  );
  return others.length > 0 ? others : plain.filter((rival) => !sameVariance(rival, stated)).slice(0, 1);
}

/** Puts a rival beside the stated structure; one that stands already is not put there twice. */
export function withRival(plan: Plan, rival: Rival): Plan {
  if (sameVariance(rival, plan.variance) || stands(plan.beside, rival)) return plan;
  return { ...plan, beside: [...plan.beside, rival] };
}

export function withoutRival(plan: Plan, index: number): Plan {
  return { ...plan, beside: plan.beside.toSpliced(index, 1) };
}

/** Another method of estimation; what it cannot go with is put back. */
export function withEstimate(plan: Plan, estimate: Estimate): Edited {
  return withInferenceChecked({ ...plan, estimate, addedHalf: defaultAddedHalf(plan.outcomeScale, estimate) });
}

/** Another target of the weights. */
export function withTarget(plan: Plan, target: Target): Edited {
  return withInferenceChecked({ ...plan, target });
}

function stands(beside: readonly Rival[], rival: Rival): boolean {
  return beside.some((one) => sameVariance(one, rival));
}

/** A structure in as few words as the plan has for it. */
function asRival(variance: Variance): Rival {
  const words = ['constant', 'per-size', 'given'] as const;
  return words.find((word) => sameVariance(word, variance)) ?? variance;
}

function settled(before: Plan, next: Plan): Edited {
  const own = sameEstimate(before.estimate, defaultEstimate(before.variance, before.outcomeScale));
  const possible = methodsFor(next).includes(before.estimate.method);
  const estimate = own || !possible ? defaultEstimate(next.variance, next.outcomeScale) : before.estimate;
  const checked = withInferenceChecked({ ...next, estimate });
  const also: AlsoChanged[] = [
    ...(sameEstimate(estimate, before.estimate) ? [] : (['estimate'] as const)),
    ...checked.also,
    ...(Object.keys(before.variance.fixed).some((name) => !Object.hasOwn(next.variance.fixed, name))
      ? (['fixed'] as const)
      : []),
  ];
  return { plan: checked.plan, also };
}

function withInferenceChecked(plan: Plan): Edited {
  if (suits(plan.inference, plan)) return { plan, also: [] };
  return { plan: { ...plan, inference: { kind: 'model', level: plan.inference.level } }, also: ['inference'] };
}

/** Whether an inference is made for a plan's structure, method and target. */
export function suits(inference: Inference, plan: Pick<Plan, 'variance' | 'estimate' | 'target'>): boolean {
  const { variance, estimate, target } = plan;
  switch (inference.kind) {
    case 'knapp-hartung':
      return isSamplingAndBetween(variance.parts) && target === 'structure';
    case 'kenward-roger':
      return estimate.method === 'restricted' && target === 'structure' && curvedParameter(variance) === undefined;
    case 'robust':
      return [variance, target].every((one) => typeof one === 'string' || correlatingPart(one) === undefined);
    default:
      return true;
  }
}

export function sameEstimate(one: Estimate, other: Estimate): boolean {
  return JSON.stringify(one) === JSON.stringify(other);
}
