import { problem } from './outcome';
import type { DataPlan, Read, Roles } from './plan';
import { below } from './pointer';
import type { Problem } from './problems';

/** What the roles of a plan demand of one another. */
export function checkRoles(roles: Roles): Problem[] {
  const at = '/roles';
  const problems: Problem[] = [];
  const exclude = (...keys: string[]) => problems.push(problem('not-together', { keys }, at));
  if (roles.outcome !== null && roles.count !== null) exclude('outcome', 'count');
  if (roles.outcome === null && roles.count === null) problems.push(problem('missing-key', { key: 'outcome' }, at));
  if (roles.count !== null && roles.size === null && roles.exposure === null)
    problems.push(problem('missing-key', { key: 'size' }, at));
  if (roles.count !== null && roles.outcomeUnit !== 'number') exclude('outcomeUnit', 'count');
  if (roles.errorKind === 'half-width' && roles.errorLevel === null)
    problems.push(problem('must-be-stated', { key: 'errorLevel', choices: null }, at));
  if (roles.errorKind !== 'half-width' && roles.errorLevel !== null) exclude('errorKind', 'errorLevel');
  if (roles.per !== 1 && roles.exposure === null) exclude('per', 'exposure');
  for (const part of ['designEffect', 'withinSd'] as const)
    if (roles[part] !== null && roles.size === null) problems.push(problem('role-needed', { role: 'size', part }, at));
  return problems;
}

/** What the reading of files, the rules of omission and the limits demand. */
export function checkData(data: DataPlan, roles: Roles | null): Problem[] {
  const problems = [
    ...checkRead(data.read, '/data/read'),
    ...data.join.flatMap(({ read }, i) => checkRead(read, below('/data/join', i, 'read'))),
    ...data.omit.flatMap(({ is }, i) => checkRange(is, below('/data/omit', i, 'is'))),
  ];
  for (const [column, limit] of Object.entries(data.limits)) {
    if (!('suppressed' in limit)) continue;
    const [low, high] = limit.suppressed;
    if (low !== null && high !== null && low > high)
      problems.push(
        problem('out-of-range', { found: high, low, high: null }, below('/data/limits', column, 'suppressed', 1)),
      );
  }
  if (data.sizeWithin !== null && roles !== null && roles.size === null)
    problems.push(problem('role-needed', { role: 'size', part: 'sizeWithin' }, '/data'));
  return problems;
}

/** A range that is open at both ends says nothing; one that ends before it begins holds nothing. */
export function checkRange(is: DataPlan['omit'][number]['is'], at: string): Problem[] {
  if (Array.isArray(is)) return [];
  if (is.from === null && is.to === null) return [problem('empty-list', { key: 'is' }, at)];
  if (typeof is.from !== 'number' || typeof is.to !== 'number' || is.from <= is.to) return [];
  return [problem('out-of-range', { found: is.to, low: is.from, high: null }, below(at, 'to'))];
}

/** How a file is read: its marks must differ, and a token can mean one thing. */
export function checkRead(read: Read, at: string): Problem[] {
  const problems: Problem[] = [];
  if (read.delimiter !== null && !/^[^"\p{Nd}+\-\u2212\r\n]$/u.test(read.delimiter))
    problems.push(problem('unknown-kind', { found: read.delimiter, nearest: ',' }, below(at, 'delimiter')));
  for (const other of ['decimal', 'delimiter'] as const)
    if (read.group !== null && read.group === read[other])
      problems.push(problem('not-together', { keys: ['group', other] }, at));
  const codes = Object.values(read.missing).flat();
  if (Object.keys(read.statuses).some((token) => codes.includes(token)))
    problems.push(problem('not-together', { keys: ['statuses', 'missing'] }, at));
  return problems;
}
