import type { Cell, ColumnHead, Table } from '../protocol/document';
import { number } from '../words/numbers';

/** The numbers of a figure as a table: the first column names the row. */
export function dataTable(of: {
  readonly caption: string;
  readonly head: readonly string[];
  readonly rows: readonly (readonly (string | number | null)[])[];
}): Table {
  return {
    caption: of.caption,
    head: of.head.map((text, i): ColumnHead => ({ text, align: i === 0 ? 'left' : 'right' })),
    rows: of.rows.map((row) => row.map(cellOf)),
  };
}

function cellOf(value: string | number | null): Cell {
  return { value, text: typeof value === 'string' ? value : number(value, { digits: 5 }) };
}
