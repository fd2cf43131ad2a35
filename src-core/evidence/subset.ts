import type { Fitted } from '../estimate/fitted';
import { takeSquare } from '../model/variance-part';
import { takeRows } from '../numbers/decimals';
import type { Cells, NumberColumn } from '../table/cells';

/** Some of the cells, or all in another order: every vector taken at the places `rows` (indices from 0). */
export function takeCells(cells: Cells, rows: readonly number[]): Cells {
  const some = (values: Float64Array | null): Float64Array | null => values && take(values, rows);
  return {
    ...cells,
    count: rows.length,
    rows: pick(cells.rows, rows),
    labels: pick(cells.labels, rows),
    outcome: takeRows(cells.outcome, rows),
    size: some(cells.size),
    effectiveSize: some(cells.effectiveSize),
    error: some(cells.error),
    ...(cells.addedHalves && { addedHalves: take(cells.addedHalves, rows) }),
    counts: some(cells.counts),
    exposure: some(cells.exposure),
    numbers: (column) => takeNumbers(cells.numbers(column), rows),
    texts: (column) => pick(cells.texts(column), rows),
    matrices: new Map([...cells.matrices].map(([file, square]) => [file, takeSquare(square, rows)])),
    neighbours: cells.neighbours && takePairs(cells.neighbours, rows),
    limited: null,
  };
}

function takePairs(pairs: NonNullable<Cells['neighbours']>, rows: readonly number[]): (readonly [number, number])[] {
  const place = new Map(rows.map((row, g) => [row, g]));
  return pairs.flatMap(([a, b]): [number, number][] => {
    const [first, second] = [place.get(a), place.get(b)];
    return first === undefined || second === undefined ? [] : [[first, second]];
  });
}

function takeNumbers(column: NumberColumn, rows: readonly number[]): NumberColumn {
  return {
    name: column.name,
    values: takeRows(column.values, rows),
    texts: pick(column.texts, rows),
    status: pick(column.status, rows),
  };
}

export function takeDesign(design: Fitted['design'], rows: readonly number[]): Fitted['design'] {
  return { ...design, columns: design.columns.map((column) => takeRows(column, rows)) };
}

export function take(values: Float64Array, rows: readonly number[]): Float64Array {
  const taken = new Float64Array(rows.length);
  for (let g = 0; g < taken.length; g++) taken[g] = values[rows[g] as number] as number;
  return taken;
}

/** The places that are not among `gone`, in order. */
export function placesWithout(count: number, gone: ReadonlySet<number>): number[] {
  return Array.from({ length: count }, (_, g) => g).filter((g) => !gone.has(g));
}

function pick<T>(values: readonly T[], rows: readonly number[]): T[] {
  return rows.map((row) => values[row] as T);
}
