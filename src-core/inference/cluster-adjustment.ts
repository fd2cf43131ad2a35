import { symmetricEigen } from '../algebra/dense';
import { LEVERAGE_OF_ONE } from '../numbers/tolerances';
import type { ClusterRows } from './cluster-rows';
import { rowsOf } from './small-matrices';

/** A = (I - H)^(-1/2), directions in which I - H vanishes dropped, or A = (I - H)^-1. */
export type Power = 'inverse-root' | 'inverse';

/** What cluster-robust errors do to the residuals of each cluster, ready to be applied. */
export interface Adjustments {
  readonly rows: ClusterRows;
  /**
   * f(H_bb), n x n, where the cluster has at most k cells, else f(Q_b'Q_b) and Q_b'Q_b, k x k each, row after row; f(x) = (1 - x)^(-1/2) or
   * (1 - x)^-1. Both say the same: Q_b' f(H_bb) = f(Q_b'Q_b) Q_b'.
   */
  readonly matrices: Float64Array;
  /** Where each cluster's matrices begin. */
  readonly offsets: Float64Array;
}

export type Adjusting =
  | { readonly ok: true; readonly adjustments: Adjustments }
  /** The first cluster that alone decides a combination of coefficients: I - H_bb has no inverse. */
  | { readonly ok: false; readonly cluster: number };

/** Up to this trace a power series is shorter than a decomposition; the largest eigenvalue is below it as well. */
const SERIES_UP_TO = 0.05;

/**
 * The adjustment of every cluster, by matrices of the smaller of its cells and the coefficients.
 *
 * Many clusters have little leverage each: there by the power series of f, to the last digit; a decomposition is taken for the few others, of which
 * there can be no more than k / 0.05.
 *
 * Refuses (by the cluster's index) an inverse where an eigenvalue of I - H_bb is 1e-10 or less; the inverse root drops that direction.
 *
 * Source: Bell & McCaffrey 2002; Pustejovsky & Tipton 2018 (the pseudo-inverse).
 */
export function adjustmentsOf(rows: ClusterRows, power: Power): Adjusting {
  const { count, terms: k, starts } = rows;
  const offsets = new Float64Array(count + 1);
  for (let b = 0; b < count; b++) {
    const n = (starts[b + 1] as number) - (starts[b] as number);
    offsets[b + 1] = (offsets[b] as number) + (n <= k ? n * n : 2 * k * k);
  }
  const matrices = new Float64Array(offsets[count] as number);
  const scratch = { hat: new Float64Array(k * k), spare: new Float64Array(k * k) };
  for (let b = 0; b < count; b++) {
    const n = (starts[b + 1] as number) - (starts[b] as number);
    const m = Math.min(n, k);
    const at = offsets[b] as number;
    const hat = scratch.hat.subarray(0, m * m);
    if (n <= k) hatOf(rows, b, hat);
    else gramOf(rows, b, hat);
    if (!fillAdjustment(matrices.subarray(at, at + m * m), { hat, spare: scratch.spare, m, power }))
      return { ok: false, cluster: b };
    if (n > k) matrices.set(hat, at + m * m);
  }
  return { ok: true, adjustments: { rows, matrices, offsets } };
}

/** H_bb = Q_b Q_b'. */
function hatOf({ basis, starts, terms: k }: ClusterRows, b: number, hat: Float64Array): void {
  const from = starts[b] as number;
  const n = (starts[b + 1] as number) - from;
  for (let i = 0; i < n; i++)
    for (let j = 0; j <= i; j++) {
      let sum = 0;
      for (let l = 0; l < k; l++) sum += (basis[(from + i) * k + l] as number) * (basis[(from + j) * k + l] as number);
      hat[i * n + j] = sum;
      hat[j * n + i] = sum;
    }
}

