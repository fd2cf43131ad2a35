import type { Omitted } from '../protocol/result';
import type { Column, Gap } from './column';
import type { Frame } from './frame';
import type { OmittedBy } from './omit';

/** A column whose values a cell cannot do without. */
export interface UsedColumn {
  readonly column: Column;
  readonly need: 'number' | 'category';
}

/** A column that must be above 0, and the name under which a count of its failures is told. */
export interface Positive {
  readonly column: Column;
  readonly count: 'size-not-positive' | 'error-not-positive' | 'exposure-not-positive';
  /** False where the value as the plan uses it is not above 0. */
  readonly holds: (row: number) => boolean;
}

export interface Included {
  /** Rows used, from 0, in data order. */
  readonly used: readonly number[];
  readonly omitted: Omitted[];
  /** How many rows for which reason. */
  readonly reasons: Record<string, number>;
}

/**
 * One inclusion mask for all roles.
 *
 * A row is left out by a rule of the plan; else where a column that the plan uses has no value there (the first in the order of the plan); else where
 * its size, error or exposure is not above 0. Its one reason is the first of these.
 */
export function included(
  frame: Frame,
  {
    omittedBy,
    columns,
    positives,
  }: {
    readonly omittedBy: OmittedBy;
    readonly columns: readonly UsedColumn[];
    readonly positives: readonly Positive[];
  },
): Included {
  const gaps = columns.map(({ column, need }) => ({
    column,
    gaps: need === 'number' ? column.numbers().gaps : column.categoryGaps(),
  }));
  const used: number[] = [];
  const omitted: Omitted[] = [];
  const reasons: Record<string, number> = {};
  for (let row = 0; row < frame.rows; row++) {
    const left = reasonOf(row, { omittedBy, gaps, positives });
    if (left === null) {
      used.push(row);
      continue;
    }
    omitted.push({ row: row + 1, label: frame.labels[row] as string, reason: left.reason });
    reasons[left.count] = (reasons[left.count] ?? 0) + 1;
  }
  return { used, omitted, reasons };
}

interface Left {
  readonly reason: Omitted['reason'];
  readonly count: string;
}

function reasonOf(
  row: number,
  by: {
    readonly omittedBy: OmittedBy;
    readonly gaps: readonly { readonly column: Column; readonly gaps: readonly (Gap | null)[] }[];
    readonly positives: readonly Positive[];
  },
): Left | null {
  const rule = by.omittedBy[row];
  if (rule) return { reason: { code: 'omit-rule', column: rule.column, text: rule.because }, count: 'omit-rule' };
  for (const { column, gaps } of by.gaps) {
    const code = gaps[row];
    if (code) return { reason: { code, column: column.name, text: column.gapText(row) }, count: code };
  }
  const failed = by.positives.find(({ holds }) => !holds(row));
  if (!failed) return null;
  const { column, count } = failed;
  return { reason: { code: 'not-above-zero', column: column.name, text: column.texts[row] as string }, count };
}
