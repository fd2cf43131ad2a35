import { problem } from '../protocol/outcome';
import type { Part, Plan } from '../protocol/plan';
import type { Problem, Troubles } from '../protocol/problems';
import type { Cells } from '../table/cells';

/**
 * Clusters that cut a block of correlated cells, for the first such part of the structure or of the target's own: errors, or weighted residuals, would
 * not be independent between clusters.
 *
 * Refuses by `cluster-cuts-block` at the key of the clustering columns, naming the first block cut; for a matrix, the label of a cell that it ties to
 * another cluster.
 *
 * Example: clusters by district where a shock is shared by year.
 */
export function clustersThatCut(plan: Pick<Plan, 'inference' | 'variance' | 'target'>, cells: Cells): Problem[] {
  const { inference, variance, target } = plan;
  const parts = [...variance.parts, ...(typeof target === 'string' ? [] : target.parts)];
  if (inference.kind !== 'clustered' && inference.kind !== 'wild') return [];
  const ways: readonly [string[], string][] = [[inference.by, '/inference/by']];
  const also =
    inference.kind === 'clustered' && inference.alsoBy ? [[inference.alsoBy, '/inference/alsoBy'] as const] : [];
  return [...ways, ...also].flatMap(([by, at]) => {
    const clusters = keysOf(by, cells);
    for (const part of parts) {
      const cut = cutBy(part, clusters, cells);
      if (cut) return [problem('cluster-cuts-block', { by, part: part.kind, ...cut }, at)];
    }
    return [];
  });
}

type Cut = Pick<Troubles['cluster-cuts-block'], 'partBy' | 'group'>;

function cutBy(part: Part, clusters: readonly string[], cells: Cells): Cut | null {
  if (part.kind === 'matrix') {
    const tied = firstTied(cells.matrices.get(part.file), clusters);
    return tied < 0 ? null : { partBy: [], group: { label: cells.labels[tied] as string } };
  }
  const partBy = part.kind === 'shared' ? part.by : 'correlation' in part ? (part.correlation?.by ?? null) : null;
  if (partBy === null) return null;
  const cut = firstCut(clusters, keysOf(partBy, cells));
  return cut < 0
    ? null
    : { partBy, group: Object.fromEntries(partBy.map((column) => [column, cells.texts(column)[cut] as string])) };
}

/** The first cell that a matrix ties to a cell of another cluster; -1 where there is none. */
function firstTied(matrix: Float64Array | undefined, clusters: readonly string[]): number {
  const count = clusters.length;
  if (!matrix) return -1;
  return clusters.findIndex((own, g) => clusters.some((other, i) => other !== own && matrix[g * count + i] !== 0));
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
