import { problem } from './outcome';
import { onlyScaleUnknown, unknownParameters } from './parameter-names';
import type { Estimate, Inference, Plan, Roles, Variance } from './plan';
import type { Problem } from './problems';

/** The sections of a plan in their normal form; null where a section has faults of its own, so that nothing can be said about it. */
export type Sections = { readonly [K in keyof Plan]: Plan[K] | null };

/** What outcome scale, structure, estimate, target and inference demand of one another. */
export function checkMethod(plan: Sections): Problem[] {
  const { roles, variance, estimate, inference, outcomeScale, target } = plan;
  return [
    ...(outcomeScale !== null && roles !== null ? checkScale(outcomeScale, roles) : []),
    ...checkAddedHalf(plan),
    ...(variance !== null && estimate !== null ? checkEstimate(estimate, variance, outcomeScale) : []),
    ...(variance !== null && inference !== null ? checkInference(inference, variance) : []),
    ...(inference !== null && estimate !== null ? checkRestricted(inference, estimate) : []),
    ...(inference !== null && target !== null && target !== 'structure' && isOwnWeights(inference)
      ? exclude('target', 'inference')
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

/** The first unknown parameter in which Omega is not linear. phi times rho of an exchangeable correlation is. */
function checkLinear(variance: Variance, at: string): Problem[] {
  const curved = unknownParameters(variance).find(
    ({ role, part }) =>
      role === 'exponent' ||
      role === 'log-linear' ||
      (role === 'correlation' && 'correlation' in part && part.correlation?.kind === 'serial'),
  );
  return curved === undefined ? [] : [problem('not-linear', { part: curved.part.kind, parameter: curved.name }, at)];
}

/** The first part that correlates cells. */
function checkUncorrelated(variance: Variance, at: string): Problem[] {
  for (const part of variance.parts) {
    const correlated = part.kind === 'shared' || part.kind === 'matrix' || part.correlation !== null;
    if (!correlated) continue;
    const by = part.kind === 'shared' ? part.by : part.kind === 'matrix' ? [] : (part.correlation?.by ?? []);
    return [problem('correlated-cells', { kind: 'robust', part: part.kind, by }, at)];
  }
  return [];
}
