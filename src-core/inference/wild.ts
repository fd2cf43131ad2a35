import { forwardInPlace } from '../algebra/cholesky';
import { largestOf } from '../algebra/powers-of-two';
import { lengthOf } from '../numbers/sums';
import { sharesOf } from './cluster-rows';
import type { Clusters } from './clusters';
import type { Coordinates } from './coordinates';
import { orthonormal } from './orthonormal-directions';
import { AT_ONCE, squaresOfFour, statisticOf, type WildTest } from './wild-statistic';
import type { WildVectors } from './wild-vectors';

/** A tie with the statistic of the cells as they are, up to rounding. */
const TIE = 1 - 1e-9;
/** Vectors between two looks at whether to stop. */
const STEP = 256;

/** What the bootstrap needs of a fit. */
export interface WildPieces {
  readonly coordinates: Pick<Coordinates, 'basis'>;
  readonly clusters: Pick<Clusters, 'count' | 'clusterOf'>;
  /** Q_b' r~_b, B x k, in a unit in which the largest is 1. */
  readonly scores: Float64Array;
  readonly unit: number;
}

export interface WildCount {
  /** Vectors whose statistic is as far out as that of the cells, or farther. */
  readonly count: number;
  readonly p: number;
}

interface How {
  readonly vectors: WildVectors;
  readonly stop: () => boolean;
}

/** The pieces of a fit; scores: from `plainScores`. */
export function wildPieces(
  coordinates: Pick<Coordinates, 'basis'>,
  clusters: Pick<Clusters, 'count' | 'clusterOf'>,
  scores: Float64Array,
): WildPieces {
  const unit = largestOf(scores) || 1;
  return { coordinates, clusters, scores: scores.map((value) => value / unit), unit };
}

/**
 * The bootstrap-t of several combinations of coefficients, each alone, with its null imposed; on scores, never by refitting.
 *
 *     t* = z'u / root of sum_b (w_b z'v_b - h_b'u)^2,   u = sum_b w_b v_b,  v_b = Q_b'e_b,  h_b = Q_b'Q_b z,  e = r~ + Q z (m'b - value) / z'z
 *
 * tests: directions z (`directionOf`) and distances m'b - value, in units of the outcome; errors by CR0, the same vectors for all of them.
 * p: count / all where the vectors are all that exist, else (1 + count) / (1 + replications). Null for a test whose t is undefined, for all when
 * `stop` says so.
 *
 * Source: Cameron, Gelbach & Miller 2008.
 */
export function wildTests(
  pieces: WildPieces,
  tests: readonly { readonly direction: Float64Array; readonly distance: number }[],
  how: How,
): (WildCount | null)[] {
  return bootstrap(
    tests.map((test) => prepared(pieces, [test.direction], Float64Array.of(test.distance))),
    how,
  );
}

/**
 * The bootstrap of a joint test that several coefficients are 0, the null imposed: W* = n' V*^-1 n by CR0, as `wildTests` for one.
 *
 * directions: l, linearly independent; distances: the coefficients.
 */
export function wildJoint(
  pieces: WildPieces,
  test: { readonly directions: readonly Float64Array[]; readonly distances: Float64Array },
  how: How,
): WildCount | null {
  return bootstrap([prepared(pieces, test.directions, test.distances)], how)[0] ?? null;
}

interface Prepared {
  readonly test: WildTest;
  /** The statistic of the cells as they are. */
  readonly observed: number;
}

function prepared(pieces: WildPieces, directions: readonly Float64Array[], distances: Float64Array): Prepared | null {
  const made = orthonormal(directions);
  if (!made) return null;
  const { coordinates, clusters, scores, unit } = pieces;
  const l = directions.length;
  const k = coordinates.basis.length;
  // How far the estimates lie from the null along Y: L^-1 D^-1 Z'theta.
  const gamma = Float64Array.from(directions, (z, a) => (distances[a] as number) / lengthOf(z) / unit);
  forwardInPlace(made.factor, gamma, l);
  const shared = made.vectors.map((y) => sharesOf(coordinates, clusters, y));
  const restricted = scores.map((value, e) =>
    shared.reduce((sum, share, a) => sum + (gamma[a] as number) * (share[e] as number), value),
  );
  const own = made.vectors.map((y) => alongRows(restricted, y));
  const test: WildTest = { count: clusters.count, k, directions: made.vectors, restricted, own, shared };
  const observed = l > 0 ? statisticOf(test)(new Float64Array(clusters.count).fill(1)) : Infinity;
  return observed < Infinity ? { test, observed } : null;
}

/** The products of every row with y. */
function alongRows(rows: Float64Array, y: Float64Array): Float64Array {
  const k = y.length;
  return Float64Array.from({ length: rows.length / k }, (_, b) => {
    let sum = 0;
    for (let i = 0; i < k; i++) sum += (rows[b * k + i] as number) * (y[i] as number);
    return sum;
  });
}

/** Counts vectors for each test; those of one direction are taken four at a time. */
function bootstrap(tests: readonly (Prepared | null)[], { vectors, stop }: How): (WildCount | null)[] {
  const counts = new Float64Array(tests.length);
  const statistics = tests.map((one) => one && statisticOf(one.test));
  const fours = tests.map((one) => one && squaresOfFour(one.test));
  const batch = Array.from({ length: AT_ONCE }, () => new Float64Array(tests.find((one) => one)?.test.count ?? 0));
  let waiting = 0;
  let done = 0;
  let stopped = false;
  const reach = (i: number, statistic: number) => {
    if (statistic >= (tests[i]?.observed as number) * TIE * TIE) counts[i] = (counts[i] as number) + 1;
  };
  const flush = () => {
    for (const [i, four] of fours.entries())
      if (four && waiting === AT_ONCE) for (const statistic of four(batch)) reach(i, statistic);
      else
        for (const vector of batch.slice(0, waiting)) {
          const statistic = statistics[i]?.(vector);
          if (statistic !== undefined) reach(i, statistic);
        }
    waiting = 0;
  };
  if (tests.some((one) => one))
    vectors.each((vector) => {
      batch[waiting++]?.set(vector);
      done++;
      if (waiting === AT_ONCE) flush();
      stopped = done % STEP === 0 && stop();
      return !stopped;
    });
  flush();
  return tests.map((test, i) => {
    if (!test || stopped) return null;
    const count = counts[i] as number;
    return { count, p: vectors.all ? count / vectors.count : (1 + count) / (1 + vectors.count) };
  });
}
