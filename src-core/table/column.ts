import { type Decimals, fromPairs } from '../numbers/decimals';
import { type Pair, ZERO } from '../numbers/double-double';
import type { Read, Status } from '../protocol/plan';
import type { OmissionCode } from '../protocol/result';
import type { NumberStyle, ReadsBothWays, SourceColumn } from '../protocol/source';
import { comparable, type Declarations, declarationsFor, withoutMarks } from './declarations';
import { type Ends, intervalEnds } from './interval';
import { numberReaderIn } from './number-text';

/** Why a value is not there for a fit. */
export type Gap = Exclude<OmissionCode, 'omit-rule' | 'not-above-zero'>;

/** What makes a derived value undefined: a division by zero, or a result beyond the range of a double. */
export interface Undefined {
  /** Pointer to the place of the plan that asks for the impossible. */
  readonly at: string;
  readonly file: string;
  readonly row: number;
  readonly column: string;
  readonly found: string;
  readonly transform: string;
}

/** A column read as numbers; every vector and row index is by data row of the plan's own file, from 0. */
export interface Numbers {
  /** Missing (NaN) where there is a gap without a number, and where the text is wrong. */
  readonly values: Decimals;
  readonly status: readonly Status[];
  readonly gaps: readonly (Gap | null)[];
  /** Rows whose text is neither number nor declared. */
  readonly wrong: readonly number[];
  /** Ends of the values known as intervals only. */
  readonly ends: ReadonlyMap<number, Ends>;
  readonly undefinedAt: ReadonlyMap<number, Undefined>;
}

/** A column of the file, of a joined file, or a derived one, row by row of the plan's own file. */
export interface Column {
  readonly name: string;
  /** The file that holds it, as the plan names it; for a derived column the plan's own. */
  readonly file: string;
  /** Pointer to the place of the plan that names the file. */
  readonly fileAt: string;
  readonly derived: boolean;
  readonly texts: readonly string[];
  /** Its row in `file`, from 1. */
  readonly rowInFile: (row: number) => number;
  readonly readsBothWays: ReadsBothWays | null;
  readonly numbers: () => Numbers;
  /** Gaps where the column stands for categories: texts that are no numbers are no fault there. */
  readonly categoryGaps: () => readonly (Gap | null)[];
  /** The text of a gap: what stands in the column, or in the ingredient that a derived value lacks. */
  readonly gapText: (row: number) => string;
}

/**
 * A column of a file, its rows brought to those of the plan's own file.
 *
 * rows: for each row of the plan's file the row of the column's file, -1 where a join found none; null where they are the same.
 * Statuses and missing codes are compared as text before numbers are read; true-zero and rounds-to-zero stand for 0; a status after a number
 * keeps the number; an unmatched row is missing, with an empty text.
 */
export function columnOf(of: {
  readonly source: SourceColumn;
  readonly read: Read;
  readonly file: string;
  readonly fileAt: string;
  readonly rows: Int32Array | null;
}): Column {
  const { source, read, file, fileAt, rows } = of;
  const texts = rows === null ? source.texts : Array.from(rows, (row) => source.texts[row] ?? '');
  const unmatched = (row: number) => rows !== null && (rows[row] as number) < 0;
  const declared = declarationsFor(source.name, read);
  const bothWays = 'settle' in source.style ? source.style : null;
  return {
    name: source.name,
    file,
    fileAt,
    derived: false,
    texts,
    rowInFile: (row) => (rows === null ? row : (rows[row] as number)) + 1,
    readsBothWays: bothWays,
    numbers: once(() =>
      numbersOf(texts, { declared, unmatched, style: 'settle' in source.style ? null : source.style }),
    ),
    categoryGaps: once(() => texts.map((text, row) => (unmatched(row) ? 'missing' : categoryGap(text, declared)))),
    gapText: (row) => texts[row] ?? '',
  };
}

/** Makes a function that computes its value at the first call. */
export function once<T>(make: () => T): () => T {
  let made: { readonly value: T } | null = null;
  return () => {
    made ??= { value: make() };
    return made.value;
  };
}

const gapOfStatus: { readonly [S in Status]: Gap | null } = {
  value: null,
  'true-zero': null,
  'rounds-to-zero': null,
  provisional: null,
  estimated: null,
  'low-reliability': null,
  'suppressed-confidential': 'suppressed-confidential',
  'suppressed-unreliable': 'suppressed-unreliable',
  'suppressed-unknown': 'suppressed-unknown',
  'not-collected': 'not-collected',
  'not-applicable': 'not-applicable',
  interval: 'interval',
  blank: 'blank',
};

function categoryGap(text: string, declared: Declarations): Gap | null {
  const key = comparable(text);
  if (declared.missing.has(key)) return 'missing';
  const status = declared.statuses.get(key);
  return status === undefined ? (key === '' ? 'blank' : null) : gapOfStatus[status];
}

interface Reading {
  readonly value: Pair | null;
  readonly status: Status;
  readonly gap: Gap | null;
}

const wrong = 'wrong';

interface HowToRead {
  readonly declared: Declarations;
  readonly unmatched: (row: number) => boolean;
  /** null: the column reads both ways, so that nothing can be read. */
  readonly style: NumberStyle | null;
}

function numbersOf(texts: readonly string[], { declared, unmatched, style }: HowToRead): Numbers {
  const read = style === null ? () => null : numberReaderIn(style);
  const readings = texts.map((text, row) => (unmatched(row) ? gone('missing') : readingOf(text, declared, read)));
  const ends = new Map<number, Ends>();
  for (const [row, reading] of readings.entries())
    if (reading !== wrong && reading.gap === 'interval') ends.set(row, intervalEnds(texts[row] as string, read));
  return {
    values: fromPairs(readings.map((reading) => (reading === wrong ? null : reading.value))),
    status: readings.map((reading) => (reading === wrong ? 'value' : reading.status)),
    gaps: readings.map((reading) => (reading === wrong ? null : reading.gap)),
    wrong: style === null ? [] : [...readings.keys()].filter((row) => readings[row] === wrong),
    ends,
    undefinedAt: new Map(),
  };
}

function gone(gap: Gap): Reading {
  return { value: null, status: gap === 'missing' ? 'blank' : gap, gap };
}

function readingOf(text: string, declared: Declarations, read: (text: string) => Pair | null): Reading | typeof wrong {
  const key = comparable(text);
  if (declared.missing.has(key)) return gone('missing');
  const status = declared.statuses.get(key);
  if (status === 'true-zero' || status === 'rounds-to-zero') return { value: ZERO, status, gap: null };
  const gap = status === undefined ? (key === '' ? 'blank' : null) : gapOfStatus[status];
  if (gap !== null) return gone(gap);
  const direct = read(key);
  if (direct) return { value: direct, status: status ?? 'value', gap: null };
  const bare = declared.after.length === 0 ? null : withoutMarks(key, declared, (rest) => read(rest) !== null);
  if (bare === null) return wrong;
  const kept = bare.status ?? 'value';
  return { value: read(bare.text), status: kept, gap: gapOfStatus[kept] };
}
