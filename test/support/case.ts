import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { parseDecimal } from '@core/numbers/double-double';
import type { Correlation, Plan, Question, SimpleTerm, Target, Term, Variance } from '@core/protocol/plan';
import type { Cells } from '@core/table/cells';
import Papa from 'papaparse';

/** One outside value: what a published source, a reference library or a second route says. */
export interface Expected {
  readonly fit: string;
  readonly quantity: string;
  readonly value: number | null;
  readonly digits: number;
  readonly origin: string;
}

export interface CaseFit {
  readonly fit: string;
  readonly spec: {
    readonly parts: Record<string, unknown>[];
    readonly link: {
      readonly kind: string;
      readonly file?: string;
      readonly scale?: 'fixed' | 'free';
      readonly freedom?: number;
    };
    readonly method: string;
    readonly rule?: string;
    readonly inference: { readonly kind: string; readonly type?: string };
    readonly target?: Target;
    readonly beside?: Plan['beside'];
    readonly questions?: Question[];
    readonly fixed?: Record<string, number>;
    readonly outcome_scale?: Plan['outcomeScale'];
    readonly half?: 'none' | 'extreme-cells' | 'all-cells';
    readonly freedom?: number;
    readonly order?: string;
  };
}

type CaseTerm = { column?: string; power?: number; as?: string; baseline?: string; product?: string[] };

export interface ReferenceCase {
  readonly id: string;
  readonly title: string;
  readonly kind: string;
  readonly source: string;
  readonly topics?: string;
  readonly note: string;
  readonly roles: {
    readonly response: string | null;
    readonly numerator?: string;
    readonly exposure?: string;
    readonly per?: number;
    readonly size: string | null;
    readonly se: string | null;
    readonly label?: string;
    readonly matrix?: string;
    readonly label_columns?: string[];
    readonly block?: string;
    readonly time?: string;
    readonly cluster?: string;
    readonly terms: CaseTerm[];
    readonly intercept: boolean;
    readonly white_columns?: string[];
    readonly test_columns?: string[];
    readonly joint_questions?: Record<string, string[]>;
    readonly predictions?: Record<string, { at: Record<string, number | string>; size?: number }>;
  };
  readonly fits: CaseFit[];
  readonly expected: Expected[];
}

const folder = join(import.meta.dirname, '../reference/cases');

export function loadCase(id: string): ReferenceCase {
  return JSON.parse(readFileSync(join(folder, id, 'case.json'), 'utf8')) as ReferenceCase;
}

/** Absolute path of a file of a case. */
export function caseFile(id: string, file = 'data.csv'): string {
  return join(folder, id, file);
}

/** The outside value of one quantity of one fit; throws where the case has none. */
export function outside(of: ReferenceCase, fit: string, quantity: string): number {
  const found = of.expected.find((e) => e.fit === fit && e.quantity === quantity);
  if (!found || found.value === null) throw new Error(`${of.id} holds no value of ${quantity} under ${fit}`);
  return found.value;
}

function simple(term: CaseTerm): SimpleTerm {
  const column = term.column as string;
  if (term.as === 'category') return { column, as: 'category', baseline: term.baseline ?? null };
  return term.power === undefined ? { column } : { column, power: term.power };
}

function termsOf(roles: ReferenceCase['roles']): Term[] {
  return roles.terms.map((term) =>
    term.product
      ? { product: term.product.map((name) => simple(roles.terms.find((t) => t.column === name) ?? { column: name })) }
      : simple(term),
  );
}

const correlated = new Set(['exchangeable', 'serial', 'shared', 'matrix']);

/** True where the fit is one of independent cells. */
export function isDiagonal(fit: CaseFit): boolean {
  return !correlated.has(fit.spec.link.kind) && !fit.spec.parts.some((p) => p['kind'] === 'shared');
}

/** The correlation that a link puts on the sampling part. */
function correlationOf(roles: ReferenceCase['roles'], kind: string): Correlation | null {
  const by = roles.block ? [roles.block] : [];
  if (kind === 'exchangeable') return { kind, by };
  return kind === 'serial' ? { kind, by, order: roles.time as string } : null;
}

/** A case's parts as a plan writes them: a link goes on the sampling part, stands beside it (shared) or in place of it (a matrix). */
function partsOf(roles: ReferenceCase['roles'], { parts, link }: CaseFit['spec']): Variance['parts'] {
  if (link.kind === 'matrix') {
    const { file = '', scale = 'fixed', freedom = null } = link;
    return [{ kind: 'matrix', file, scale, freedom }];
  }
  const own = parts.map((part, i) => {
    const correlation = part['correlation'] ?? (i === 0 ? correlationOf(roles, link.kind) : null);
    if (part['kind'] === 'shared') return part;
    if (part['kind'] === 'given') return { ...part, freedom: part['freedom'] ?? null, correlation };
    if (part['kind'] !== 'log-linear') return { ...part, correlation };
    const terms = (part['columns'] as string[]).map((name): SimpleTerm => {
      const logged = /^log\((.+)\)$/.exec(name)?.[1];
      if (logged !== undefined) return { column: logged, transform: 'log' };
      return simple(roles.terms.find(({ column }) => column === name) ?? { column: name });
    });
    return { kind: 'log-linear', terms, correlation };
  });
  const shared = link.kind === 'shared' ? [{ kind: 'shared', by: [roles.block as string] }] : [];
  return [...own, ...shared] as Variance['parts'];
}

