import { isLinked } from '../protocol/linked';
import { problem } from '../protocol/outcome';
import type { Plan, Transform } from '../protocol/plan';
import type { Column } from './column';
import type { NumericPlace } from './derive';
import type { Frame } from './frame';
import { transformsOf } from './places';
import { partsOf } from './plan-files';

/**
 * Notes, for each column that must be numbers, that it reads both ways (one a file) or the first text that is no number.
 *
 * rows: those left after `omit`; a column is told at the first place that needs it.
 */
export function noteUnreadable(frame: Frame, places: readonly NumericPlace[], rows: readonly number[]): void {
  const left = new Set(rows);
  const seen = new Set<Column>();
  const filesTold = new Set<string>();
  for (const { column, at } of places) {
    if (seen.has(column)) continue;
    seen.add(column);
    const { file, name, readsBothWays } = column;
    if (readsBothWays) {
      if (filesTold.has(column.fileAt)) continue;
      filesTold.add(column.fileAt);
      frame.problems.push(problem('reads-both-ways', { file, column: name, ...readsBothWays }, column.fileAt));
      continue;
    }
    const row = column.numbers().wrong.find((wrong) => left.has(wrong));
    if (row === undefined) continue;
    const facts = { file, row: column.rowInFile(row), column: name, found: column.texts[row] as string };
    frame.problems.push(problem('not-a-number', facts, at));
  }
}

/** The columns of the roles that hold numbers, null where the plan has none or names none that is there. */
export interface RoleColumns {
  readonly outcome: Column | null;
  readonly size: Column | null;
  readonly error: Column | null;
  readonly count: Column | null;
  readonly exposure: Column | null;
  readonly designEffect: Column | null;
  readonly withinSd: Column | null;
}

/**
 * Notes the first outcome outside its unit's range, and the first count that is below 0 or exceeds the size of its cell.
 *
 * rows: those left after `omit`; a size that is not above 0 leaves its cell out before its count is looked at.
 */
export function noteImpossible(
  frame: Frame,
  { plan, columns, rows }: { readonly plan: Plan; readonly columns: RoleColumns; readonly rows: readonly number[] },
): void {
  const { roles } = plan;
  const { outcome, size, count, exposure } = columns;
  const high = roles.outcomeUnit === 'percent' ? 100 : 1;
  if (outcome && roles.outcomeUnit !== 'number') {
    const row = rows.find((r) => beyond(outcome, r, [0, high]));
    if (row !== undefined) noteRange(frame, { column: outcome, row, at: '/roles/outcome', unit: roles.outcomeUnit });
  }
  if (!count) return;
  const negative = rows.find((row) => beyond(count, row, [0, Number.POSITIVE_INFINITY]));
  if (negative !== undefined) noteRange(frame, { column: count, row: negative, at: '/roles/count', unit: 'count' });
  if (!size || exposure) return;
  const sizes = size.numbers().values.high;
  const row = rows.find(
    (r) => (sizes[r] as number) > 0 && beyond(count, r, [Number.NEGATIVE_INFINITY, sizes[r] as number]),
  );
  if (row === undefined) return;
  const facts = {
    file: count.file,
    row: count.rowInFile(row),
    column: count.name,
    found: count.texts[row] as string,
    sizeColumn: size.name,
    size: size.texts[row] as string,
  };
  frame.problems.push(problem('count-above-size', facts, '/roles/count'));
}

function beyond(column: Column, row: number, [low, high]: readonly [number, number]): boolean {
  const value = column.numbers().values.high[row] as number;
  return value < low || value > high;
}

function noteRange(
  frame: Frame,
  {
    column,
    row,
    at,
    unit,
  }: { readonly column: Column; readonly row: number; readonly at: string; readonly unit: string },
): void {
  const facts = {
    file: column.file,
    row: column.rowInFile(row),
    column: column.name,
    found: column.texts[row] as string,
    unit,
  };
  frame.problems.push(problem('share-out-of-range', facts, at));
}

/**
 * Notes, for each transform, proxy and outcome scale, the first used cell in which it is undefined; then derived values that are.
 *
 * log and a proxy need a value above 0, sqrt one not below 0, inverse one that is not 0.
 */
export function noteUndefined(
  frame: Frame,
  {
    plan,
    used,
    places,
  }: { readonly plan: Plan; readonly used: readonly number[]; readonly places: readonly NumericPlace[] },
): void {
  for (const { at, column: name, transform } of transformsOf(plan)) {
    noteFirst(frame, {
      column: frame.holder(name),
      used,
      at,
      word: transform,
      fails: (value) => !defined(value, transform),
    });
  }
  for (const { part, at } of partsOf(plan)) {
    if (part.kind !== 'proxy') continue;
    noteFirst(frame, {
      column: frame.holder(part.column),
      used,
      at: `${at}/column`,
      word: 'proxy',
      fails: (value) => value <= 0,
    });
  }
  noteOutcomeScale(frame, plan, used);
  noteUndefinedDerived(frame, used, places);
}

function defined(value: number, transform: Transform): boolean {
  if (transform === 'inverse') return value !== 0;
  return transform === 'log' ? value > 0 : value >= 0;
}

function noteFirst(
  frame: Frame,
  by: {
    readonly column: Column | null;
    readonly used: readonly number[];
    readonly at: string;
    readonly word: string;
    readonly fails: (value: number) => boolean;
  },
): void {
  const { column, used, at, word, fails } = by;
  if (!column) return;
  const { high } = column.numbers().values;
  const row = used.find((r) => !Number.isNaN(high[r]) && fails(high[r] as number));
  if (row === undefined) return;
  const { file, name, texts } = column;
  const facts = { file, row: column.rowInFile(row), column: name, found: texts[row] as string, transform: word };
  frame.problems.push(problem('transform-undefined', facts, at));
}

/** An outcome without counts behind it has its log only above 0, its logit only inside its range; a share of a size is a count, which can have halves. */
function noteOutcomeScale(frame: Frame, plan: Plan, used: readonly number[]): void {
  const { roles, outcomeScale, addedHalf } = plan;
  if (roles.outcome === null || outcomeScale === 'identity' || isLinked(plan)) return;
  if (outcomeScale === 'logit' && roles.size !== null && addedHalf !== 'no' && addedHalf !== null) return;
  const high = roles.outcomeUnit === 'percent' ? 100 : 1;
  const fails = outcomeScale === 'log' ? (y: number) => y <= 0 : (y: number) => y <= 0 || y >= high;
  noteFirst(frame, { column: frame.holder(roles.outcome), used, at: '/outcomeScale', word: outcomeScale, fails });
}

function noteUndefinedDerived(frame: Frame, used: readonly number[], places: readonly NumericPlace[]): void {
  const told = new Set<string>();
  for (const { column } of places) {
    if (!column.derived) continue;
    const { undefinedAt } = column.numbers();
    for (const row of used) {
      const cause = undefinedAt.get(row);
      if (!cause || told.has(cause.at)) continue;
      told.add(cause.at);
      const { at, ...facts } = cause;
      frame.problems.push(problem('transform-undefined', facts, at));
    }
  }
}
