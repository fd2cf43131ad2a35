import type { Fitted } from '../estimate/fitted';
import type { Inference } from '../protocol/plan';
import type { FitResult } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import type { Claim } from './claim';
import { plainScores } from './cluster-rows';
import { clusteredClaim } from './clustered';
import { clustersBy } from './clusters';
import { coordinatesOf, directionOf, unitRow } from './coordinates';
import { undefinedJoint, waldOf } from './joint';
import { numberOrNull } from './reference';
import { wildJoint, wildPieces, wildTests } from './wild';
import { wildVectors } from './wild-vectors';

/**
 * CR0 errors whose p values come from the wild cluster bootstrap; there is no reference and no interval.
 *
 * Every coefficient, combination and joint question is tested with its own null imposed, on the same vectors. A combination whose error is 0 or
 * undefined has no p value. draws: false leaves all p values out.
 *
 * Source: Cameron, Gelbach & Miller 2008.
 */
export function wildClaim(of: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly inference: Extract<Inference, { kind: 'wild' }>;
  readonly draws: boolean;
  readonly hooks: Hooks | undefined;
}): Claim {
  const { fitted, cells, inference, draws, hooks } = of;
  const clusters = clustersBy(inference.by, cells);
  const coordinates = coordinatesOf(fitted);
  const scores = plainScores(coordinates, clusters);
  const spreading = { ways: [{ sign: 1, scores }], adjustments: null, count: clusters.count } as const;
  const estimates = fitted.coefficients;
  const own = clusteredClaim({ coordinates, spreading, estimates });
  const pieces = wildPieces(coordinates, clusters, scores);
  const { replications, seed } = inference;
  const vectors = wildVectors({ clusters: clusters.count, replications, seed });
  const how = { vectors, stop: () => hooks?.cancelled() ?? false };
  const tests = Array.from(estimates, (distance, j) => ({
    direction: directionOf(coordinates, unitRow(estimates.length, j)),
    distance,
  }));
  // Without an error there is no t: nothing is drawn for such a coefficient.
  const tested = own.errors.flatMap((error, j) => (error !== null && error > 0 ? [j] : []));
  const counts = draws
    ? wildTests(
        pieces,
        tested.map((j) => tests[j] as (typeof tests)[number]),
        how,
      )
    : [];
  const wild = tested.flatMap((j, i) => {
    const one = counts[i];
    const term = fitted.design.names[j] as string;
    return one ? [{ term, count: one.count, p: one.p, floor: vectors.floor }] : [];
  });
  return {
    ...own,
    referenceOf: () => null,
    jointOf: (columns) => {
      const wald = waldOf(columns, estimates, own.covariance);
      if (wald === null || !draws) return undefinedJoint(columns.length);
      const test = {
        directions: columns.map((j) => (tests[j] as (typeof tests)[number]).direction),
        distances: Float64Array.from(columns, (j) => estimates[j] as number),
      };
      const p = wildJoint(pieces, test, how)?.p ?? null;
      return { statistic: wald / columns.length, scale: null, freedom1: columns.length, freedom2: null, p };
    },
    drawn: {
      wild: wild satisfies NonNullable<FitResult['wild']>,
      pOf: (multipliers, against) => {
        const error = own.errorOf(multipliers);
        if (!draws || error === null || error === 0) return null;
        const estimate = estimates.reduce((sum, b, j) => sum + b * (multipliers[j] as number), 0);
        const test = { direction: directionOf(coordinates, multipliers), distance: estimate - against };
        return numberOrNull(wildTests(pieces, [test], how)[0]?.p ?? null);
      },
    },
  };
}
