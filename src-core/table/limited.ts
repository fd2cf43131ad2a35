import { type Decimals, fromDoubles } from '../numbers/decimals';
import type { Limit, Plan, Roles } from '../protocol/plan';
import { factorsOf } from '../protocol/term-names';
import type { Cells, LimitedCells, LimitedColumn } from './cells';
import type { RoleColumns } from './checks';
import type { Column } from './column';
import { composed } from './declarations';
import type { Frame } from './frame';
import type { Included, Positive, UsedColumn } from './inclusion';
import { type Between, type EndsOf, endsOf } from './limited-ends';
import type { OmittedBy } from './omit';
import type { RoleValues } from './roles';

/** What the data stage knows when it asks for the cells behind the bounds. */
export interface LimitedSources {
  readonly frame: Frame;
  readonly plan: Plan;
  readonly mask: Included;
  readonly omittedBy: OmittedBy;
  /** Every column that a cell cannot do without. */
  readonly columns: readonly UsedColumn[];
  readonly roles: RoleColumns;
  /** Role values and positives with some columns' values filled in. */
  readonly valuesWith: (columns: RoleColumns) => RoleValues;
  readonly positivesWith: (columns: RoleColumns, values: RoleValues) => readonly Positive[];
  /** False for a row that a structure of the plan has no place for. */
  readonly placed: (row: number) => boolean;
  /** Cells of some rows, with some columns' values filled in. */
  readonly cellsWith: (rows: readonly number[], filled: ReadonlyMap<Column, Column>, values: RoleValues) => Cells;
}

/** A column whose limits can be followed to the coefficients. */
interface Followed {
  readonly column: Column;
  readonly ends: EndsOf;
  readonly isOutcome: boolean;
}

/**
 * The cells behind the bounds: the used ones, and those left out for nothing but a value that a limit or an interval holds between two ends.
 *
 * Followed are the outcome, or the count behind it, and columns that stand in the terms as they are; there both ends must be finite. An unknown
 * value stands at the middle of its ends until it is moved. Null where every value is known.
 *
 * Example: a suppressed mean under `{ suppressed: [0, 10] }`, its size known, is a cell at 5 that may lie between 0 and 10.
 */
export function limitedCells(of: LimitedSources): LimitedCells | null {
  const { frame, plan, mask, omittedBy } = of;
  const followed = followedColumns(of);
  const unlimited = Object.keys(plan.data.limits).length === 0;
  if (mask.used.length === 0 || (unlimited && followed.every(({ column }) => column.numbers().ends.size === 0)))
    return null;
  const used = new Set(mask.used);
  const wanting = omittedBy.flatMap((rule, row) => (rule === null && !used.has(row) ? [row] : []));
  const held = wanting.filter((row) => followed.some(({ ends }) => ends.lacks(row) && ends.at(row) !== null));
  const whole = held.filter((row) => isWhole(row, of, followed));
  const filled = new Map(
    followed.map(({ column, ends, isOutcome }) => [column, withMiddles(column, { ends, rows: whole, isOutcome })]),
  );
  const roles = Object.fromEntries(
    Object.entries(of.roles).map(([role, column]) => [role, column && (filled.get(column) ?? column)]),
  ) as unknown as RoleColumns;
  const values = of.valuesWith(roles);
  const positives = of.positivesWith(roles, values);
  const brought = whole.filter((row) => positives.every(({ holds }) => holds(row)) && of.placed(row));
  const rows = [...mask.used, ...brought].sort((a, b) => a - b);
  const columns = followed.map((one) => columnEnds(one, rows));
  if (brought.length === 0 && columns.every(isKnown)) return null;
  const place = new Map(mask.used.map((row, g) => [row, g]));
  const cells = of.cellsWith(rows, filled, values);
  const own = followed.findIndex(({ isOutcome }) => isOutcome);
  return {
    cells,
    usedAt: Int32Array.from(rows, (row) => place.get(row) ?? -1),
    outcome: outcomeEnds(plan.roles, cells, columns[own] ?? null),
    covariates: columns.filter((one, i) => i !== own && !isKnown(one)),
    outside: held.filter((row) => !brought.includes(row)).map((row) => frame.labels[row] as string),
  };
}

