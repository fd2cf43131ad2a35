import { choleskyOf } from '../algebra/cholesky';
import { lengthOf, plainDot } from '../numbers/sums';
import { type Adjustments, type Images, imagesOf, productOfImages } from './cluster-adjustment';

/** Below this share of what it is the difference of, an expected variance is rounding: the clusters cannot show it. */
const NOTHING = 1e-12;
/** 1, up to rounding. */
const LEAST_FREEDOM = 1 - 1e-6;

/**
 * Satterthwaite's freedom of the CR2 variance of one combination of coefficients.
 *
 *     (sum_b p_b'p_b)^2 / sum_bc (p_b'p_c)^2,  p_b = (I - H)_.b A_b Q_b z
 *
 * direction: z, length k, of any size (`directionOf`). In one pass over the clusters, whatever their number: with q_b = A_b Q_b z, t_b = Q_b'q_b and
 * N = sum t_b t_b' the divisor is sum_b (q_b'q_b)^2 - 2 q_b'q_b t_b't_b, plus the squares of all entries of N. Null where the clusters cannot show
 * the combination at all.
 *
 * Example: eleven firms of twenty years: 7.22 for the intercept.
 * Source: Bell & McCaffrey 2002; Pustejovsky & Tipton 2018.
 */
export function satterthwaiteOfClusters(adjustments: Adjustments, direction: Float64Array): number | null {
  const { count, terms: k } = adjustments.rows;
  const size = lengthOf(direction);
  if (!(size > 0)) return null;
  const images = imagesOf(
    adjustments,
    direction.map((value) => value / size),
  );
  const t = new Float64Array(k);
  const outer = new Float64Array(k * k);
  let whole = 0;
  let total = 0;
  let squares = 0;
  for (let b = 0; b < count; b++) {
    const own = images.at(b, t);
    const shared = addOuter(outer, t);
    whole += own;
    total += own - shared;
    squares += own * (own - 2 * shared);
  }
  for (const entry of outer) squares += entry * entry;
  if (!(total > NOTHING * whole && squares > 0)) return null;
  return orRounding((total * total) / squares);
}

/** A sum of squares is no less than one of them: a freedom below 1 is what rounding made of nothing. */
function orRounding(freedom: number): number | null {
  return freedom < LEAST_FREEDOM ? null : freedom;
}

/** outer += t t', and t't. */
function addOuter(outer: Float64Array, t: Float64Array): number {
  const k = t.length;
  let sum = 0;
  for (let i = 0; i < k; i++) {
    const left = t[i] as number;
    sum += left * left;
    if (left === 0) continue;
    for (let j = 0; j < k; j++) outer[i * k + j] = (outer[i * k + j] as number) + left * (t[j] as number);
  }
  return sum;
}

/**
 * The freedom eta of the CR2 covariance D of several combinations, taken as a Wishart matrix.
 *
 *     eta = l (l + 1) / sum_st Var(d_st),  D in the units of its expectation under the working covariance
 *
 * directions: l of length k, linearly independent. For one direction it is Satterthwaite's freedom. Null where the clusters cannot show the directions
 * together.
 *
 * Source: Tipton & Pustejovsky 2015 (approximate Hotelling test, after Zhang 2012).
 */
export function wishartFreedom(adjustments: Adjustments, directions: readonly Float64Array[]): number | null {
  const l = directions.length;
  const unit = directions.map((direction) => {
    const size = lengthOf(direction);
    return direction.map((value) => value / size);
  });
  const { expected, whole } = expectationOf(adjustments, unit);
  for (let s = 0; s < l; s++) if (!((expected[s * l + s] as number) > NOTHING * (whole[s] as number))) return null;
  const factor = choleskyOf(expected, l);
  if (!factor) return null;
  const spread = spreadOf(adjustments, standardised(unit, factor));
  return spread > 0 ? orRounding((l * (l + 1)) / spread) : null;
}

