import type { OmissionCode, Result } from './result';

/** The cells of a plan before any fit: what is used, what is not and why. One entry a data row left after joining. */
export interface DataLook {
  readonly columns: readonly string[];
  readonly rows: readonly CellLook[];
  readonly used: number;
  readonly files: readonly { readonly name: string; readonly sha256: string }[];
  readonly unmatched: Result['data']['unmatched'];
}

export interface CellLook {
  /** Data row from 1. */
  readonly row: number;
  readonly label: string;
  /** Of each label column. */
  readonly key: readonly string[];
  readonly outcome: number | null;
  readonly size: number | null;
  readonly error: number | null;
  readonly reason: { readonly code: OmissionCode; readonly column: string; readonly text: string } | null;
}

/** What is known of the rows of a `DataLook`, column by column: of many rows it crosses between processes far sooner than row by row. */
export interface PackedLook extends Omit<DataLook, 'rows'> {
  readonly packed: {
    readonly labels: readonly string[];
    /** Texts of each label column. */
    readonly keys: readonly (readonly string[])[];
    /** NaN where there is no value. */
    readonly outcome: Float64Array;
    readonly size: Float64Array;
    readonly error: Float64Array;
    /** Of the rows left out, with their places from 0. */
    readonly reasons: readonly (readonly [number, NonNullable<CellLook['reason']>])[];
  };
}

/** Rows must be all data rows in their order, as `lookAtCells` gives them. */
export function packLook({ rows, ...look }: DataLook): PackedLook {
  const numbers = (of: (row: CellLook) => number | null) => Float64Array.from(rows, (row) => of(row) ?? Number.NaN);
  return {
    ...look,
    packed: {
      labels: rows.map(({ label }) => label),
      keys: (rows[0]?.key ?? []).map((_, k) => rows.map(({ key }) => key[k] as string)),
      outcome: numbers(({ outcome }) => outcome),
      size: numbers(({ size }) => size),
      error: numbers(({ error }) => error),
      reasons: rows.flatMap(({ reason }, i) => (reason === null ? [] : [[i, reason] as const])),
    },
  };
}

/** The look that was packed. */
export function unpackLook({ packed, ...look }: PackedLook): DataLook {
  const reasons = new Map(packed.reasons);
  const value = (column: Float64Array, i: number) => (Number.isNaN(column[i]) ? null : (column[i] as number));
  const rows = packed.labels.map((label, i) => ({
    row: i + 1,
    label,
    key: packed.keys.map((texts) => texts[i] as string),
    outcome: value(packed.outcome, i),
    size: value(packed.size, i),
    error: value(packed.error, i),
    reason: reasons.get(i) ?? null,
  }));
  return { ...look, rows };
}
