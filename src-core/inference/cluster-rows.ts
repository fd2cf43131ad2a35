import type { Clusters } from './clusters';
import type { Coordinates } from './coordinates';

/** A fit's coordinates with the cells of each cluster side by side. B clusters, k coefficients. */
export interface ClusterRows {
  readonly count: number;
  readonly terms: number;
  /** Rows of Q, cluster after cluster, k numbers each. */
  readonly basis: Float64Array;
  /** r~ in the same order. */
  readonly residuals: Float64Array;
  /** Where each cluster's rows begin, and after the last where they end: B + 1 entries. */
  readonly starts: Int32Array;
}

/** Puts the rows of each cluster side by side, in the order of the cells inside a cluster. */
export function clusterRows(
  { basis, residuals }: Pick<Coordinates, 'basis' | 'residuals'>,
  { count, clusterOf }: Pick<Clusters, 'count' | 'clusterOf'>,
): ClusterRows {
  const terms = basis.length;
  const starts = new Int32Array(count + 1);
  for (const cluster of clusterOf) starts[cluster + 1] = (starts[cluster + 1] as number) + 1;
  for (let b = 0; b < count; b++) starts[b + 1] = (starts[b + 1] as number) + (starts[b] as number);
  const next = starts.slice();
  const rows = new Float64Array(clusterOf.length * terms);
  const sorted = new Float64Array(clusterOf.length);
  for (let g = 0; g < clusterOf.length; g++) {
    const cluster = clusterOf[g] as number;
    const place = next[cluster] as number;
    next[cluster] = place + 1;
    sorted[place] = residuals[g] as number;
    for (let j = 0; j < terms; j++) rows[place * terms + j] = (basis[j] as Float64Array)[g] as number;
  }
  return { count, terms, basis: rows, residuals: sorted, starts };
}

/** The scores of all clusters as they are, B x k, row after row: Q_b' r~_b, summed in the order of the cells. */
export function plainScores(
  { basis, residuals }: Pick<Coordinates, 'basis' | 'residuals'>,
  { count, clusterOf }: Pick<Clusters, 'count' | 'clusterOf'>,
): Float64Array {
  const terms = basis.length;
  const scores = new Float64Array(count * terms);
  for (let g = 0; g < clusterOf.length; g++) {
    const at = (clusterOf[g] as number) * terms;
    const r = residuals[g] as number;
    for (let j = 0; j < terms; j++)
      scores[at + j] = (scores[at + j] as number) + ((basis[j] as Float64Array)[g] as number) * r;
  }
  return scores;
}

/** Q_b'Q_b y for every cluster, B x k, row after row. */
export function sharesOf(
  { basis }: Pick<Coordinates, 'basis'>,
  clusters: Pick<Clusters, 'count' | 'clusterOf'>,
  y: Float64Array,
): Float64Array {
  const along = new Float64Array(clusters.clusterOf.length);
  for (const [j, column] of basis.entries()) {
    const share = y[j] as number;
    if (share === 0) continue;
    for (let g = 0; g < along.length; g++) along[g] = (along[g] as number) + share * (column[g] as number);
  }
  return plainScores({ basis, residuals: along }, clusters);
}
