import { isLinked } from '../protocol/linked';
import type { Plan, SimpleTerm, Term } from '../protocol/plan';
import type { Result } from '../protocol/result';
import { factorsOf, interceptName, levelName, termName } from '../protocol/term-names';
import { exact } from './numbers';

/** What the outcome is called: its column, or the count over what it is divided by. */
export function outcomeName({ roles }: Plan): string {
  if (roles.outcome !== null) return roles.outcome;
  const below = roles.exposure ?? roles.size;
  return roles.per === 1 ? `${roles.count} / ${below}` : `${exact(roles.per)} × ${roles.count} / ${below}`;
}

/** The outcome as the fit sees it: "log(rate)" where it is fitted on a log scale. */
export function responseName(plan: Plan): string {
  return plan.outcomeScale === 'identity' ? outcomeName(plan) : `${plan.outcomeScale}(${outcomeName(plan)})`;
}

/** What the observed and fitted values of cells are of: under maximum likelihood with a link the outcome itself. */
export function cellValueName(plan: Plan): string {
  return isLinked(plan) ? outcomeName(plan) : responseName(plan);
}

/** The unit of fitted values and coefficients' numerators; null where the plan states none. */
export function outcomeUnit(plan: Plan): string | null {
  if (plan.outcomeScale !== 'identity') return `in ${responseName(plan)}`;
  const column = plan.roles.outcome ?? plan.roles.count;
  return (column === null ? undefined : plan.units[column]) ?? null;
}

/** A number's text with the outcome's unit behind it, where there is one. */
export function inOutcomeUnit(text: string, plan: Plan): string {
  const unit = outcomeUnit(plan);
  return unit === null ? text : `${text} ${unit}`;
}

/** The unit of variances; null where the outcome has none. */
export function varianceUnit(plan: Plan): string | null {
  if (plan.outcomeScale !== 'identity') return null;
  const unit = outcomeUnit(plan);
  return unit === null ? null : `(${unit})²`;
}

/** A cell by its label; without a label column labels are the numbers of data rows. */
export function cellName(label: string, { roles }: Plan): string {
  return roles.label === null ? `row ${label}` : label;
}

/** Beside an equation: in what its variances are. */
export function unitRemark(unit: string): { readonly about: string; readonly text: string } {
  return { about: 'Unit', text: `variances are in ${unit}` };
}

/** A column with its unit: "income (thousand)". */
export function columnWithUnit(column: string, plan: Plan): string {
  const unit = plan.units[column];
  return unit === undefined ? column : `${column} (${unit})`;
}

/**
 * What one step of a coefficient's column is: in a table ("per one thousand of income"), at the head of a sentence
 * ("one more thousand of income"), or as a contrast ("South against North"). more is null where the coefficient says nothing by itself: the intercept,
 * a product, one of several terms of the same column.
 */
export interface Step {
  readonly per: string;
  readonly more: string | null;
}

/** The step of one coefficient; a name that no term of the plan has is told as it stands. */
export function stepOf(result: Result, name: string): Step {
  const { plan } = result;
  if (name === interceptName && plan.intercept) return { per: 'every column at 0 or at its baseline', more: null };
  for (const term of plan.terms) {
    const step = 'product' in term ? productStep(term, name) : simpleStep(result, term, name);
    if (step) return alone(plan, term) ? step : { ...step, more: null };
  }
  return { per: `per unit of ${name}`, more: null };
}

function alone(plan: Plan, term: Term): boolean {
  const columns = new Set(factorsOf(term).map(({ column }) => column));
  return plan.terms.filter((other) => factorsOf(other).some(({ column }) => columns.has(column))).length === 1;
}

function productStep(term: Term, name: string): Step | null {
  const parts = factorsOf(term).map((factor) => ('as' in factor ? `${factor.column}: ` : termName(factor)));
  const named = name.split(' × ');
  const same =
    named.length === parts.length &&
    parts.every((part, i) => (part.endsWith(': ') ? named[i]?.startsWith(part) : named[i] === part));
  return same ? { per: `per unit of the product ${name}`, more: null } : null;
}

function simpleStep(result: Result, term: SimpleTerm, name: string): Step | null {
  const { plan } = result;
  if ('as' in term) {
    const start = levelName(term.column, '');
    if (!name.startsWith(start)) return null;
    return levelStep(result, term, name.slice(start.length));
  }
  if (name !== termName(term)) return null;
  if (name !== term.column) return { per: `per unit of ${name}`, more: `one more unit of ${name}` };
  const unit = plan.units[name];
  if (unit === undefined) return { per: `per unit of ${name}`, more: `one more unit of ${name}` };
  if (/\s/.test(unit.trim())) return { per: `per one ${unit}`, more: `one more ${unit} (${name})` };
  return { per: `per one ${unit} of ${name}`, more: `one more ${unit} of ${name}` };
}

type Category = Extract<SimpleTerm, { as: 'category' }>;

function levelStep(result: Result, term: Category, level: string): Step {
  if (keepsAll(result.plan, term)) return { per: `where ${term.column} is ${level}`, more: null };
  const baseline = baselineOf(result, term);
  const against = `${level} against ${baseline ?? 'the baseline level'}`;
  return { per: against, more: `${term.column} ${against}` };
}

/** Without an intercept the first category that stands alone keeps all its levels. */
function keepsAll({ intercept, terms }: Plan, term: Category): boolean {
  return !intercept && terms.find((one) => 'as' in one) === term;
}

/** The level that has no coefficient: stated, or found in the labels; null where neither tells it. */
export function baselineOf({ plan, cells, fit }: Result, term: Category): string | null {
  if (term.baseline !== null) return term.baseline;
  const columns = plan.roles.label ?? [];
  const at = columns.indexOf(term.column);
  if (at < 0) return null;
  const levels = new Set<string>();
  for (const { label } of cells) {
    const parts = columns.length === 1 ? [label] : label.split(' · ');
    if (parts.length !== columns.length) return null;
    levels.add(parts[at] as string);
  }
  const known = new Set(fit.coefficients.map((one) => one.term));
  const left = [...levels].filter((level) => !known.has(levelName(term.column, level)));
  return left.length === 1 ? (left[0] as string) : null;
}

/** The unit of a coefficient as it stands in a table: "kg per plot, per one thousand of income". */
export function coefficientUnit(result: Result, name: string): string {
  const unit = outcomeUnit(result.plan);
  const { per } = stepOf(result, name);
  return unit === null ? per : `${unit}, ${per}`;
}
