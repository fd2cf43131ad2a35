import { fUpper } from '../numbers/distributions';
import { lengthOf, plainDot } from '../numbers/sums';
import type { ClusterCorrection } from '../protocol/plan';
import type { Claim, Joint } from './claim';
import { type Adjustments, adjustedScores, adjustmentsOf } from './cluster-adjustment';
import { satterthwaiteOfClusters, wishartFreedom } from './cluster-freedom';
import { clusterRows, plainScores } from './cluster-rows';
import { type Clusters, crossed } from './clusters';
import { type Coordinates, directionOf, unitRow } from './coordinates';
import { fOf, undefinedJoint, waldOf } from './joint';
import { numberOrNull, studentOn } from './reference';

/** One grouping's share in a covariance: sign times the sum of its scores' outer products. */
export interface Way {
  readonly sign: 1 | -1;
  /** B x k, row after row, the root of the correction's factor included. */
  readonly scores: Float64Array;
}

/** The residuals of a fit, cluster by cluster, under one correction. */
export interface Spreading {
  readonly ways: readonly Way[];
  /** Of CR2 alone, for its freedom. */
  readonly adjustments: Adjustments | null;
  /** The smaller number of clusters, where there are two groupings. */
  readonly count: number;
}

/** The first cluster, by index, that keeps CR3 from being formed; null where none does. */
export function clusterWithoutInverse(coordinates: Coordinates, clusters: Clusters): number | null {
  const adjusting = adjustmentsOf(clusterRows(coordinates, clusters), 'inverse');
  return adjusting.ok ? null : adjusting.cluster;
}

/**
 * What every cluster contributes to robust errors.
 *
 *     V = R^-1 [ sum_b s_b s_b' ] R^-T,  s_b = Q_b' A_b r~_b
 *     A_b = I | I times the root of B/(B-1) (G-1)/(G-k) | (I - H_bb)^(-1/2) | (I - H_bb)^-1  for CR0 | CR1 | CR2 | CR3
 *
 * groupings: one, or two for V1 + V2 - V12 (CR0 and CR1, each with its own factor). residualFreedom: G - k, above 0.
 * Null where CR3 has a cluster that decides a coefficient alone (`clusterWithoutInverse` names it), or the cells are one cluster.
 *
 * Source: Liang & Zeger 1986; Bell & McCaffrey 2002; Cameron, Gelbach & Miller 2011.
 */
export function spreadingOf(of: {
  readonly coordinates: Coordinates;
  readonly groupings: readonly Clusters[];
  readonly correction: ClusterCorrection;
}): Spreading | null {
  const { coordinates, groupings, correction } = of;
  const [first, second] = groupings;
  if (!first || groupings.some(({ count }) => count < 2)) return null;
  const cells = coordinates.residuals.length;
  if (correction === 'CR2' || correction === 'CR3') {
    const adjusting = adjustmentsOf(clusterRows(coordinates, first), powers[correction]);
    if (!adjusting.ok) return null;
    const { adjustments } = adjusting;
    return {
      ways: [{ sign: 1, scores: adjustedScores(adjustments) }],
      adjustments: correction === 'CR2' ? adjustments : null,
      count: first.count,
    };
  }
  const wayOf = (clusters: Clusters, sign: 1 | -1): Way => {
    const scores = plainScores(coordinates, clusters);
    if (correction === 'CR0') return { sign, scores };
    const factor = (clusters.count / (clusters.count - 1)) * ((cells - 1) / (cells - coordinates.basis.length));
    const root = Math.sqrt(factor);
    return { sign, scores: scores.map((value) => value * root) };
  };
  const ways = second ? [wayOf(first, 1), wayOf(second, 1), wayOf(crossed(first, second), -1)] : [wayOf(first, 1)];
  return { ways, adjustments: null, count: Math.min(...groupings.map(({ count }) => count)) };
}

const powers = { CR2: 'inverse-root', CR3: 'inverse' } as const;

/**
 * Cluster-robust errors, their references and joint tests.
 *
 *     CR0, CR1, CR3: t with B - 1, F(l, B - 1);  CR2: t with Satterthwaite's freedom, approximate Hotelling
 *
 * estimates: length k. Two groupings can give a variance below 0: that error is null.
 *
 * Source: Bell & McCaffrey 2002; Pustejovsky & Tipton 2018; Tipton & Pustejovsky 2015; Cameron, Gelbach & Miller 2011.
 */
