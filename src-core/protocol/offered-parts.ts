import { onlyScaleUnknown } from './parameter-names';
import type { Correlation, Inference, Part, PartKind, Plan, Rival, Roles, Variance } from './plan';

/**
 * What the contract holds and this version does not fit yet, by name: the one list of it. Controls offer all of the contract and say what is on
 * the list; the fit refuses it by the same names.
 */
const later = {
  parts: new Set<PartKind>(['matrix', 'log-linear', 'per-class', 'binomial', 'counts', 'shared']),
  correlations: new Set<Correlation['kind']>(['exchangeable', 'serial']),
  inferences: new Set<Inference['kind']>(['kenward-roger', 'clustered', 'wild']),
  keys: new Set<LaterKey>(['limits', 'sizeWithin', 'withinSd', 'logit', 'disclosure']),
} as const;

/** What can be missing besides parts, correlations and inferences. */
export type LaterKey = 'limits' | 'sizeWithin' | 'withinSd' | 'logit' | 'disclosure';

/** Whether this version fits parts of a kind. */
export function isOffered(kind: PartKind): boolean {
  return !later.parts.has(kind);
}

/** Whether this version fits parts that are correlated in this way. */
export function isOfferedCorrelation(kind: Correlation['kind']): boolean {
  return !later.correlations.has(kind);
}

/** Whether this version does what a key of the plan asks for. */
export function isOfferedKey(key: LaterKey): boolean {
  return !later.keys.has(key);
}

/** What a structure holds that this version does not fit, by name: kinds of parts, kinds of correlation. */
export function lackingIn({ parts }: Pick<Variance, 'parts'>): string[] {
  return parts.flatMap((part) => {
    if (!isOffered(part.kind)) return [part.kind];
    if (!('correlation' in part) || part.correlation === null) return [];
    return isOfferedCorrelation(part.correlation.kind) ? [] : [part.correlation.kind];
  });
}

/** Whether this version has this kind of inference. */
export function isOfferedInference(kind: Inference['kind']): boolean {
  return !later.inferences.has(kind);
}

/** A rival's word as the structure that it stands for; a structure is itself. */
export function varianceOfRival(rival: Rival): Variance {
  if (typeof rival !== 'string') return rival;
  if (rival === 'given')
    return { parts: [{ kind: 'given', scale: 'free', freedom: null, correlation: null }], fixed: {} };
  return { parts: [{ kind: rival, correlation: null }], fixed: {} };
}

/** Whether two structures are the same: equal parts in any order, equal parameters set. */
export function sameVariance(one: Rival, other: Rival): boolean {
  return canonical(varianceOfRival(one)) === canonical(varianceOfRival(other));
}

function canonical({ parts, fixed }: Variance): string {
  const set = Object.entries(fixed).sort(([a], [b]) => (a < b ? -1 : 1));
  return JSON.stringify([parts.map((part) => JSON.stringify(part)).sort(), set]);
}

/** The role that a kind of part cannot do without and the plan does not state; null where nothing is lacking. */
export function roleLacking(kind: PartKind, roles: Roles): 'size' | 'error' | 'count' | 'exposure' | null {
  switch (kind) {
    case 'per-size':
    case 'size-power':
    case 'binomial':
      return roles.size === null ? 'size' : null;
    case 'given':
      return roles.error === null ? 'error' : null;
    case 'counts':
      return roles.count === null ? 'count' : roles.exposure === null ? 'exposure' : null;
    default:
      return null;
  }
}

/** The methods that a structure can be estimated by, the plan's own kind of outcome taken into account. */
export function methodsFor({
  variance,
  outcomeScale,
}: Pick<Plan, 'variance' | 'outcomeScale'>): Plan['estimate']['method'][] {
  const kinds = variance.parts.map(({ kind }) => kind);
  if (outcomeScale === 'log' && kinds.includes('counts')) return ['full'];
  const moments = isSamplingAndBetween(variance.parts);
  return [
    ...(onlyScaleUnknown(variance) ? (['least-squares'] as const) : []),
    'restricted',
    'full',
    'two-step',
    ...(moments ? (['moments'] as const) : []),
  ];
}

/** Errors from outside with a fixed scale, a between part, and nothing else: what moment rules and Knapp-Hartung inference are for. */
export function isSamplingAndBetween(parts: readonly Part[]): boolean {
  return (
    parts.length === 2 &&
    parts.some(({ kind }) => kind === 'between') &&
    parts.some((part) => (part.kind === 'given' || part.kind === 'matrix') && part.scale === 'fixed')
  );
}
