import type { PreviewColumn } from './bridge';
import type { DraftPlan } from './draft';
import type { OutcomeUnit, Plan, Roles, SimpleTerm } from './plan';

/** What a column's number is: the answer to "what is this number?", finer than the roles of a plan. */
export const columnRoles = [
  'label',
  'mean',
  'share',
  'percent',
  'size',
  'effective-size',
  'repeats',
  'se',
  'variance',
  'half-width',
  'cv',
  'count',
  'exposure',
  'design-effect',
  'within-sd',
  'survey-weight',
  'other',
] as const;

export type ColumnRole = (typeof columnRoles)[number];

/** How a column explains the outcome. */
export type Use = 'none' | 'number' | 'category';

/** Why a role is proposed. */
export type Because = 'name' | 'texts-name-cells' | 'year-names-cells' | 'only-whole-numbers' | 'blank' | 'left-over';

type AnyPlan = Plan | DraftPlan;

const unitOf: Readonly<Partial<Record<ColumnRole, OutcomeUnit>>> = {
  mean: 'number',
  share: 'share',
  percent: 'percent',
};
const singleOf: Readonly<Partial<Record<ColumnRole, 'size' | 'count' | 'exposure' | 'designEffect' | 'withinSd'>>> = {
  size: 'size',
  'effective-size': 'size',
  repeats: 'size',
  count: 'count',
  exposure: 'exposure',
  'design-effect': 'designEffect',
  'within-sd': 'withinSd',
};

/** What a plan takes a column to be. Several kinds of size are one role: the plain one is told. */
export function roleOf({ roles }: Pick<AnyPlan, 'roles'>, column: string): ColumnRole {
  if (roles.label?.includes(column)) return 'label';
  if (roles.outcome === column)
    return ({ number: 'mean', share: 'share', percent: 'percent' } as const)[roles.outcomeUnit];
  if (roles.error === column) return roles.errorKind;
  if (roles.size === column) return 'size';
  if (roles.count === column) return 'count';
  if (roles.exposure === column) return 'exposure';
  if (roles.designEffect === column) return 'design-effect';
  return roles.withinSd === column ? 'within-sd' : 'other';
}

/**
 * The roles of a plan with one column given another: it leaves the role that it had, and takes the new one from the column that had it.
 *
 * order: the columns of the table, by which label columns are put in order. A count takes the place of an outcome, and the other way round.
 */
export function withRole(
  roles: Roles,
  { column, role, order }: { column: string; role: ColumnRole; order: readonly string[] },
): Roles {
  const free = without(roles, column);
  if (role === 'label') {
    const label = [...(free.label ?? []), column].sort((a, b) => order.indexOf(a) - order.indexOf(b));
    return { ...free, label };
  }
  const outcomeUnit = unitOf[role];
  if (outcomeUnit !== undefined) return { ...free, outcome: column, outcomeUnit, count: null };
  if (role === 'se' || role === 'variance' || role === 'half-width' || role === 'cv')
    return {
      ...free,
      error: column,
      errorKind: role,
      errorLevel: role === 'half-width' ? (free.errorLevel ?? 0.95) : null,
    };
  const single = singleOf[role];
  if (single === undefined) return free;
  const next = { ...free, [single]: column };
  return single === 'count' ? { ...next, outcome: null, outcomeUnit: 'number' } : next;
}

function without(roles: Roles, column: string): Roles {
  const label = roles.label?.filter((one) => one !== column) ?? [];
  const cleared = { ...roles, label: label.length > 0 ? label : null };
  if (roles.outcome === column) Object.assign(cleared, { outcome: null, outcomeUnit: 'number' });
  if (roles.error === column) Object.assign(cleared, { error: null, errorKind: 'se', errorLevel: null });
  if (roles.exposure === column) Object.assign(cleared, { exposure: null, per: 1 });
  for (const key of ['size', 'count', 'designEffect', 'withinSd'] as const)
    if (roles[key] === column) cleared[key] = null;
  return cleared;
}

