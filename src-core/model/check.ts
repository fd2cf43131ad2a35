import { problem } from '../protocol/outcome';
import type { Plan } from '../protocol/plan';
import type { Problem } from '../protocol/problems';
import type { Cells } from '../table/cells';

/**
 * Clusters that cut a block of correlated cells, for the first such part: its errors would not be independent between clusters.
 *
 * Refuses by `cluster-cuts-block` at the key of the clustering columns, naming the first block cut.
 *
 * Example: clusters by district where a shock is shared by year.
 */
export function clustersThatCut(plan: Plan, cells: Cells): Problem[] {
  const { inference, variance } = plan;
  if (inference.kind !== 'clustered' && inference.kind !== 'wild') return [];
  const ways: readonly [string[], string][] = [[inference.by, '/inference/by']];
  const also =
    inference.kind === 'clustered' && inference.alsoBy ? [[inference.alsoBy, '/inference/alsoBy'] as const] : [];
  return [...ways, ...also].flatMap(([by, at]) => {
    const clusters = keysOf(by, cells);
    for (const part of variance.parts) {
      const partBy = part.kind === 'shared' ? part.by : 'correlation' in part ? (part.correlation?.by ?? null) : null;
      if (partBy === null) continue;
      const cut = firstCut(clusters, keysOf(partBy, cells));
      if (cut < 0) continue;
      const group = Object.fromEntries(partBy.map((column) => [column, cells.texts(column)[cut] as string]));
      return [problem('cluster-cuts-block', { by, part: part.kind, partBy, group }, at)];
    }
    return [];
  });
}

function keysOf(by: readonly string[], cells: Cells): string[] {
  const columns = by.map((column) => cells.texts(column));
  return Array.from({ length: cells.count }, (_, g) => JSON.stringify(columns.map((texts) => texts[g])));
}

/** The first cell of a block that lies in another cluster than an earlier cell of the block; -1 where there is none. */
function firstCut(clusters: readonly string[], blocks: readonly string[]): number {
  const clusterOf = new Map<string, string>();
  for (const [g, block] of blocks.entries()) {
    const known = clusterOf.get(block);
    if (known !== undefined && known !== clusters[g]) return g;
    clusterOf.set(block, clusters[g] as string);
  }
  return -1;
}