/** A case's fit as a plan in its normal form. */
export function planOf(of: ReferenceCase, fit: CaseFit): Plan {
  const { roles } = of;
  const { spec } = fit;
  const estimate = (spec.method === 'moments'
    ? { method: 'moments', rule: spec.rule }
    : { method: spec.method }) as unknown as Plan['estimate'];
  const by = roles.cluster ? [roles.cluster] : [];
  const inference = (
    spec.inference.kind === 'robust'
      ? { kind: 'robust', level: 0.95, correction: spec.inference.type }
      : spec.inference.kind === 'clustered'
        ? { kind: 'clustered', level: 0.95, correction: spec.inference.type, by, alsoBy: null }
        : spec.inference.kind === 'wild'
          ? { kind: 'wild', level: 0.95, by, replications: 9999, seed: 1 }
          : spec.inference.kind === 'knapp-hartung'
            ? { kind: 'knapp-hartung', level: 0.95, floor: false }
            : { kind: spec.inference.kind, level: 0.95 }
  ) as Plan['inference'];
  const parts = partsOf(roles, spec);
  return {
    format: 'steelyard-plan/1',
    title: of.title,
    about: null,
    data: {
      file: 'data.csv',
      read: { encoding: null, delimiter: ',', decimal: null, group: null, statuses: {}, missing: {}, footnotes: [] },
      join: [],
      derive: [],
      omit: [],
      limits: {},
      sizeWithin: null,
    },
    roles: {
      label:
        roles.label_columns ??
        (roles.block && roles.time ? [roles.block, roles.time] : roles.label ? [roles.label] : null),
      outcome: roles.response,
      outcomeUnit: 'number',
      size: roles.size,
      error: roles.se,
      errorKind: 'se',
      errorLevel: null,
      count: roles.numerator ?? null,
      exposure: roles.exposure ?? null,
      per: roles.per ?? 1,
      designEffect: null,
      withinSd: null,
    },
    units: {},
    matters: {},
    outcomeScale: spec.outcome_scale ?? 'identity',
    addedHalf: spec.half === undefined ? null : spec.half === 'none' ? 'no' : spec.half,
    terms: termsOf(roles),
    intercept: roles.intercept,
    variance: { parts, fixed: spec.fixed ?? {} },
    estimate,
    target: spec.target ?? 'structure',
    inference,
    beside: spec.beside ?? [],
    questions: spec.questions ?? [],
    tests: {
      columns: roles.test_columns ?? null,
      whiteColumns: roles.white_columns ?? null,
      neighbours: null,
    },
    disclosure: null,
    report: { paper: 'A4', omit: [] },
  };
}

/** The used cells of a case, made without intake: every row, no gaps. */
export function cellsOf(id: string, plan: Plan): Cells {
  return cellsFrom(readFileSync(caseFile(id), 'utf8'), plan);
}

/** The used cells of a complete comma-separated table, for tests of the rooms that come after intake. */
export function cellsFrom(csv: string, plan: Plan): Cells {
  const { data, meta } = Papa.parse<Record<string, string>>(csv, { header: true, skipEmptyLines: true });
  const names = meta.fields ?? [];
  const texts = (column: string): string[] => {
    if (!names.includes(column)) throw new Error(`no column ${column}`);
    return data.map((row) => row[column] as string);
  };
  const numbers: Cells['numbers'] = (column) => {
    const pairs = texts(column).map((text) => parseDecimal(text));
    return {
      name: column,
      values: {
        high: Float64Array.from(pairs, (pair) => pair?.[0] ?? Number.NaN),
        low: Float64Array.from(pairs, (pair) => pair?.[1] ?? 0),
      },
      texts: texts(column),
      status: pairs.map(() => 'value'),
    };
  };
  const highs = (column: string | null) => (column === null ? null : numbers(column).values.high);
  const labelColumns = plan.roles.label ?? [];
  return {
    plan,
    count: data.length,
    rows: data.map((_, g) => g + 1),
    labels: data.map((row, g) => (labelColumns.length ? labelColumns.map((c) => row[c]).join(' · ') : String(g + 1))),
    outcome: numbers(plan.roles.outcome as string).values,
    size: highs(plan.roles.size),
    effectiveSize: highs(plan.roles.size),
    error: highs(plan.roles.error),
    counts: null,
    exposure: null,
    numbers,
    texts,
    columns: names,
    labelColumns,
    matrices: new Map(),
    neighbours: null,
    data: { rows: data.length, used: data.length, omitted: [], files: [], unmatched: [] },
  };
}