/** Whether the outcome is a proportion, of which a logit can be taken: a share, a percentage, or a count over a size. */
export function canBeLogit({ outcome, outcomeUnit, count, exposure }: Roles): boolean {
  return (outcome !== null && outcomeUnit !== 'number') || (count !== null && exposure === null);
}

/** How a plan lets a column explain the outcome by itself; its products are left out of account. */
export function useOf({ terms }: Pick<AnyPlan, 'terms'>, column: string): Use {
  const term = terms.find((one) => !('product' in one) && one.column === column);
  if (term === undefined) return 'none';
  return 'as' in term ? 'category' : 'number';
}

/** The terms of a plan with a column used otherwise; terms stand in the order in which they came. */
export function withUse(terms: AnyPlan['terms'], column: string, use: Use): AnyPlan['terms'] {
  const isOwn = (term: AnyPlan['terms'][number]) => !('product' in term) && term.column === column;
  if (use === 'none')
    return terms.filter(
      (term) => !isOwn(term) && !('product' in term && term.product.some((one) => one.column === column)),
    );
  const made: SimpleTerm = use === 'category' ? { column, as: 'category', baseline: null } : { column };
  return terms.some(isOwn) ? terms.map((term) => (isOwn(term) ? made : term)) : [...terms, made];
}

export interface RoleProposal {
  readonly column: string;
  readonly role: ColumnRole;
  readonly use: Use;
  readonly because: Because;
}

/** Words in a column's name that tell what it holds; the first that fits decides. */
const namesOf: readonly (readonly [ColumnRole, RegExp])[] = [
  ['half-width', /^(moe|halfwidth|half|margin|bound)$/],
  ['cv', /^(cv|rse|cvpct)$/],
  ['variance', /^(var|variance)$/],
  ['se', /^(se|stderr|sem|error|err|standarderror)$/],
  ['within-sd', /^(sd|std|stdev|deviation)$/],
  ['design-effect', /^(deff|designeffect|deft)$/],
  ['survey-weight', /^(weight|weights|wt|wgt)$/],
  ['exposure', /^(exposure|population|pop|personyears|py|atrisk)$/],
  ['effective-size', /^(neff|effective)$/],
  [
    'size',
    /^(n|nobs|size|respondents|sample|interviews|persons|people|carers|pupils|patients|households|cases|obs|observations|answers)$/,
  ],
  ['count', /^(count|counts|events|deaths|births|yes|positive)$/],
  ['percent', /^(percent|pct|percentage)$/],
  ['share', /^(share|prop|proportion|fraction)$/],
  ['mean', /^(mean|avg|average|rate|score|value|estimate|outcome|y)$/],
];

const single: ReadonlySet<ColumnRole> = new Set([
  'mean',
  'share',
  'percent',
  'size',
  'effective-size',
  'count',
  'exposure',
]);

/**
 * Proposes what each column is, by its name and its values; nothing is decided.
 *
 * Texts and years name the cells, blank columns nothing; each of outcome, size, error and so on goes to the first column whose name says so, size without such a name to the
 * only column of positive whole numbers; a number that nothing else claims explains the outcome, as a category where it takes few whole values:
 * such a number may be a code or a count, and names no cell unless that is said.
 *
 * Example: parish, year, carers, mean_hours, distance_km are label, label, size, mean, and a term.
 */
export function proposeRoles(columns: readonly PreviewColumn[]): readonly RoleProposal[] {
  const named = new Map<string, RoleProposal>();
  const put = (column: string, role: ColumnRole, because: Because, use: Use = 'none') =>
    void named.set(column, { column, role, use, because });
  for (const one of columns) {
    if (one.distinct === 0) put(one.name, 'other', 'blank');
    else if (hasYears(one)) put(one.name, 'label', 'year-names-cells');
    else if (!holdsNumbers(one) && !holdsCodes(one)) put(one.name, 'label', 'texts-name-cells');
  }
  byNames(columns, named, put);
  const rest = columns.filter(({ name }) => !named.has(name));
  const roles = new Set([...named.values()].map(({ role }) => role));
  if (!roles.has('size') && !roles.has('effective-size')) {
    const whole = rest.filter((one) => holdsCounts(one) && !holdsCodes(one));
    const [only] = whole;
    if (only && whole.length === 1) put(only.name, 'size', 'only-whole-numbers');
  }
  for (const one of rest)
    if (!named.has(one.name)) put(one.name, 'other', 'left-over', holdsCodes(one) ? 'category' : 'number');
  return columns.map(({ name }) => named.get(name) as RoleProposal);
}

