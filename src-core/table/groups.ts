import type { Column } from './column';
import { composed } from './declarations';

/** The group of each row as a text that tells groups apart, null where a grouping column has a gap. No columns: one group. */
export function groupsOf(rows: number, by: readonly Column[]): (string | null)[] {
  const gaps = by.map((column) => column.categoryGaps());
  return Array.from({ length: rows }, (_, row) =>
    gaps.some((column) => column[row] !== null)
      ? null
      : JSON.stringify(by.map(({ texts }) => composed(texts[row] as string))),
  );
}