/** Q_b'Q_b. */
function gramOf({ basis, starts, terms: k }: ClusterRows, b: number, gram: Float64Array): void {
  gram.fill(0);
  const end = (starts[b + 1] as number) * k;
  for (let at = (starts[b] as number) * k; at < end; at += k)
    for (let i = 0; i < k; i++) {
      const left = basis[at + i] as number;
      for (let j = 0; j <= i; j++) gram[i * k + j] = (gram[i * k + j] as number) + left * (basis[at + j] as number);
    }
  for (let i = 0; i < k; i++) for (let j = 0; j < i; j++) gram[j * k + i] = gram[i * k + j] as number;
}

interface Filling {
  readonly hat: Float64Array;
  readonly spare: Float64Array;
  readonly m: number;
  readonly power: Power;
}

/** f(hat) into `into`; false where the inverse does not exist. */
function fillAdjustment(into: Float64Array, { hat, spare, m, power }: Filling): boolean {
  let trace = 0;
  for (let i = 0; i < m; i++) trace += hat[i * m + i] as number;
  if (trace <= SERIES_UP_TO) {
    bySeries(into, { hat, spare, m, power }, trace);
    return true;
  }
  const { values, vectors } = symmetricEigen(rowsOf(hat, m));
  into.fill(0);
  for (const [l, vector] of vectors.entries()) {
    const left = 1 - (values[l] as number);
    if (left <= LEVERAGE_OF_ONE) {
      if (power === 'inverse') return false;
      continue;
    }
    const factor = power === 'inverse' ? 1 / left : 1 / Math.sqrt(left);
    for (let i = 0; i < m; i++)
      for (let j = 0; j < m; j++)
        into[i * m + j] = (into[i * m + j] as number) + factor * (vector[i] as number) * (vector[j] as number);
  }
  return true;
}

/** What a term of the series adds less than is lost in rounding: 2^-55. */
const LOST = 2.7755575615628914e-17;

/** sum c_j hat^j by Horner's rule, c_j those of (1 - x)^(-1/2) or all 1. */
function bySeries(into: Float64Array, { hat, spare, m, power }: Filling, trace: number): void {
  const factors = [1];
  for (let size = trace, j = 1; size > LOST; size *= trace, j++)
    factors.push(power === 'inverse' ? 1 : ((factors[j - 1] as number) * (2 * j - 1)) / (2 * j));
  into.fill(0);
  const last = factors.pop() as number;
  for (let i = 0; i < m; i++) into[i * m + i] = last;
  while (factors.length > 0) {
    const factor = factors.pop() as number;
    timesInPlace(into, hat, spare, m);
    for (let i = 0; i < m; i++) into[i * m + i] = (into[i * m + i] as number) + factor;
  }
}

/** a = a b; both symmetric and commuting. */
function timesInPlace(a: Float64Array, b: Float64Array, row: Float64Array, m: number): void {
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < m; j++) {
      let sum = 0;
      for (let l = 0; l < m; l++) sum += (a[i * m + l] as number) * (b[j * m + l] as number);
      row[j] = sum;
    }
    for (let j = 0; j < m; j++) a[i * m + j] = row[j] as number;
  }
}

/** The adjusted scores of all clusters, B x k, row after row: s_b = Q_b' A_b r~_b. */
export function adjustedScores(adjustments: Adjustments): Float64Array {
  const { count, terms: k, starts, residuals } = adjustments.rows;
  const scores = new Float64Array(count * k);
  const plain = new Float64Array(k);
  const turned = new Float64Array(k);
  for (let b = 0; b < count; b++) {
    const from = starts[b] as number;
    const n = (starts[b + 1] as number) - from;
    if (n <= k) {
      times(adjustments.matrices, adjustments.offsets[b] as number, { x: residuals, from, m: n }, turned);
      transposedTimes(adjustments.rows, b, { q: turned, from: 0 }, { into: scores, at: b * k });
    } else {
      transposedTimes(adjustments.rows, b, { q: residuals, from }, { into: plain, at: 0 });
      times(adjustments.matrices, adjustments.offsets[b] as number, { x: plain, from: 0, m: k }, turned);
      scores.set(turned, b * k);
    }
  }
  return scores;
}