function byNames(
  columns: readonly PreviewColumn[],
  named: ReadonlyMap<string, RoleProposal>,
  put: (column: string, role: ColumnRole, because: Because) => void,
): void {
  // A mean is looked for before a percentage: covariates are percentages more often than outcomes are.
  const outcomes: ReadonlySet<ColumnRole> = new Set(['mean', 'share', 'percent']);
  const claims = columns.flatMap(({ name }) => {
    if (named.has(name)) return [];
    const found = namesOf.find(([, pattern]) => wordsOf(name).some((word) => pattern.test(word)));
    return found ? [{ name, role: found[0] }] : [];
  });
  const outcome =
    (['mean', 'share', 'percent'] as const)
      .map((role) => claims.find((claim) => claim.role === role))
      .find((claim) => claim !== undefined) ?? null;
  const taken = new Set<ColumnRole>();
  const errors: ReadonlySet<ColumnRole> = new Set(['se', 'variance', 'half-width', 'cv']);
  for (const { name, role } of claims) {
    if (outcomes.has(role) && name !== outcome?.name) continue;
    if (role === 'count' && outcome !== null) continue;
    if (role === 'exposure' && !claims.some((claim) => claim.role === 'count')) continue;
    const key = errors.has(role) ? 'se' : role === 'effective-size' ? 'size' : role;
    if ((single.has(role) || errors.has(role)) && taken.has(key)) continue;
    taken.add(key);
    put(name, role, 'name');
  }
}

function wordsOf(name: string): readonly string[] {
  const words = name
    .replace(/([a-z])([A-Z])/g, '$1 $2')
    .toLowerCase()
    .split(/[^\p{L}]+/u)
    .filter((word) => word !== '');
  return [...words, words.join('')];
}

function filled({ texts }: PreviewColumn): readonly string[] {
  return texts.map((text) => text.trim()).filter((text) => text !== '');
}

/**
 * Whether a column is one of numbers, though some of its texts are none: at least half of what is neither blank nor a token looks like a number,
 * a footnote mark behind it allowed. Codes with leading zeros, and few small whole numbers that the reader of the file took for codes, are not.
 */
export function holdsNumbers(column: PreviewColumn): boolean {
  if (column.type === 'number') return true;
  if (column.reason === 'leading-zeros' || column.reason === 'few-whole-numbers') return false;
  const tokens = new Set(column.tokens.map(({ token }) => token));
  const texts = filled(column).filter((text) => !tokens.has(text));
  const numbers = texts.filter((text) =>
    /^[+\-\u2212]?\d[\d.,' \u00a0\u202f]*(e[+-]?\d+)?\s*[^\d\s]{0,3}$/iu.test(text),
  );
  return texts.length > 0 && 2 * numbers.length >= texts.length;
}

/** A number that takes few whole values: a code, or a count. */
function holdsCodes({ reason }: PreviewColumn): boolean {
  return reason === 'few-whole-numbers';
}

function hasYears(column: PreviewColumn): boolean {
  const texts = filled(column);
  return (
    texts.length > 0 &&
    texts.every((text) => /^(1[89]|20)\d\d$/.test(text)) &&
    new Set(texts).size < Math.max(2, texts.length)
  );
}

function holdsCounts(column: PreviewColumn): boolean {
  const tokens = new Set(column.tokens.map(({ token }) => token));
  const texts = filled(column).filter((text) => !tokens.has(text));
  return (
    texts.length > 1 &&
    texts.every((text) => /^\d{1,3}([ '\u202f\u00a0.,]?\d{3})*$/.test(text)) &&
    texts.some((text) => text !== texts[0])
  );
}
