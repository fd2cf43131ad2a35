import { type Declarations, groupMarks, isSetAside, plainNumberIn, trimmed, withoutMarks } from '@core/index';
import type { Read } from '@core/protocol/plan';
import type { NumberStyle, ReadsBothWays } from '@core/protocol/source';

/** A column's texts with what the plan declares of them. */
export interface ColumnTexts {
  readonly texts: readonly string[];
  readonly declared: Declarations;
}

/**
 * The styles in which a file may write its numbers: as stated, a comma-delimited file with decimal points and no group mark unless told otherwise,
 * else every pair of marks.
 *
 * Example: with the delimiter ";" and nothing stated, both decimal marks with every group mark.
 */
export function possibleStyles(read: Read, delimiter: string): readonly NumberStyle[] {
  const comma = delimiter === ',';
  const decimals: readonly ('.' | ',')[] =
    read.decimal !== null ? [read.decimal] : comma ? [read.group === '.' ? ',' : '.'] : ['.', ','];
  const groups: readonly (string | null)[] =
    read.group === 'none' || (read.group === null && comma)
      ? [null]
      : read.group === null
        ? [null, ...groupMarks]
        : [read.group];
  return decimals.flatMap((decimal) =>
    groups.filter((group) => group !== decimal && group !== delimiter).map((group) => ({ decimal, group })),
  );
}

/** Styles that read as many of a column's texts as any other does, in classes that read all of them alike. */
interface Candidates {
  readonly classes: readonly (readonly NumberStyle[])[];
  /** At least half of the texts that are not set aside are numbers. */
  readonly numeric: boolean;
  /** Where two classes part first. */
  readonly row: number;
}

/**
 * How the numbers of each column are written. A column that fits two conventions takes the one that the other columns settle.
 *
 * Blanks, missing codes and statuses are set aside first, and footnotes taken off. A column without numbers takes the file's own decimal mark.
 * A true tie is handed on with its first row.
 *
 * Example: beside a column of "12,5", a column of "1.204" is read as thousands.
 */
export function stylesOf(
  columns: readonly ColumnTexts[],
  styles: readonly NumberStyle[],
): (NumberStyle | ReadsBothWays)[] {
  const only = styles.length === 1 ? styles[0] : undefined;
  if (only !== undefined) return columns.map(() => only);
  const candidates = columns.map((column) => candidatesOf(column, styles));
  const settled = candidates.flatMap(({ classes, numeric }) => (numeric && classes.length === 1 ? classes : []));
  const decimals = agreed(settled.map((like) => agreed(like.map((style) => style.decimal))));
  // A column without group marks says nothing about them.
  const groups = agreed(settled.map((like) => agreed(like.map((style) => style.group)) ?? undefined));
  return candidates.map(({ classes, row }, c) => {
    const left = narrowed(narrowed(classes, 'decimal', decimals), 'group', groups);
    const [like] = left;
    if (left.length === 1 && like) return simplest(like, decimals ?? '.');
    return { row: row + 1, found: columns[c]?.texts[row] ?? '', settle: settlerOf(left) };
  });
}

/** The key whose statement would leave fewer classes: the decimal mark, unless every class can have either. */
function settlerOf(classes: Candidates['classes']): ReadsBothWays['settle'] {
  const tells = (['.', ','] as const).some(
    (decimal) => !classes.every((like) => like.some((style) => style.decimal === decimal)),
  );
  return tells ? 'decimal' : 'group';
}

/** The one value that all hold who hold any; undefined where none does or two differ. */
function agreed<T>(values: readonly (T | undefined)[]): T | undefined {
  const [first, ...others] = values.filter((value) => value !== undefined);
  return others.every((value) => value === first) ? first : undefined;
}

/** The classes that hold to what is settled; all of them where none or several do. */
function narrowed(
  classes: Candidates['classes'],
  key: 'decimal' | 'group',
  settled: string | null | undefined,
): Candidates['classes'] {
  if (settled === undefined || classes.length === 1) return classes;
  const holding = classes.filter((like) => like.some((style) => style[key] === settled));
  return holding.length === 0 ? classes : holding;
}

function simplest(like: readonly NumberStyle[], decimal: string): NumberStyle {
  const own = like.filter((style) => style.decimal === decimal);
  const [first] = (own.length > 0 ? own : like).toSorted((a, b) => Number(a.group !== null) - Number(b.group !== null));
  return first as NumberStyle;
}

const bareDigits = /^[+\-\u2212]?\d+$/;

function candidatesOf({ texts, declared }: ColumnTexts, styles: readonly NumberStyle[]): Candidates {
  const present = new Set<string | null>(groupMarks.filter((mark) => texts.some((text) => text.includes(mark))));
  const tried = styles.filter(
    ({ group }) => group === null || present.has(group) || styles.every((s) => s.group !== null),
  );
  const readers = tried.map((style) => readingIn(style, declared));
  const counts = tried.map(() => 0);
  const telling: number[] = [];
  let plain = 0;
  let others = 0;
  for (const [row, text] of texts.entries()) {
    if (bareDigits.test(trimmed(text))) plain++;
    else if (!isSetAside(text, declared)) {
      let reads = false;
      for (const [s, reading] of readers.entries()) {
        if (reading(text) === null) continue;
        counts[s] = (counts[s] as number) + 1;
        reads = true;
      }
      if (reads) telling.push(row);
      else others++;
    }
  }
  const most = Math.max(...counts);
  const best = [...tried.keys()].filter((s) => counts[s] === most);
  const { classOf, row } = parted(
    best.map((s) => readers[s] as Reading),
    texts,
    telling,
  );
  const classes = [...new Set(classOf)].map((id) =>
    best.filter((_, b) => classOf[b] === id).map((s) => tried[s] as NumberStyle),
  );
  return { classes, numeric: most + plain >= others && most > 0, row };
}

type Reading = (text: string) => string | null;

function readingIn(style: NumberStyle, declared: Declarations): Reading {
  const plain = plainNumberIn(style);
  if (declared.after.length === 0) return plain;
  return (text) => {
    const bare = withoutMarks(text, declared, (rest) => plain(rest) !== null);
    return bare === null ? null : plain(bare.text);
  };
}

/** Parts readers that read some text differently; row: the first such text. */
function parted(
  readers: readonly Reading[],
  texts: readonly string[],
  rows: readonly number[],
): { classOf: number[]; row: number } {
  let classOf = readers.map(() => 0);
  let first = -1;
  for (const row of rows) {
    const readings = readers.map((reading) => reading(texts[row] as string));
    if (readings.every((reading) => reading === readings[0])) continue;
    if (first < 0) first = row;
    const keys = readings.map((reading, r) => `${classOf[r]} ${reading}`);
    classOf = keys.map((key) => keys.indexOf(key));
  }
  return { classOf, row: Math.max(first, 0) };
}
