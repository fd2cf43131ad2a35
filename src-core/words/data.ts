import { isLinked } from '../protocol/linked';
import type { Plan } from '../protocol/plan';
import type { CellResult, DataUsed, Omitted, Result } from '../protocol/result';
import { exact, levelText, list, number, percent, plural, quoted, sizeText } from './numbers';
import { omissionPhrase } from './omissions';
import { columnWithUnit, outcomeName } from './units';

/** How many rows came in, how many are used, and why the others are not. */
export function rowsSentence({ rows, used, omitted }: DataUsed): string {
  const start = `The table has ${plural(rows, 'data row')}; ${plural(used, 'row is', 'rows are')} used as ${used === 1 ? 'a cell' : 'cells'}`;
  if (omitted.length === 0) return `${start}, and none is left out.`;
  const reasons = new Map<string, number>();
  for (const { reason } of omitted) reasons.set(reason.code, (reasons.get(reason.code) ?? 0) + 1);
  const told = [...reasons].map(([code, n]) => `${number(n, { decimals: 0 })} ${omissionPhrase(code)}`);
  return `${start} and ${plural(omitted.length, 'is', 'are')} left out: ${list(told)}.`;
}

/** Why one row is left out. */
export function omissionText({ reason }: Omitted): string {
  const { code, column, text } = reason;
  if (code === 'omit-rule') return `${omissionPhrase(code)}: ${text}`;
  const found = text === '' ? '' : `, found ${quoted(text)}`;
  return `${column} ${omissionPhrase(code)}${found}`;
}

/** Persons, effective size and freedom under their own names. */
export function sizesSentence({ plan, cells, fit }: Result): string {
  const freedom = `Residual freedom counts cells, not persons: ${number(cells.length, { decimals: 0 })} cells less ${plural(fit.coefficients.length, 'coefficient')} leave ${number(fit.residualFreedom, { decimals: 0 })}.`;
  const sizes = known(cells, (cell) => cell.size);
  if (sizes === null || plan.roles.size === null) return freedom;
  const effective = known(cells, (cell) => cell.effectiveSize);
  const other =
    plan.roles.designEffect === null || effective === null
      ? ''
      : ` Divided by ${quoted(plan.roles.designEffect)}, the effective size is ${sizeText(sum(effective))}.`;
  return `Summed over the used cells, ${quoted(plan.roles.size)} is ${sizeText(sum(sizes))}; in a cell it runs from ${sizeText(sizes[0] as number)} to ${sizeText(sizes.at(-1) as number)}, the median ${sizeText(medianOf(sizes))}.${other} ${freedom}`;
}

function known(cells: readonly CellResult[], of: (cell: CellResult) => number | null): number[] | null {
  const values = cells.map(of);
  if (values.some((value) => value === null) || values.length === 0) return null;
  return (values as number[]).sort((a, b) => a - b);
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}

function medianOf(sorted: readonly number[]): number {
  const middle = Math.floor(sorted.length / 2);
  const high = sorted[middle] as number;
  return sorted.length % 2 === 1 ? high : ((sorted[middle - 1] as number) + high) / 2;
}

/** What each column of the file was taken to be, with what was done to it. */
export function roleLines(plan: Plan): { readonly role: string; readonly column: string; readonly says: string }[] {
  const { roles } = plan;
  const column = (name: string): string => columnWithUnit(name, plan);
  const lines: { role: string; column: string; says: string }[] = [];
  if (roles.label !== null)
    lines.push({
      role: 'label',
      column: roles.label.join(' · '),
      says: 'names the cells; every full label is different',
    });
  else lines.push({ role: 'label', column: 'data row number', says: 'no label column was stated' });
  if (roles.outcome !== null) lines.push({ role: 'outcome', column: column(roles.outcome), says: outcomeSays(plan) });
  if (roles.count !== null)
    lines.push({ role: 'count', column: column(roles.count), says: `the outcome is ${outcomeName(plan)}` });
  if (roles.exposure !== null)
    lines.push({
      role: 'exposure',
      column: column(roles.exposure),
      says: roles.per === 1 ? 'divides the count' : `divides the count; rates are per ${exact(roles.per)}`,
    });
  if (roles.size !== null)
    lines.push({ role: 'size', column: column(roles.size), says: 'respondents behind each cell' });
  if (roles.designEffect !== null)
    lines.push({
      role: 'design effect',
      column: column(roles.designEffect),
      says: 'size divided by it is the effective size',
    });
  if (roles.error !== null) lines.push({ role: 'error', column: column(roles.error), says: errorSays(plan) });
  if (roles.withinSd !== null)
    lines.push({
      role: 'within-cell deviation',
      column: column(roles.withinSd),
      says: 'spread of answers inside the cell',
    });
  return lines;
}

