import type { CellLook, DataLook } from '@core/protocol/data-look';
import { type Presence, presenceOf } from '@core/words/screen-data';

/** One ruled line of the register: a block, and its cells in the order of the columns; null where there is no such row. */
export interface RegisterLine {
  readonly block: string;
  readonly cells: readonly ({ readonly label: string; readonly presence: Presence } | null)[];
  readonly present: number;
  readonly all: number;
}

export interface Register {
  /** What stands over the columns. */
  readonly heads: readonly string[];
  readonly lines: readonly RegisterLine[];
  /** Present in each column, and rows in each. */
  readonly totals: readonly { readonly present: number; readonly all: number }[];
}

/** Cells of one line where a single label column makes no blocks. */
const LINE = 20;
/** So many columns at most: a second label that differs in every row makes no columns. */
const WIDEST = 80;

/**
 * The attendance of a table: lines by the first label column, columns by the others; with a single label column, none, or too many columns, lines of
 * twenty rows in the order of the file.
 */
export function registerOf({ rows }: DataLook): Register {
  const byBlock =
    rows.every(({ key }) => key.length >= 2) && new Set(rows.map((row) => placeByKey(row).head)).size <= WIDEST;
  const places = rows.map((row) => (byBlock ? placeByKey(row) : placeInFile(row)));
  const heads = [...new Set(places.map(({ head }) => head))];
  if (!byBlock || heads.every((head) => /^\d+$/.test(head))) heads.sort((a, b) => Number(a) - Number(b));
  const columnOf = new Map(heads.map((head, i) => [head, i]));
  const lines = new Map<string, RegisterLine['cells'][number][]>();
  for (const [i, row] of rows.entries()) {
    const { block, head } = places[i] as (typeof places)[number];
    const line = lines.get(block) ?? heads.map(() => null);
    lines.set(block, line);
    line[columnOf.get(head) as number] = { label: row.label, presence: presenceOf(row) };
  }
  const ruled = [...lines].map(([block, cells]) => ({ block, cells, ...totalOf(cells) }));
  return {
    heads: byBlock ? heads : heads.map(() => ''),
    lines: ruled,
    totals: heads.map((_, c) => totalOf(ruled.map(({ cells }) => cells[c] ?? null))),
  };
}

function placeByKey({ key }: CellLook): { readonly block: string; readonly head: string } {
  return { block: key[0] as string, head: key.slice(1).join(' · ') };
}

function placeInFile({ row }: CellLook): { readonly block: string; readonly head: string } {
  const line = Math.floor((row - 1) / LINE);
  return { block: `${line * LINE + 1}–${(line + 1) * LINE}`, head: String((row - 1) % LINE) };
}

function totalOf(cells: RegisterLine['cells']): { readonly present: number; readonly all: number } {
  const own = cells.filter((cell) => cell !== null);
  return { present: own.filter(({ presence }) => presence === 'present').length, all: own.length };
}
