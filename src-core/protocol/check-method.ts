import { isOfCounts } from './linked';
import { problem } from './outcome';
import { isSampling, type NamedParameter, onlyScaleUnknown, unknownParameters } from './parameter-names';
import type { Estimate, Inference, Part, Plan, Roles, Variance } from './plan';
import type { Problem } from './problems';

/** The sections of a plan in their normal form; null where a section has faults of its own, so that nothing can be said about it. */
export type Sections = { readonly [K in keyof Plan]: Plan[K] | null };

/** What outcome scale, structure, estimate, target and inference demand of one another. */
export function checkMethod(plan: Sections): Problem[] {
  const { roles, variance, estimate, inference, outcomeScale, target } = plan;
  return [
    ...(outcomeScale !== null && roles !== null ? checkScale(outcomeScale, roles) : []),
    ...checkAddedHalf(plan),
    ...checkLink(plan),
    ...(variance !== null && estimate !== null ? checkEstimate(estimate, variance, outcomeScale) : []),
    ...(variance !== null && inference !== null ? checkInference(inference, variance) : []),
    ...(inference !== null && estimate !== null ? checkRestricted(inference, estimate) : []),
    ...(inference !== null && target !== null && target !== 'structure' && isOwnWeights(inference)
      ? exclude('target', 'inference')
      : []),
    ...(inference?.kind === 'robust' && target !== null && typeof target === 'object'
      ? checkUncorrelated(target, '/inference/kind')
      : []),
  ];
}

function exclude(...keys: string[]): Problem[] {
  return [problem('not-together', { keys }, '')];
}

/** A logit is of a proportion. */
function checkScale(outcomeScale: Plan['outcomeScale'], roles: Roles): Problem[] {
  const pair = (key: string) => [problem('not-together', { keys: ['outcomeScale', key] }, '/outcomeScale')];
  if (outcomeScale !== 'logit') return [];
  if (roles.count !== null && roles.exposure !== null) return pair('exposure');
  return roles.outcome !== null && roles.count === null && roles.outcomeUnit === 'number' ? pair('outcomeUnit') : [];
}

/** Halves are added to counts under logit alone, and never under full likelihood. */
function checkAddedHalf({ addedHalf, outcomeScale, estimate }: Sections): Problem[] {
  if (addedHalf === null || outcomeScale === null) return [];
  if (outcomeScale !== 'logit') return exclude('outcomeScale', 'addedHalf');
  return estimate?.method === 'full' ? exclude('addedHalf', 'estimate') : [];
}

/** Maximum likelihood of counts with a link has one part, uncorrelated, and its own weights. */
function checkLink({ outcomeScale, variance, estimate, target }: Sections): Problem[] {
  if (outcomeScale === null || outcomeScale === 'identity' || variance === null || estimate?.method !== 'full')
    return [];
  const { parts } = variance;
  if (!isOfCounts({ variance })) return [];
  const alone = parts.every((part) => isSampling(part) && !('correlation' in part && part.correlation !== null));
  const noOther = outcomeScale === 'log' && parts.some(({ kind }) => kind === 'counts');
  if (!alone) return noOther ? exclude('outcomeScale', 'variance') : exclude('variance', 'outcomeScale', 'estimate');
  return target !== null && target !== 'structure' && target !== 'diagonal' ? exclude('target', 'estimate') : [];
}

/** Whether the method can settle what is unknown of the structure. */
function checkEstimate(estimate: Estimate, variance: Variance, outcomeScale: Plan['outcomeScale'] | null): Problem[] {
  const kinds = variance.parts.map(({ kind }) => kind);
  if (outcomeScale === 'log' && kinds.includes('counts') && estimate.method !== 'full')
    return exclude('outcomeScale', 'estimate');
  if (estimate.method === 'least-squares' && !onlyScaleUnknown(variance)) return exclude('variance', 'estimate');
  if (estimate.method !== 'moments') return [];
  const unknown = unknownParameters(variance).map(({ name }) => name);
  const fitting = isGivenAndBetween(variance) && unknown.every((name) => name === 'tau2');
  return fitting ? [] : exclude('variance', 'estimate');
}

/** Sampling errors from outside (given, or a matrix), a between part, and nothing else. */
function isGivenAndBetween({ parts }: Variance): boolean {
  const kinds = parts.map(({ kind }) => kind);
  return kinds.length === 2 && kinds.includes('between') && (kinds.includes('given') || kinds.includes('matrix'));
}

/** These inferences are made for weights from the structure. */
function isOwnWeights({ kind }: Inference): boolean {
  return kind === 'knapp-hartung' || kind === 'kenward-roger';
}

function checkRestricted(inference: Inference, estimate: Estimate): Problem[] {
  return inference.kind === 'kenward-roger' && estimate.method !== 'restricted' ? exclude('estimate', 'inference') : [];
}

function checkInference(inference: Inference, variance: Variance): Problem[] {
  const at = '/inference';
  const pair = (...keys: string[]) => [problem('not-together', { keys }, at)];
  if (inference.kind === 'knapp-hartung') return isGivenAndBetween(variance) ? [] : exclude('variance', 'inference');
  if (inference.kind === 'kenward-roger') return checkLinear(variance, `${at}/kind`);
  if (inference.kind === 'robust') return checkUncorrelated(variance, `${at}/kind`);
  if (inference.kind !== 'clustered' || inference.alsoBy === null) return [];
  if (inference.correction === 'CR2' || inference.correction === 'CR3') return pair('alsoBy', 'correction');
  const [by, alsoBy] = [inference.by, inference.alsoBy].map((columns) => [...columns].sort().join('\u0000'));
  return by === alsoBy ? pair('by', 'alsoBy') : [];
}

/**
 * The first unknown parameter in which Omega is not linear; undefined where it is linear in all.
 *
 * phi times rho of an exchangeable correlation is a parameter in which it is. Classes that go together are not: between two of them stands the root of
 * the product of their variances.
 */
export function curvedParameter(variance: Variance): NamedParameter | undefined {
  return unknownParameters(variance).find(({ role, part }) => {
    const correlation = 'correlation' in part ? part.correlation : null;
    if (part.kind === 'per-class' && correlation !== null) return true;
    return role === 'exponent' || role === 'log-linear' || (role === 'correlation' && correlation?.kind === 'serial');
  });
}

function checkLinear(variance: Variance, at: string): Problem[] {
  const curved = curvedParameter(variance);
  return curved === undefined ? [] : [problem('not-linear', { part: curved.part.kind, parameter: curved.name }, at)];
}

/** The first part that correlates cells; undefined where none does. */
export function correlatingPart({ parts }: Variance): Part | undefined {
  return parts.find((part) => part.kind === 'shared' || part.kind === 'matrix' || part.correlation !== null);
}

function checkUncorrelated(variance: Variance, at: string): Problem[] {
  const part = correlatingPart(variance);
  if (part === undefined) return [];
  const by = part.kind === 'shared' ? part.by : 'correlation' in part ? (part.correlation?.by ?? []) : [];
  return [problem('correlated-cells', { kind: 'robust', part: part.kind, by }, at)];
}
