import { equalNames } from './check-terms';
import { nearestName } from './nearest';
import { problem } from './outcome';
import { isSampling, means, type NamedParameter, namedParameters } from './parameter-names';
import type { Part, Rival, Roles, Target, Variance } from './plan';
import { below } from './pointer';
import type { Problem } from './problems';
import { termName } from './term-names';

/** What a variance structure demands of itself and of the roles; at: its place in the plan; roles: null where they have faults themselves. */
export function checkVariance(variance: Variance, roles: Roles | null, at: string): Problem[] {
  const counted = checkCounts(variance.parts, at);
  return [
    ...counted,
    ...variance.parts.flatMap((part, i) => checkPart(part, roles, below(at, 'parts', i))),
    ...(counted.length === 0 ? checkIdentified(variance, at) : []),
    ...checkFixed(variance, at),
  ];
}

/** One sampling part, at most one between part. */
export function checkCounts(parts: readonly Part[], at: string): Problem[] {
  const list = below(at, 'parts');
  const sampling = parts.filter(isSampling);
  const between = parts.findIndex(({ kind }) => kind === 'between');
  const [first] = sampling;
  if (first === undefined) return [problem('no-sampling-part', { parts: parts.map(({ kind }) => kind) }, list)];
  return parts.flatMap((part, i) => {
    if (isSampling(part) && part !== first)
      return [problem('two-sampling-parts', { first: first.kind, second: part.kind }, below(list, i))];
    if (part.kind === 'between' && i > between)
      return [problem('two-between-parts', { first: below(list, between) }, below(list, i))];
    return [];
  });
}

function checkPart(part: Part, roles: Roles | null, at: string): Problem[] {
  const terms = part.kind === 'log-linear' ? equalNames(part.terms.map(termName), below(at, 'terms')) : [];
  return roles === null ? terms : [...terms, ...checkPartRoles(part, roles, at)];
}

function checkPartRoles(part: Part, roles: Roles, at: string): Problem[] {
  const need = (...needed: ('size' | 'error' | 'count' | 'exposure')[]) =>
    needed.filter((role) => roles[role] === null).map((role) => problem('role-needed', { role, part: part.kind }, at));
  switch (part.kind) {
    case 'per-size':
    case 'size-power':
      return need('size');
    case 'per-class':
      return part.perSize ? need('size') : [];
    case 'given':
      return need('error');
    case 'counts':
      return need('count', 'exposure');
    case 'binomial': {
      if (roles.count !== null && roles.exposure !== null)
        return [problem('not-together', { keys: ['kind', 'exposure'] }, at)];
      const proportion = roles.count !== null || (roles.outcome !== null && roles.outcomeUnit !== 'number');
      return [...(proportion ? [] : need('count')), ...need('size')];
    }
    default:
      return [];
  }
}

/** By the kinds alone: parts whose variances differ in nothing but their names. */
function checkIdentified(variance: Variance, at: string): Problem[] {
  const { parts } = variance;
  const same = (...kinds: string[]) => [problem('not-identified', { parts: kinds }, below(at, 'parts'))];
  const shared = parts.filter((part) => part.kind === 'shared').map(({ by }) => [...by].sort().join('\u0000'));
  const repeated = shared.some((by, i) => shared.indexOf(by) < i) ? same('shared', 'shared') : [];
  const sampling = parts.find(isSampling) as Part;
  const between = parts.find(({ kind }) => kind === 'between');
  const flat = sampling.kind === 'constant' || (sampling.kind === 'per-class' && !sampling.perSize);
  if (between === undefined || !flat || isSerial(sampling) || isSerial(between)) return repeated;
  const settled = namedParameters({ parts: [sampling, between] }).some((parameter) =>
    Object.keys(variance.fixed).some((name) => means(name, parameter)),
  );
  return settled
    ? repeated
    : [...same(...parts.filter((part) => part === sampling || part === between).map(({ kind }) => kind)), ...repeated];
}

function isSerial(part: Part): boolean {
  return 'correlation' in part && part.correlation?.kind === 'serial';
}

/** Parameters set by the user: they must be the structure's, and inside their range. */
function checkFixed(variance: Variance, at: string): Problem[] {
  const parameters = namedParameters(variance);
  return Object.entries(variance.fixed).flatMap(([name, value]) => {
    const place = below(at, 'fixed', name);
    const parameter = parameters.find((one) => means(name, one));
    if (parameter) return checkValue(parameter, value, place);
    const nearest = nearestName(name, parameters.map(patternOf));
    return [problem('unknown-parameter', { found: name, nearest }, place)];
  });
}

/** What a name looks like; the classes of an open one are known from data alone. */
function patternOf({ name, open, role }: NamedParameter): string {
  return open ? `${name}${role === 'scale' ? 'CLASS' : 'LEVEL'}` : name;
}

function checkValue({ role }: NamedParameter, found: number, at: string): Problem[] {
  const outside = (low: number, high: number | null) => [problem('out-of-range', { found, low, high }, at)];
  if (role === 'scale') return found > 0 ? [] : outside(0, null);
  if (role === 'between' || role === 'shared') return found >= 0 ? [] : outside(0, null);
  if (role === 'correlation') return found > -1 && found < 1 ? [] : outside(-1, 1);
  return [];
}

/** A target or rival in a word needs its role; one given as a structure is checked as one. */
export function checkAlternative(value: Target | Rival, roles: Roles | null, at: string): Problem[] {
  if (typeof value !== 'string') return checkVariance(value, roles, at);
  const role = value === 'persons' || value === 'per-size' ? 'size' : value === 'given' ? 'error' : null;
  return role === null || roles === null || roles[role] !== null
    ? []
    : [problem('role-needed', { role, part: value }, at)];
}
