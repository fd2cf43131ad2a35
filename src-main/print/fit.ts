import type { Table } from '@core/protocol/document';
import type { Desk } from './blocks';
import { FIRST, groupColumns, shareWidth, squeezeWidth, type Wish } from './columns';
import { INK, type Style } from './sheet';

/** How a table stands on the page. */
export interface Fit {
  readonly size: number;
  readonly wide: boolean;
  readonly groups: readonly Group[];
}

/** Columns side by side. Every group after the first is led by the first column again. */
export interface Group {
  readonly columns: readonly number[];
  readonly widths: readonly number[];
}

/** Widths of the texts, in points at size 1. */
interface Sizes {
  readonly wishes: readonly Wish[];
  /** widths[row][column] */
  readonly widths: readonly Float64Array[];
}

const SIZES = [7.7, 7.1, 6.6, 6.1] as const;
/** Between two columns, in sizes of the text. */
export const GUTTER = 1.25;
/** A column of numbers up to this many sizes wide is never broken; a word beyond it is. */
const UNBROKEN = 15;
/** What a column takes beyond its natural width where there is room, in points. */
const SPARE = 26;
/** Rows looked at to judge how often lines break. */
const LOOKED_AT = 300;

export function bodyStyle(size: number): Style {
  return { face: 'plain', size, leading: 1.38 * size, ink: INK };
}

export function headStyle(size: number): Style {
  return { face: 'plain-strong', size: 0.95 * size, leading: 1.28 * size, ink: INK };
}

/**
 * Finds the place of a table: in the text column if its rows hardly break there, else over the full measure, else smaller, and last in groups of columns.
 */
export function fitTable(desk: Desk, table: Table): Fit {
  const sizes = sizesOf(desk, table);
  const { column, full } = desk.sheet;
  const [largest] = SIZES;
  const tries: { size: number; width: number; lines: number }[] = [
    { size: largest, width: column, lines: 1 },
    { size: largest, width: column, lines: 1.35 },
    { size: largest, width: full, lines: 1.35 },
    { size: largest, width: full, lines: 2.2 },
    ...SIZES.slice(1).map((size) => ({ size, width: full, lines: 3 })),
    { size: SIZES.at(-1) as number, width: full, lines: Infinity },
  ];
  const columns = table.head.map((_, i) => i);
  for (const { size, width, lines } of tries) {
    const wishes = scaled(sizes.wishes, size);
    const room = width - gutters(columns.length, size);
    // A table that nearly fills its measure fills it; a small one is not torn apart.
    const natural = wishes.reduce((sum, wish) => sum + wish.natural, 0);
    const widths = shareWidth(wishes, room, natural > 0.6 * room ? Infinity : SPARE);
    if (widths !== null && linesInRow(sizes, widths, size) <= lines)
      return { size, wide: width === full, groups: [{ columns, widths }] };
  }
  return inGroups(sizes, SIZES[1], full);
}

function inGroups({ wishes }: Sizes, size: number, width: number): Fit {
  const asked = scaled(wishes, size);
  const gutter = GUTTER * size;
  const padded = asked.map((wish, i) => ({ ...wish, least: wish.least + (i === 0 ? 0 : gutter) }));
  const groups = groupColumns(padded, width).map((columns) => ({
    columns,
    room: width - gutters(columns.length, size),
    wishes: columns.map((i) => asked[i] as Wish),
  }));
  const firsts = groups.map(
    (group) => squeezeWidth(group.wishes.map(firstAtMost(FIRST * width)), group.room)[0] as number,
  );
  const first = Math.min(...firsts);
  return {
    size,
    wide: true,
    groups: groups.map(({ columns, room, wishes: [, ...others] }) => ({
      columns,
      widths: [first, ...(others.length === 0 ? [] : squeezeWidth(others, room - first))],
    })),
  };
}

function firstAtMost(most: number): (wish: Wish, i: number) => Wish {
  return (wish, i) =>
    i > 0 ? wish : { ...wish, natural: Math.min(wish.natural, most), least: Math.min(wish.least, most) };
}

function gutters(columns: number, size: number): number {
  return Math.max(0, columns - 1) * GUTTER * size;
}

function scaled(wishes: readonly Wish[], size: number): Wish[] {
  return wishes.map(({ natural, least, breadth }) => ({ natural: natural * size, least: least * size, breadth }));
}

/** Mean over rows of the lines in the row's fullest cell, by the areas of the texts: breaking each would take as long as printing. */
function linesInRow({ widths: texts }: Sizes, widths: readonly number[], size: number): number {
  const step = Math.max(1, Math.floor(texts.length / LOOKED_AT));
  let total = 0;
  let rows = 0;
  for (let r = 0; r < texts.length; r += step) {
    let most = 1;
    for (const [c, width] of (texts[r] as Float64Array).entries())
      most = Math.max(most, Math.ceil((width * size) / (widths[c] as number) - 1e-9));
    total += most;
    rows += 1;
  }
  return rows === 0 ? 1 : total / rows;
}

function sizesOf({ pen }: Desk, table: Table): Sizes {
  const body = bodyStyle(1);
  const head = headStyle(1);
  const widths = table.rows.map((row) =>
    Float64Array.from(table.head, (_, c) => pen.widthOf(row[c]?.text ?? '', body)),
  );
  const wishes = table.head.map(({ text, align, breadth = 1 }, c) => {
    const widest = widths.reduce((most, row) => Math.max(most, row[c] as number), 0);
    const word = pen.widestPiece(text, head);
    const unbroken = align === 'right' && widest <= UNBROKEN;
    const least = unbroken
      ? widest
      : Math.min(
          UNBROKEN,
          widestWord(table, c, widest, (cell) => pen.widestPiece(cell, body)),
        );
    return {
      natural: Math.max(widest, word, 0.6 * pen.widthOf(text, head)),
      least: Math.max(least, Math.min(UNBROKEN, word)),
      breadth: Math.max(breadth, 1e-3),
    };
  });
  return { wishes, widths };
}

function widestWord(table: Table, column: number, most: number, measure: (text: string) => number): number {
  if (most <= 4) return most;
  return table.rows.reduce((widest, row) => Math.max(widest, measure(row[column]?.text ?? '')), 0);
}