/** What a direction z makes of the clusters, one after the other. */
export interface Images {
  /** q_b'q_b with q_b = A_b Q_b z, and t_b = Q_b'q_b into `t`, length k. */
  readonly at: (b: number, t: Float64Array) => number;
  /** y with q_b = Q_b y where the cluster has more cells than coefficients, else q_b itself: what two directions are multiplied by (`productOf`). */
  readonly turned: Float64Array;
}

/** The images of one direction z, length k; nothing is kept from one cluster to the next. */
export function imagesOf(adjustments: Adjustments, z: Float64Array): Images {
  const { rows, matrices, offsets } = adjustments;
  const { terms: k, starts } = rows;
  const along = new Float64Array(k);
  const turned = new Float64Array(k);
  const at = (b: number, t: Float64Array): number => {
    const n = (starts[b + 1] as number) - (starts[b] as number);
    const place = offsets[b] as number;
    let sum = 0;
    if (n <= k) {
      rowsTimes(rows, b, z, along);
      times(matrices, place, { x: along, from: 0, m: n }, turned);
      transposedTimes(rows, b, { q: turned, from: 0 }, { into: t, at: 0 });
      for (let i = 0; i < n; i++) sum += (turned[i] as number) * (turned[i] as number);
      return sum;
    }
    times(matrices, place, { x: z, from: 0, m: k }, turned);
    times(matrices, place + k * k, { x: turned, from: 0, m: k }, t);
    for (let i = 0; i < k; i++) sum += (turned[i] as number) * (t[i] as number);
    return sum;
  };
  return { at, turned };
}

/** q'p of two directions in the cluster that both images were taken of last; t: that of the second. */
export function productOfImages(
  { rows }: Adjustments,
  b: number,
  of: { readonly first: Images; readonly second: Images; readonly t: Float64Array },
): number {
  const n = (rows.starts[b + 1] as number) - (rows.starts[b] as number);
  const inner = n <= rows.terms;
  const right = inner ? of.second.turned : of.t;
  let sum = 0;
  for (let i = 0; i < (inner ? n : rows.terms); i++) sum += (of.first.turned[i] as number) * (right[i] as number);
  return sum;
}

/** An m x m matrix that begins at a place, times m entries of x from `from` on, into the first m of `into`. */
function times(
  matrices: Float64Array,
  at: number,
  { x, from, m }: { readonly x: Float64Array; readonly from: number; readonly m: number },
  into: Float64Array,
): void {
  for (let i = 0; i < m; i++) {
    let sum = 0;
    const row = at + i * m;
    for (let j = 0; j < m; j++) sum += (matrices[row + j] as number) * (x[from + j] as number);
    into[i] = sum;
  }
}

/** Q_b z into the first entries of `into`. */
function rowsTimes({ basis, starts, terms: k }: ClusterRows, b: number, z: Float64Array, into: Float64Array): void {
  const from = starts[b] as number;
  const n = (starts[b + 1] as number) - from;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    const row = (from + i) * k;
    for (let l = 0; l < k; l++) sum += (basis[row + l] as number) * (z[l] as number);
    into[i] = sum;
  }
}

/** Q_b'q, q from `from` on, into k entries of `into`. */
function transposedTimes(
  { basis, starts, terms: k }: ClusterRows,
  b: number,
  { q, from }: { readonly q: Float64Array; readonly from: number },
  { into, at }: { readonly into: Float64Array; readonly at: number },
): void {
  const first = starts[b] as number;
  const n = (starts[b + 1] as number) - first;
  for (let l = 0; l < k; l++) into[at + l] = 0;
  for (let i = 0; i < n; i++) {
    const value = q[from + i] as number;
    const row = (first + i) * k;
    for (let l = 0; l < k; l++) into[at + l] = (into[at + l] as number) + value * (basis[row + l] as number);
  }
}