/** The outcome or its count first, then columns of the terms; derived ones only under a limit of their own. */
function followedColumns({ frame, plan }: LimitedSources): Followed[] {
  const { roles, data, terms } = plan;
  const outcome = frame.holder((roles.outcome ?? roles.count) as string);
  const plain = terms.flatMap(factorsOf).flatMap((term) => ('as' in term ? [] : (frame.holder(term.column) ?? [])));
  const limits = new Map(Object.entries(data.limits).map(([name, limit]) => [composed(name), limit] as const));
  const limitOf = (column: Column): Limit | null => limits.get(composed(column.name)) ?? null;
  const anywhere = (): Between => [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
  const columns = [...new Set([...(outcome ? [outcome] : []), ...plain])];
  return columns.flatMap((column): Followed[] => {
    const isOutcome = column === outcome;
    const range = isOutcome ? outcomeRange(frame, plan) : anywhere;
    const ends = endsOf(column, { limit: limitOf(column), range });
    if (isOutcome) return [{ column, ends, isOutcome }];
    const closed = (row: number): Between | null => {
      const found = ends.at(row);
      return found !== null && found[0] > -Infinity && found[1] < Infinity ? found : null;
    };
    return [{ column, ends: { ...ends, at: closed }, isOutcome }];
  });
}

/** What an outcome can be at all, in its column's unit. */
function outcomeRange(frame: Frame, { roles, outcomeScale }: Plan): (row: number) => Between {
  if (roles.outcome !== null) {
    const least = roles.outcomeUnit === 'number' && outcomeScale !== 'log' ? Number.NEGATIVE_INFINITY : 0;
    const most = { number: Number.POSITIVE_INFINITY, share: 1, percent: 100 }[roles.outcomeUnit];
    return () => [least, most];
  }
  const sizes = roles.exposure === null ? frame.holder(roles.size as string)?.numbers().values.high : undefined;
  return (row) => {
    const size = sizes?.[row];
    return [0, size !== undefined && size > 0 ? size : Number.POSITIVE_INFINITY];
  };
}

/** Nothing is missing but values that have ends. */
function isWhole(row: number, { columns }: LimitedSources, followed: readonly Followed[]): boolean {
  return columns.every(({ column, need }) => {
    const gap = need === 'number' ? column.numbers().gaps[row] : column.categoryGaps()[row];
    if ((gap ?? null) === null) return true;
    return need === 'number' && followed.some((one) => one.column === column && one.ends.at(row) !== null);
  });
}

function withMiddles(
  column: Column,
  { ends, rows, isOutcome }: { readonly ends: EndsOf; readonly rows: readonly number[]; readonly isOutcome: boolean },
): Column {
  const lacking = rows.filter((row) => ends.lacks(row) && ends.at(row) !== null);
  if (lacking.length === 0) return column;
  const numbers = column.numbers();
  const high = numbers.values.high.slice();
  const low = numbers.values.low.slice();
  for (const row of lacking) {
    high[row] = middleOf(ends.at(row) as Between, isOutcome);
    low[row] = 0;
  }
  const gone = new Set(lacking);
  const filled = {
    ...numbers,
    values: { high, low },
    gaps: numbers.gaps.map((gap, row) => (gone.has(row) ? null : gap)),
  };
  return { ...column, texts: column.texts, numbers: () => filled };
}

/** The middle, or a step inside the end that there is. */
function middleOf([low, high]: Between, isOutcome: boolean): number {
  if (low > -Infinity && high < Infinity) return low / 2 + high / 2;
  if (!isOutcome) throw new RangeError('a covariate with an open end was taken in');
  if (low > -Infinity) return low + 1;
  return high < Infinity ? high - 1 : 1;
}

function columnEnds({ column, ends }: Followed, rows: readonly number[]): LimitedColumn {
  const between = rows.map((row) => ends.at(row) ?? [Number.NaN, Number.NaN]);
  return {
    name: column.name,
    low: Float64Array.from(between, ([low]) => low),
    high: Float64Array.from(between, ([, high]) => high),
  };
}

function isKnown({ low, high }: LimitedColumn): boolean {
  return low.every((end, g) => end === high[g]);
}

/** A count's ends as those of the outcome made of it; a value that is known keeps all its digits. */
function outcomeEnds(roles: Roles, cells: Cells, ends: LimitedColumn | null): LimitedCells['outcome'] {
  const exact = cells.outcome.high;
  if (ends === null) return { low: exact.slice(), high: exact.slice() };
  const over = (end: number, g: number): number => {
    if (roles.count === null) return end;
    if (cells.exposure) return (end / (cells.exposure[g] as number)) * roles.per;
    return end / ((cells.size as Float64Array)[g] as number);
  };
  const made = (values: Float64Array): Float64Array =>
    values.map((end, g) => (ends.low[g] === ends.high[g] ? (exact[g] as number) : over(end, g)));
  return { low: made(ends.low), high: made(ends.high) };
}

/**
 * The cells behind the bounds with outcomes and covariates moved, and what is made of them: counts, and errors stated as a share of the outcome.
 *
 * outcome: length G; entries that are equal to the cells' own keep every digit. covariates: by column, length G.
 */
export function movedCells(
  cells: Cells,
  moved: { readonly outcome: Float64Array; readonly covariates: ReadonlyMap<string, Float64Array> },
): Cells {
  const { roles } = cells.plan;
  const outcome = replaced(cells.outcome, moved.outcome);
  const factor = (g: number): number =>
    roles.exposure === null
      ? ((cells.size as Float64Array)[g] as number)
      : ((cells.exposure as Float64Array)[g] as number) / roles.per;
  return {
    ...cells,
    outcome,
    counts:
      cells.counts?.map((c, g) =>
        moved.outcome[g] === cells.outcome.high[g] ? c : (moved.outcome[g] as number) * factor(g),
      ) ?? null,
    error:
      cells.error && roles.errorKind === 'cv'
        ? cells.error.map((s, g) => s * Math.abs((moved.outcome[g] as number) / (cells.outcome.high[g] as number)))
        : cells.error,
    numbers: (name) => {
      const column = cells.numbers(name);
      const values = moved.covariates.get(name);
      return values ? { ...column, values: replaced(column.values, values) } : column;
    },
  };
}

function replaced(column: Decimals, values: Float64Array): Decimals {
  const moved = fromDoubles(values);
  const low = column.low.map((rest, g) => (moved.high[g] === column.high[g] ? rest : 0));
  return { high: moved.high, low };
}