function outcomeSays(plan: Plan): string {
  const { roles, outcomeScale } = plan;
  const unit = { number: 'a number', share: 'a share between 0 and 1', percent: 'a percentage between 0 and 100' }[
    roles.outcomeUnit
  ];
  if (isLinked(plan)) return `${unit}; the terms act on the ${outcomeScale} of its mean`;
  return outcomeScale === 'identity' ? `${unit}, fitted as it stands` : `${unit}, fitted on the ${outcomeScale} scale`;
}

function errorSays({ roles }: Plan): string {
  switch (roles.errorKind) {
    case 'se':
      return 'a standard error: an error of 2 makes the variance 4, a relative weight of 0.25';
    case 'variance':
      return 'an error variance: a variance of 4 has a relative weight of 0.25';
    case 'half-width':
      return `half the width of a ${levelText(roles.errorLevel ?? 0.95)} interval: divided by the normal quantile, then squared`;
    case 'cv':
      return 'a coefficient of variation: times the value it is the standard error';
  }
}

/** What was done to the data on their way, in order: joins, derived columns, rules of omission. */
export function stepLines({ data }: Plan): string[] {
  const joins = data.join.map(({ file, on }) => {
    const keys = list(Object.entries(on).map(([ours, theirs]) => (ours === theirs ? ours : `${ours} = ${theirs}`)));
    return `Joined with ${quoted(file)} on ${keys}.`;
  });
  const derived = data.derive.map((one) => `Derived “${one.name}”: ${deriveText(one)}.`);
  const rules = data.omit.map(({ column, is, because }) => {
    const which = Array.isArray(is)
      ? `is ${list(is.map(String), 'or')}`
      : `lies from ${is.from ?? 'the lowest'} to ${is.to ?? 'the highest'}`;
    return `Left out where ${column} ${which}: ${because}.`;
  });
  return [...joins, ...derived, ...rules];
}

function deriveText(one: Plan['data']['derive'][number]): string {
  switch (one.as) {
    case 'lag':
      return `${one.of} ${plural(one.steps, 'step')} before, by ${one.order}${within(one.by)}`;
    case 'change':
      return `change of ${one.of} over ${plural(one.steps, 'step')} of ${one.order}${within(one.by)}`;
    case 'ratio':
      return `${one.of} over ${one.over}`;
    case 'difference':
      return `${one.of} minus ${one.minus}`;
    case 'centred':
      return `${one.of} less its unweighted mean`;
    case 'group-mean':
      return `unweighted mean of ${one.of}${within(one.by)}`;
    case 'within-group-deviation':
      return `${one.of} less its unweighted mean${within(one.by)}`;
  }
}

function within(by: readonly string[]): string {
  return by.length === 0 ? '' : ` within ${list(by)}`;
}

/** What the plan says of the data's origin. */
export function sourceSentence({ about }: Plan): string | null {
  if (about === null) return null;
  const parts = [
    about.source === null ? null : `Source: ${about.source}.`,
    about.extracted === null ? null : `Extracted ${about.extracted}.`,
    about.analyst === null ? null : `Analyst: ${about.analyst}.`,
  ].filter((one) => one !== null);
  return parts.length === 0 ? null : parts.join(' ');
}

/** Keys that met nothing in a join. */
export function unmatchedText({ file, side, key }: DataUsed['unmatched'][number]): string {
  const named = list(Object.entries(key).map(([column, value]) => `${column} = ${value}`));
  return side === 'ours' ? `${named}: not in ${quoted(file)}` : `${named}: only in ${quoted(file)}`;
}

/** Opens the list of keys that met nothing. */
export const unmatchedLead = 'In the joins, nothing was found for these keys.';

/** Share of rows used, for the foot of the title. */
export function usedText({ rows, used }: DataUsed): string {
  return rows === used
    ? plural(used, 'cell')
    : `${plural(used, 'cell')} of ${plural(rows, 'row')} (${percent(used / rows)})`;
}
