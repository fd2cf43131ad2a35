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
  /** Pairs of used cells (indices) that the neighbour list names, each once; null without a list. */
  readonly neighbours: readonly (readonly [number, number])[] | null;
  readonly data: DataUsed;
  /** What the data stage noticed: labels that look alike. */
  readonly cautions?: readonly Caution[];
}
