import { isOfCounts } from './linked';
import { onlyScaleUnknown } from './parameter-names';
import type { Part, PartKind, Plan, Rival, Roles, Variance } from './plan';

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
      return roles.size === null ? 'size' : null;
    case 'binomial': {
      const proportion = roles.exposure === null && (roles.count !== null || roles.outcomeUnit !== 'number');
      return proportion ? (roles.size === null ? 'size' : null) : 'count';
    }
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
  // Maximum likelihood with a link has one part alone.
  const full = outcomeScale === 'identity' || !isOfCounts({ variance }) || onlyScaleUnknown(variance);
  return [
    ...(onlyScaleUnknown(variance) ? (['least-squares'] as const) : []),
    'restricted',
    ...(full ? (['full'] as const) : []),
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
