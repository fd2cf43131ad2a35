import { done, type Outcome, refuse } from '../protocol/outcome';
import type { SourceTable } from '../protocol/source';
import { labelKey } from './labels';
import type { Against } from './matrix';

/**
 * Pairs of used cells that a list of label pairs names, each once, as indices into the used cells, the smaller first.
 *
 * The list has two columns under a header; a pair in either order is one; a cell is no neighbour of its own; pairs with a cell that is left out are
 * left out. Refuses a list of fewer than two columns (`malformed-row`) and labels that no row has (`matrix-labels`).
 *
 * Example: "Elm,Fen" and "Fen,Elm" give one pair.
 */
export function neighbourPairs(
  table: SourceTable,
  { labels, used, at }: Against,
): Outcome<(readonly [number, number])[]> {
  const [from, to] = table.columns;
  if (!from || !to)
    return refuse('malformed-row', { file: table.file, row: 0, found: table.columns.length, expected: 2 }, at);
  const known = new Set(labels.map(labelKey));
  const unknown = [...new Set([...from.texts, ...to.texts])].filter((text) => !known.has(labelKey(text)));
  if (unknown.length > 0) return refuse('matrix-labels', { file: table.file, missing: [], unknown }, at);
  const index = new Map(used.map((row, g) => [labelKey(labels[row] as string), g] as const));
  const pairs = new Map<string, readonly [number, number]>();
  for (const [row, text] of from.texts.entries()) {
    const a = index.get(labelKey(text));
    const b = index.get(labelKey(to.texts[row] as string));
    if (a === undefined || b === undefined || a === b) continue;
    const pair = a < b ? ([a, b] as const) : ([b, a] as const);
    pairs.set(pair.join(), pair);
  }
  return done([...pairs.values()]);
}
