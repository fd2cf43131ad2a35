import type { Encoding } from './plan';

/**
 * A file as intake hands it over: texts as they stand, column by column, and how numbers are written in each.
 * Numbers and statuses are made of the texts in table/, by the plan's declarations.
 */
export interface SourceTable {
  /** The name under which the plan names the file. */
  readonly file: string;
  /** Of the raw bytes, lower-case hexadecimal. */
  readonly sha256: string;
  readonly found: { readonly encoding: Encoding; readonly delimiter: string };
  /** Number of data rows. */
  readonly rows: number;
  readonly columns: readonly SourceColumn[];
}

export interface SourceColumn {
  readonly name: string;
  /** One per data row, outer spaces kept. */
  readonly texts: readonly string[];
  /** How its numbers are written. Two styles that read its texts differently, and nothing in the file that settles it: the first such row. */
  readonly style: NumberStyle | ReadsBothWays;
}

export interface NumberStyle {
  readonly decimal: '.' | ',';
  /** The mark between groups of three digits; null for none. */
  readonly group: string | null;
}

export interface ReadsBothWays {
  /** Data row from 1. */
  readonly row: number;
  readonly found: string;
  readonly settle: 'decimal' | 'group';
}

/** What a long computation asks and tells; core knows no clock and no signal. */
export interface Hooks {
  readonly cancelled: () => boolean;
  /** share: 0 to 1 of the whole. */
  readonly progress: (step: string, share: number) => void;
}