/** E(D) = sum_b (E_b - T_b'T_b), and the sum of the E_b alone on the diagonal. */
function expectationOf(
  adjustments: Adjustments,
  directions: readonly Float64Array[],
): { readonly expected: Float64Array; readonly whole: Float64Array } {
  const l = directions.length;
  const expected = new Float64Array(l * l);
  const whole = new Float64Array(l);
  eachCluster(adjustments, directions, ({ own, shared }) => {
    for (let i = 0; i < expected.length; i++)
      expected[i] = (expected[i] as number) + (own[i] as number) - (shared[i] as number);
    for (let s = 0; s < l; s++) whole[s] = (whole[s] as number) + (own[s * l + s] as number);
  });
  return { expected, whole };
}

/** Z L^-T: directions whose D has the unit matrix for its expectation. */
function standardised(directions: readonly Float64Array[], factor: Float64Array): Float64Array[] {
  const l = directions.length;
  const made: Float64Array[] = [];
  for (const [s, direction] of directions.entries()) {
    const left = direction.slice();
    for (const [j, earlier] of made.entries())
      for (let i = 0; i < left.length; i++)
        left[i] = (left[i] as number) - (factor[s * l + j] as number) * (earlier[i] as number);
    made.push(left.map((value) => value / (factor[s * l + s] as number)));
  }
  return made;
}

/** sum_st Var(d_st) under the working covariance and normal errors. */
function spreadOf(adjustments: Adjustments, directions: readonly Float64Array[]): number {
  const l = directions.length;
  const k = adjustments.rows.terms;
  const outer = new Float64Array(l * k * l * k);
  let sum = 0;
  eachCluster(adjustments, directions, ({ own, shared, stacked }) => {
    let [traceOwn, traceShared] = [0, 0];
    for (let s = 0; s < l; s++) {
      traceOwn += own[s * l + s] as number;
      traceShared += shared[s * l + s] as number;
    }
    sum += traceOwn * (traceOwn - 2 * traceShared);
    for (let i = 0; i < own.length; i++) sum += (own[i] as number) * ((own[i] as number) - 2 * (shared[i] as number));
    addOuter(outer, stacked);
  });
  for (const entry of outer) sum += entry * entry;
  const at = (s: number, i: number, t: number, j: number) => outer[(s * k + i) * l * k + t * k + j] as number;
  for (let s = 0; s < l; s++)
    for (let t = 0; t < l; t++)
      for (let i = 0; i < k; i++) for (let j = 0; j < k; j++) sum += at(s, i, t, j) * at(s, j, t, i);
  return sum;
}

interface ClusterImage {
  /** q_s'q_t, l x l. */
  readonly own: Float64Array;
  /** t_s't_t, l x l. */
  readonly shared: Float64Array;
  /** t_1, ..., t_l one after the other. */
  readonly stacked: Float64Array;
}

function eachCluster(
  adjustments: Adjustments,
  directions: readonly Float64Array[],
  visit: (image: ClusterImage) => void,
): void {
  const l = directions.length;
  const k = adjustments.rows.terms;
  const image = { own: new Float64Array(l * l), shared: new Float64Array(l * l), stacked: new Float64Array(l * k) };
  const images = directions.map((direction) => imagesOf(adjustments, direction));
  const places = directions.map((_, s) => image.stacked.subarray(s * k, (s + 1) * k));
  for (let b = 0; b < adjustments.rows.count; b++) {
    for (const [s, own] of images.entries()) image.own[s * l + s] = own.at(b, places[s] as Float64Array);
    for (const [s, first] of images.entries())
      for (let t = 0; t <= s; t++) {
        const second = { images: images[t] as Images, t: places[t] as Float64Array };
        if (t < s)
          image.own[s * l + t] = productOfImages(adjustments, b, { first, second: second.images, t: second.t });
        image.own[t * l + s] = image.own[s * l + t] as number;
        const product = plainDot(places[s] as Float64Array, second.t);
        image.shared[s * l + t] = product;
        image.shared[t * l + s] = product;
      }
    visit(image);
  }
}
