import { componentsOf } from '../numbers/components';
import type { Cells } from '../table/cells';

/** Groups of cells whose errors may go together. */
export interface Clusters {
  readonly by: readonly string[];
  /** Index of each cell's cluster, length G. */
  readonly clusterOf: Int32Array;
  readonly count: number;
  /** The first cell of each cluster, by index. */
  readonly first: readonly number[];
}

/**
 * The clusters that some columns make: cells with the same texts in all of them.
 *
 * by: columns of the table, at least one; none of them has a gap in a used cell. Clusters stand in the order of their texts, whatever the order of
 * the rows: draws go to the same clusters.
 *
 * Example: by `district` on 88 cells of 14 districts: 14 clusters.
 */
export function clustersBy(by: readonly string[], cells: Pick<Cells, 'count' | 'texts'>): Clusters {
  const columns = by.map((column) => cells.texts(column));
  const keys = Array.from({ length: cells.count }, (_, g) => JSON.stringify(columns.map((texts) => texts[g])));
  return { by, ...numbered(keys, [...new Set(keys)].sort()) };
}

/** The clusters of both groupings at once: cells that share a cluster of each. */
export function crossed(a: Clusters, b: Clusters): Clusters {
  const keys = Array.from(a.clusterOf, (cluster, g) => cluster * b.count + (b.clusterOf[g] as number));
  return { by: [...new Set([...a.by, ...b.by])], ...numbered(keys) };
}

/** Clusters from blocks of cells that go together; blocks that share a cell are one cluster, a cell outside every block is its own. */
export function clustersOfBlocks(cells: number, blocks: readonly ArrayLike<number>[]): Clusters {
  return { by: [], ...numbered(Array.from(componentsOf(cells, blocks))) };
}

/** The texts that name a cluster, by column. */
export function groupNamed(
  { by, first }: Clusters,
  cluster: number,
  cells: Pick<Cells, 'texts'>,
): Record<string, string> {
  const cell = first[cluster] as number;
  return Object.fromEntries(by.map((column) => [column, cells.texts(column)[cell] as string]));
}

/** order: the keys, each once; by first sight where none is given. */
function numbered<Key>(keys: readonly Key[], order: readonly Key[] = [...new Set(keys)]): Omit<Clusters, 'by'> {
  const places = new Map(order.map((key, cluster) => [key, cluster]));
  const clusterOf = Int32Array.from(keys, (key) => places.get(key) as number);
  const first = order.map(() => -1);
  for (const [g, cluster] of clusterOf.entries()) if ((first[cluster] as number) < 0) first[cluster] = g;
  return { clusterOf, count: order.length, first };
}
