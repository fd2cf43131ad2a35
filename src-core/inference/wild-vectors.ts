import { seeded } from '../numbers/random';

/** Multipliers of the clusters' residuals, one vector a replication. */
export interface WildVectors {
  /** How many vectors there are. */
  readonly count: number;
  /** True where they are all that exist: p is then a share of them. */
  readonly all: boolean;
  readonly points: 'signs' | 'webb';
  /** The least p that can come out: vectors that tie with the cells as they are, whatever these hold. */
  readonly floor: number;
  /** Visits every vector in its order; the array is overwritten from one to the next. False from `visit` ends it. */
  readonly each: (visit: (vector: Float64Array) => boolean) => void;
}

/** From so many clusters on signs are drawn; below it, and below the other always, Webb's six points. */
const SIGNS_DRAWN_FROM = 12;
const SIGNS_FROM = 6;

const webbPoints = Float64Array.of(-Math.sqrt(1.5), -1, -Math.sqrt(0.5), Math.sqrt(0.5), 1, Math.sqrt(1.5));
const signPoints = Float64Array.of(-1, 1);

/**
 * The multipliers of a wild cluster bootstrap.
 *
 * From 6 clusters: all 2^B sign vectors if they are no more than the replications asked for; below 6 Webb's six points, all 6^B if no more. Otherwise
 * drawn from the seed: Webb's points below 12 clusters, signs from 12 on. Floor: 2 / 2^B or 6 / 6^B (a vector of one point for all clusters gives the
 * same |t|), else 1 / (1 + replications).
 *
 * Example: 11 clusters and 9,999 replications: all 2,048 sign vectors.
 * Source: Cameron, Gelbach & Miller 2008; Webb 2023.
 */
export function wildVectors(of: {
  readonly clusters: number;
  readonly replications: number;
  readonly seed: number;
}): WildVectors {
  const { clusters, replications, seed } = of;
  const few = clusters < SIGNS_FROM;
  const own = few ? webbPoints : signPoints;
  const total = countOf(own.length, clusters);
  if (total <= replications)
    return {
      count: total,
      all: true,
      points: few ? 'webb' : 'signs',
      floor: own.length / total,
      each: (visit) => enumerate(own, clusters, visit),
    };
  const drawn = clusters < SIGNS_DRAWN_FROM ? webbPoints : signPoints;
  return {
    count: replications,
    all: false,
    points: drawn === webbPoints ? 'webb' : 'signs',
    floor: 1 / (1 + replications),
    each: (visit) => draw({ points: drawn, clusters, replications, seed }, visit),
  };
}

/** points^clusters, Infinity beyond any number of replications. */
function countOf(points: number, clusters: number): number {
  let total = 1;
  for (let b = 0; b < clusters && total < Infinity; b++) total *= points;
  return total;
}

/** Every vector once, the first cluster's point changing fastest. */
function enumerate(points: Float64Array, clusters: number, visit: (vector: Float64Array) => boolean): void {
  const digits = new Int32Array(clusters);
  const vector = new Float64Array(clusters).fill(points[0] as number);
  for (;;) {
    if (!visit(vector)) return;
    let b = 0;
    while (b < clusters && digits[b] === points.length - 1) {
      digits[b] = 0;
      vector[b] = points[0] as number;
      b++;
    }
    if (b === clusters) return;
    digits[b] = (digits[b] as number) + 1;
    vector[b] = points[digits[b] as number] as number;
  }
}

function draw(
  of: {
    readonly points: Float64Array;
    readonly clusters: number;
    readonly replications: number;
    readonly seed: number;
  },
  visit: (vector: Float64Array) => boolean,
): void {
  const { points, clusters, replications, seed } = of;
  const random = seeded(seed);
  const vector = new Float64Array(clusters);
  for (let r = 0; r < replications; r++) {
    if (points.length === 2) drawSigns(random.bits, vector);
    else for (let b = 0; b < clusters; b++) vector[b] = points[random.below(points.length)] as number;
    if (!visit(vector)) return;
  }
}

/** Thirty-two signs from every draw. */
function drawSigns(bits: () => number, vector: Float64Array): void {
  let word = 0;
  for (let b = 0; b < vector.length; b++) {
    if (b % 32 === 0) word = bits();
    vector[b] = (word & 1) === 1 ? 1 : -1;
    word >>>= 1;
  }
}
