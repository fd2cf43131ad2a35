/** A table as it is printed or shown: plain data, every text ready. */
export interface Table {
  readonly caption: string;
  readonly head: readonly ColumnHead[];
  /** The first cell of each row names the row. */
  readonly rows: readonly (readonly Cell[])[];
  readonly note?: string;
}

export interface ColumnHead {
  readonly text: string;
  readonly align: 'left' | 'right';
  /** Share of the width that the column would like, against the others; 1 if left out. */
  readonly breadth?: number;
}

/** value: what the result holds (null: undefined or text alone); text: as it is printed. */
export interface Cell {
  readonly value: number | string | boolean | null;
  readonly text: string;
}
