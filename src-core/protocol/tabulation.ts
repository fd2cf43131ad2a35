import type { Disclosure, Range, Read } from './plan';

/** Everything that determines a cell table built from microdata (steelyard-tabulation/1), in its normal form. */
export interface Tabulation {
  format: 'steelyard-tabulation/1';
  title: string;
  microdata: Microdata;
  outcome: TabulatedOutcome | TabulatedOutcome[];
  cells: CellColumn[];
  admit: Admit[];
  variance: 'linearised' | 'replicates';
  onePsuStrata: 'refuse' | 'around-overall-mean' | { merge: Record<string, string> };
  disclosure: Disclosure | null;
}

export interface Microdata {
  file: string | string[];
  read: Read;
  weight: string | null;
  stratum: string | null;
  psu: string | null;
  psusInPopulation: string | null;
  replicates: Replicates | null;
}

export type ReplicateRule =
  | 'balanced-half'
  | 'fay'
  | 'delete-one'
  | 'delete-one-per-stratum'
  | 'bootstrap'
  | 'successive-difference'
  | 'provider';

export interface Replicates {
  columns: string[];
  rule: ReplicateRule;
  perReplicate: (number | string)[] | null;
  overall: number | null;
  around: 'full-sample' | 'replicate-mean';
}

export type TabulatedOutcome =
  | { kind: 'mean'; of: string }
  | { kind: 'share'; of: string; is: (string | number)[] }
  | { kind: 'ratio'; of: string; over: string }
  | { kind: 'rate'; of: string; exposure: string; per: number };

/** Bands are [a, b) between neighbouring limits. */
export interface CellColumn {
  column: string;
  bands: number[] | null;
}

export interface Admit {
  column: string;
  is: (string | number)[] | Range;
  because: string;
}
