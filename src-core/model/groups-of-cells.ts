import type { Cells } from '../table/cells';
import { composed } from '../table/declarations';

/**
 * The group of each cell, numbered in the order of their first cells.
 *
 * by: label columns or any others; none: one group of all cells. Texts are compared in normal form C.
 */
export function groupsOfCells(by: readonly string[], cells: Pick<Cells, 'texts' | 'count'>): Int32Array {
  const columns = by.map((column) => cells.texts(column));
  const places = new Map<string, number>();
  return Int32Array.from({ length: cells.count }, (_, g) => {
    const key = JSON.stringify(columns.map((texts) => composed(texts[g] as string)));
    const known = places.get(key) ?? places.size;
    places.set(key, known);
    return known;
  });
}
