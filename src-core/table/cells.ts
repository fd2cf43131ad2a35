import type { Decimals } from '../numbers/decimals';
import type { Plan, Status } from '../protocol/plan';
import type { Caution, DataUsed } from '../protocol/result';

/** A numeric column of the used cells. */
export interface NumberColumn {
  readonly name: string;
  readonly values: Decimals;
  readonly texts: readonly string[];
  readonly status: readonly Status[];
}

/**
 * The used cells of a plan: what the data stage hands to the model stage. Every vector has one entry a used cell, in data order.
 * Nothing in it is missing: cells with a gap in any column that the plan uses were left out before, with their reason.
 */
export interface Cells {
  readonly plan: Plan;
  readonly count: number;
  /** Data row from 1. */
  readonly rows: readonly number[];
  readonly labels: readonly string[];
  /**
   * On the outcome's own scale before `outcomeScale` (mean, share, rate per `per`), in the outcome's own unit; count over size or exposure
   * where the role is a count.
   */
  readonly outcome: Decimals;
  /** n_g; null without the role. */
  readonly size: Float64Array | null;
  /** m_g = n_g / deff_g, n_g without a design effect. */
  readonly effectiveSize: Float64Array | null;
  /** s_g: errors converted to standard errors from their stated kind, in the outcome's own unit. */
  readonly error: Float64Array | null;
  /** Under logit what was added to each of both counts, 0 or 1/2 a cell; absent where the outcome was not transformed so. */
  readonly addedHalves?: Float64Array;
  /** Counts behind a rate or proportion. */
  readonly counts: Float64Array | null;
  readonly exposure: Float64Array | null;
  /** Numbers of a data, joined or derived column; throws if the data stage did not check it (a bug). */
  readonly numbers: (column: string) => NumberColumn;
  /** Texts of a column, as categories take them. */
  readonly texts: (column: string) => readonly string[];
  /** Every column that can be named, in order: the file's, the joined ones, the derived ones. */
  readonly columns: readonly string[];
  /** Label columns and their texts. */
  readonly labelColumns: readonly string[];
  /** Given covariances of the used cells by file: count x count, row after row, symmetric. */
  readonly matrices: ReadonlyMap<string, Float64Array>;
  /** Pairs of used cells (indices) that the neighbour list names, each once; null without a list. */
  readonly neighbours: readonly (readonly [number, number])[] | null;
  readonly data: DataUsed;
  /** The cells behind the bounds where some values are known to within limits only; null or absent where none is. */
  readonly limited?: LimitedCells | null;
  /** What the data stage noticed: labels that look alike. */
  readonly cautions?: readonly Caution[];
}

/** A column's ends, one entry a cell: equal where the value is known, infinite where open. */
export interface LimitedColumn {
  readonly name: string;
  readonly low: Float64Array;
  readonly high: Float64Array;
}

/** The used cells together with those that a limit brings in, and what their values lie between. */
export interface LimitedCells {
  /** In data order; an unknown value stands at the middle of its ends. */
  readonly cells: Cells;
  /** Index among the used cells, -1 for a cell brought in. */
  readonly usedAt: Int32Array;
  /** In the outcome's own unit, a count as what it gives. */
  readonly outcome: { readonly low: Float64Array; readonly high: Float64Array };
  /** Columns of the terms that are not wholly known: both ends finite. */
  readonly covariates: readonly LimitedColumn[];
  /** Labels of the cells that have a limited value and cannot come in for want of something else. */
  readonly outside: readonly string[];
}
