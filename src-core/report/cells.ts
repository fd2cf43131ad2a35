import type { Block, Cell, ColumnHead } from '../protocol/document';
import type { CellResult, Result } from '../protocol/result';
import { definitions } from '../words/definitions';
import { captions, headings, heads } from '../words/headings';
import { number, percent, sizeText } from '../words/numbers';
import { cellsNote } from '../words/remarks';
import { heading, left, num, right, table, valued, words } from './blocks';

/** An appendix that lists every cell would be a book: the rest are in the file of cells. */
const MOST_CELLS = 40;

/** The cells that move the fit most; all of them where they are few. */
export function cellsAppendix(result: Result): Block[] {
  const { cells } = result;
  if (cells.length === 0) return [];
  const shown = Math.min(MOST_CELLS, cells.length);
  return [
    heading(2, headings.appendixCells),
    ...cellTable(result, { caption: captions.cells(shown, cells.length), most: MOST_CELLS, full: true }),
  ];
}

interface Column {
  readonly head: ColumnHead;
  readonly cell: (cell: CellResult) => Cell;
}

/** The cells that move the fit most, the largest move first; all in data order where none is left out. */
export function cellTable(
  result: Result,
  of: { readonly caption: string; readonly most: number; readonly full?: boolean },
): Block[] {
  const { cells } = result;
  const order = [...cells].sort((a, b) => moves(b) - moves(a));
  const kept = new Set(order.slice(0, of.most));
  // A table of all cells keeps the order of the data.
  const rows = kept.size === cells.length ? cells : order.slice(0, of.most);
  const columns = columnsOf(result, of.full === true);
  return table(
    {
      caption: of.caption,
      head: [left(result.plan.roles.label === null ? heads.row : heads.cell, 2), ...columns.map(({ head }) => head)],
      rows: rows.map((cell) => [words(cell.label), ...columns.map((column) => column.cell(cell))]),
      ...(of.full === true ? { note: cellsNote(rows.length, cells.length) } : {}),
    },
    of.full === true ? undefined : [definitions.cook],
  );
}

/** Undefined distances come last, then by weight. */
function moves({ cookDistance, weightShare }: CellResult): number {
  return cookDistance ?? weightShare * 1e-9;
}

function columnsOf({ cells, plan }: Result, full: boolean): Column[] {
  const digits = valueDecimals(cells);
  const value = (text: string, of: (cell: CellResult) => number | null, as: Parameters<typeof num>[1]): Column => ({
    head: right(text),
    cell: (cell) => num(of(cell), as),
  });
  const sized = cells.some(({ size }) => size !== null);
  const shrunken = full && cells.some((cell) => cell.shrunken !== null);
  return [
    ...(sized ? [{ head: right(heads.size), cell: (c: CellResult) => valued(c.size, sizeText(c.size)) }] : []),
    ...(full && plan.roles.designEffect !== null
      ? [
          {
            head: right(heads.effectiveSize),
            cell: (c: CellResult) => valued(c.effectiveSize, sizeText(c.effectiveSize)),
          },
        ]
      : []),
    value(heads.observed, (c) => c.observed, { decimals: digits }),
    value(heads.fitted, (c) => c.fitted, { decimals: digits }),
    ...(shrunken
      ? [
          value(heads.shrunken, (c) => c.shrunken, { decimals: digits }),
          value(heads.rmse, (c) => (c.mse === null ? null : Math.sqrt(c.mse)), { digits: 3 }),
        ]
      : []),
    value(heads.errorDeviation, (c) => Math.sqrt(c.variance), { digits: 3 }),
    value(heads.studentised, (c) => c.studentisedWithout, { decimals: 2 }),
    value(heads.leverage, (c) => c.leverage, { decimals: 3 }),
    { head: right(heads.weightShare), cell: (c) => valued(c.weightShare, percent(c.weightShare)) },
    value(heads.cook, (c) => c.cookDistance, { decimals: 3 }),
  ];
}

/** Decimals that show three digits of a typical residual. */
function valueDecimals(cells: readonly CellResult[]): number {
  const sizes = cells.map(({ residual }) => Math.abs(residual)).sort((a, b) => a - b);
  const typical = sizes[Math.floor(sizes.length / 2)] ?? 0;
  const text = number(typical === 0 ? 1 : typical, { digits: 3 });
  const decimals = text.split('.')[1]?.length ?? 0;
  return Math.min(6, decimals);
}
