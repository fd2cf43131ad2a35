import { type Declarations, isSetAside, plainNumberIn, withoutMarks } from '@core/index';
import type { Read } from '@core/protocol/plan';
import { possibleStyles } from './conventions';
import { type Split, split } from './split';

const detected = [',', ';', '\t', '|'] as const;
const sample = 400;

/** What was found out, or two delimiters that split the file equally well, with the first field on which they differ. */
export type Delimited =
  | { readonly delimiter: string }
  | { readonly tie: { readonly row: number; readonly column: string; readonly found: string } };

/**
 * Finds the delimiter together with the way numbers are written: the share of records with the usual number of fields, plus the share of their
 * fields that are numbers in some style which that delimiter allows.
 *
 * A file in which none of them divides anything is one of a single column. Equal scores: the one that gives more columns, else a tie.
 *
 * Example: "a;b" over "1,5;2" is delimited by semicolons, since "5;2" is no number.
 */
export function findDelimiter(text: string, read: Read, declared: Declarations): Delimited {
  const tried = detected.flatMap((delimiter) => {
    const table = split(text, delimiter, sample);
    const score = scoreOf(table, { read, delimiter, declared });
    return score === null ? [] : [{ delimiter, table, ...score }];
  });
  const [first, second] = tried.toSorted((a, b) => b.score - a.score || b.width - a.width);
  if (!first) return { delimiter: ',' };
  if (second && second.score === first.score && second.width === first.width) return { tie: placeOf(first.table) };
  return { delimiter: first.delimiter };
}

function placeOf(table: Split): { row: number; column: string; found: string } {
  return { row: 1, column: table.header[0] ?? '', found: table.records[0]?.[0] ?? '' };
}

interface Trial {
  readonly read: Read;
  readonly delimiter: string;
  readonly declared: Declarations;
}

function scoreOf(table: Split, trial: Trial): { score: number; width: number } | null {
  const records = [table.header, ...table.records];
  const counts = new Map<number, number>();
  for (const { length } of records) counts.set(length, (counts.get(length) ?? 0) + 1);
  const [usual] = [...counts].toSorted((a, b) => b[1] - a[1] || b[0] - a[0]);
  if (!usual || usual[0] < 2) return null;
  return { score: usual[1] / records.length + numericShare(table, trial), width: usual[0] };
}

function numericShare(table: Split, { read, delimiter, declared }: Trial): number {
  const readers = possibleStyles(read, delimiter).map(plainNumberIn);
  const reads = (text: string) => readers.some((plain) => plain(text) !== null);
  const fields = table.records.flat().filter((field) => !isSetAside(field, declared));
  if (fields.length === 0) return 0;
  return fields.filter((field) => withoutMarks(field, declared, reads) !== null).length / fields.length;
}