export function clusteredClaim(of: {
  readonly coordinates: Coordinates;
  readonly spreading: Spreading;
  readonly estimates: Float64Array;
}): Claim {
  const { coordinates, spreading, estimates } = of;
  const { adjustments } = spreading;
  const k = estimates.length;
  const covariance = covarianceOf(coordinates, spreading);
  const onClusters = studentOn(spreading.count - 1);
  const jointOf = (columns: readonly number[]): Joint => {
    const wald = waldOf(columns, estimates, covariance);
    if (wald === null) return undefinedJoint(columns.length);
    if (!adjustments) return fOf(wald, { freedom1: columns.length, freedom2: spreading.count - 1 });
    const directions = columns.map((j) => directionOf(coordinates, unitRow(k, j)));
    return hotellingOf(wald, columns.length, wishartFreedom(adjustments, directions));
  };
  return {
    covariance,
    errors: Array.from(estimates, (_, j) => clusteredError(spreading, directionOf(coordinates, unitRow(k, j)))),
    errorOf: (multipliers) => clusteredError(spreading, directionOf(coordinates, multipliers)),
    referenceOf: (multipliers) =>
      adjustments ? studentOn(satterthwaiteOfClusters(adjustments, directionOf(coordinates, multipliers))) : onClusters,
    jointOf,
    drawn: null,
  };
}

/** Root of z' [ sum of the ways ] z; null where it is below 0 or no number. */
export function clusteredError({ ways }: Spreading, direction: Float64Array): number | null {
  const lengths = ways.map(({ scores }) => lengthOf(along(scores, direction)));
  if (lengths.length === 1) return numberOrNull(lengths[0] as number);
  const largest = Math.max(...lengths);
  if (largest === 0) return 0;
  const shares = lengths.map((length, i) => (ways[i] as Way).sign * (length / largest) * (length / largest));
  const variance = shares.reduce((sum, share) => sum + share, 0);
  return variance < 0 ? null : numberOrNull(largest * Math.sqrt(variance));
}

/** z's_b for every cluster. */
function along(scores: Float64Array, z: Float64Array): Float64Array {
  const k = z.length;
  const result = new Float64Array(scores.length / k);
  for (let b = 0, at = 0; b < result.length; b++, at += k) {
    let sum = 0;
    for (let l = 0; l < k; l++) sum += (scores[at + l] as number) * (z[l] as number);
    result[b] = sum;
  }
  return result;
}

/** A variance below 0 is null with its whole row and column: nothing that stands on it has a meaning. */
function covarianceOf(coordinates: Coordinates, { ways }: Spreading): (number | null)[][] {
  const k = coordinates.basis.length;
  const directions = Array.from({ length: k }, (_, j) => directionOf(coordinates, unitRow(k, j)));
  const images = ways.map(({ scores }) => directions.map((direction) => along(scores, direction)));
  const entry = (i: number, j: number): number =>
    ways.reduce((sum, { sign }, w) => {
      const image = images[w] as Float64Array[];
      return sum + sign * plainDot(image[i] as Float64Array, image[j] as Float64Array);
    }, 0);
  const rows = directions.map((_, i) => directions.map((__, j) => entry(Math.max(i, j), Math.min(i, j))));
  const below = rows.map((row, i) => (row[i] as number) < 0);
  return rows.map((row, i) => row.map((value, j) => (below[i] || below[j] ? null : numberOrNull(value))));
}

/**
 * Hotelling's test with a Wishart freedom that is estimated.
 *
 *     F = (eta - l + 1) / (eta l) W  on (l, eta - l + 1)
 *
 * Null where eta is not above l - 1. Its scale is (eta - l + 1) / eta.
 */
export function hotellingOf(wald: number, l: number, eta: number | null): Joint {
  const freedom2 = eta === null ? null : numberOrNull(eta - l + 1);
  if (eta === null || freedom2 === null || !(freedom2 > 0)) return undefinedJoint(l);
  const scale = freedom2 / eta;
  const statistic = (scale * wald) / l;
  return { statistic, scale, freedom1: l, freedom2, p: fUpper(statistic, l, freedom2) };
}
