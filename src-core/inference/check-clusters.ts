import { leastSquares } from '../algebra/least-squares';
import type { Design } from '../model/design';
import { fromDoubles } from '../numbers/decimals';
import { problem } from '../protocol/outcome';
import type { Plan } from '../protocol/plan';
import type { Problem } from '../protocol/problems';
import type { Cells } from '../table/cells';
import { clusterWithoutInverse } from './clustered';
import { clustersBy, groupNamed } from './clusters';
import type { Coordinates } from './coordinates';

/**
 * Whether clustered errors can be had at all: at least two clusters a way, and under CR3 no cluster that alone decides a combination of coefficients.
 *
 * coordinates: of any weights whose correlated cells lie inside the clusters; a cluster decides a coefficient under all of them or none. Problems
 * `too-few-clusters` and `cluster-decides`, which names the cluster. With as many cells as coefficients clustered errors are null instead.
 *
 * Example: CR3 by district with an indicator of each district among the terms.
 */
export function checkClusters(known: {
  readonly plan: Pick<Plan, 'inference'>;
  readonly cells: Pick<Cells, 'count' | 'texts'>;
  readonly coordinates: () => Pick<Coordinates, 'basis' | 'inverse' | 'residuals'>;
  readonly residualFreedom: number;
}): Problem[] {
  const { plan, cells, residualFreedom } = known;
  const { inference } = plan;
  if (inference.kind !== 'clustered' && inference.kind !== 'wild') return [];
  const ways: readonly (readonly [readonly string[], string])[] = [
    [inference.by, '/inference/by'],
    ...(inference.kind === 'clustered' && inference.alsoBy ? [[inference.alsoBy, '/inference/alsoBy'] as const] : []),
  ];
  const few = ways.flatMap(([by, at]) => {
    const { count } = clustersBy(by, cells);
    return count < 2 ? [problem('too-few-clusters', { by: [...by], clusters: count }, at)] : [];
  });
  if (few.length > 0 || inference.kind !== 'clustered' || inference.correction !== 'CR3' || residualFreedom <= 0)
    return few;
  const clusters = clustersBy(inference.by, cells);
  const cluster = clusterWithoutInverse(known.coordinates(), clusters);
  if (cluster === null) return [];
  const facts = {
    by: [...inference.by],
    group: groupNamed(clusters, cluster, cells),
    correction: inference.correction,
  };
  return [problem('cluster-decides', facts, '/inference/correction')];
}

/**
 * The same before anything is fitted, by unweighted coordinates.
 *
 * design: of full rank, as `designOf` gives it.
 */
export function checkClustersOf(known: {
  readonly plan: Pick<Plan, 'inference'>;
  readonly design: Design;
  readonly cells: Pick<Cells, 'count' | 'texts'>;
}): Problem[] {
  const { plan, design, cells } = known;
  return checkClusters({
    plan,
    cells,
    residualFreedom: cells.count - design.columns.length,
    coordinates: () => {
      const y = fromDoubles(new Float64Array(cells.count));
      const solved = leastSquares({ columns: design.columns, y, variances: null });
      if ('dependent' in solved) throw new RangeError('the design was not checked');
      return { basis: solved.basis, inverse: solved.inverse, residuals: solved.whitened };
    },
  });
}
