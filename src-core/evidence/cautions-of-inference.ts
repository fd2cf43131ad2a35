import { clustersBy } from '../inference/clusters';
import { tiesCells } from '../inference/robust-beside';
import type { CautionSources, Found } from './caution-sources';

/** Clustered errors and their references are not to be relied on with fewer. */
const FEW_CLUSTERS = 10;

/** What the clusters, two ways of clustering and corrected freedoms give cause to say. */
export function cautionsOfInference(sources: CautionSources): Found[] {
  const { plan, cells, fitted, pieces } = sources;
  if (pieces.fit.residualFreedom <= 0) return [];
  const beside = pieces.robustBeside ?? [];
  const oneBlock = tiesCells(fitted) && beside.length > 0 && beside.every(({ se }) => se === null);
  return [
    ...(oneBlock ? [{ code: 'one-block' as const, facts: { cells: cells.count } }] : []),
    ...ofItsKind(sources, plan),
  ];
}

function ofItsKind({ cells, pieces }: CautionSources, { inference }: CautionSources['plan']): Found[] {
  const { coefficients, variance } = pieces.fit;
  const without = coefficients.filter(({ se }) => se === null).map(({ term }) => term);
  if (inference.kind === 'kenward-roger') {
    const parameters = variance.filter(({ fixed }) => !fixed).map(({ name }) => name);
    const found = without.length === coefficients.length && parameters.length > 0;
    return found ? [{ code: 'correction-undefined', facts: { parameters } }] : [];
  }
  if (inference.kind !== 'clustered' && inference.kind !== 'wild') return [];
  const also = inference.kind === 'clustered' ? inference.alsoBy : null;
  const found: Found[] = [];
  const fewest = [inference.by, ...(also ? [also] : [])]
    .map((by) => ({ by: [...by], clusters: clustersBy(by, cells).count }))
    .reduce((least, one) => (one.clusters < least.clusters ? one : least));
  if (fewest.clusters < FEW_CLUSTERS) found.push({ code: 'few-clusters', facts: fewest });
  if (also && without.length > 0)
    found.push({ code: 'two-ways-below-zero', facts: { terms: without, by: [...inference.by], alsoBy: [...also] } });
  const unjudged = coefficients.filter(({ se, reference }) => se !== null && reference === null);
  if (inference.kind === 'clustered' && unjudged.length > 0)
    found.push({
      code: 'clusters-cannot-judge',
      facts: { terms: unjudged.map(({ term }) => term), by: [...inference.by] },
    });
  return found;
}
