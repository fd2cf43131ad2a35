import { choleskyOf, forwardInPlace } from '../algebra/cholesky';

/** One test of l directions, ready for every vector. B clusters, k coefficients. */
export interface WildTest {
  readonly count: number;
  readonly k: number;
  /** Orthonormal directions Y, l of length k. */
  readonly directions: readonly Float64Array[];
  /** v_b, B x k, row after row. */
  readonly restricted: Float64Array;
  /** y'v_b of each direction, length B. */
  readonly own: readonly Float64Array[];
  /** Q_b'Q_b y of each direction, B x k, row after row. */
  readonly shared: readonly Float64Array[];
}

/** So many vectors are taken together: each row of the clusters is then read once for all of them. */
export const AT_ONCE = 4;

/**
 * t*^2, or W* of several directions, as a function of the vector; Infinity where the errors vanish or cannot be inverted.
 *
 * The function keeps its scratch: one at a time.
 */
export function statisticOf(test: WildTest): (vector: Float64Array) => number {
  const { k, directions } = test;
  const total = new Float64Array(k);
  const several = directions.length > 1 ? squareOfSeveral(test) : null;
  return (vector) => {
    totalOf(test, vector, total);
    return several ? several(vector, total) : squareOfOne(test, vector, total);
  };
}

/** u = sum_b w_b v_b. */
function totalOf({ count, k, restricted }: WildTest, vector: Float64Array, total: Float64Array): void {
  for (let i = 0; i < k; i++) {
    let sum = 0;
    for (let b = 0, at = i; b < count; b++, at += k) sum += (vector[b] as number) * (restricted[at] as number);
    total[i] = sum;
  }
}

function squareOfOne(
  { count, k, own, shared, directions }: WildTest,
  vector: Float64Array,
  total: Float64Array,
): number {
  const [direction] = directions as [Float64Array];
  const [pull] = own as [Float64Array];
  const [share] = shared as [Float64Array];
  let estimate = 0;
  for (let i = 0; i < k; i++) estimate += (direction[i] as number) * (total[i] as number);
  let spread = 0;
  for (let b = 0, at = 0; b < count; b++, at += k) {
    let left = (vector[b] as number) * (pull[b] as number);
    for (let i = 0; i < k; i++) left -= (share[at + i] as number) * (total[i] as number);
    spread += left * left;
  }
  return spread > 0 ? (estimate * estimate) / spread : Infinity;
}

/** t*^2 of four vectors at once, to the same bits as one by one; null for a test of several directions. */
export function squaresOfFour(test: WildTest): ((vectors: readonly Float64Array[]) => Float64Array) | null {
  const { count, k, restricted, directions } = test;
  if (directions.length !== 1) return null;
  const [direction, pull, share] = [directions[0], test.own[0], test.shared[0]] as [
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  const totals = new Float64Array(AT_ONCE * k);
  const squares = new Float64Array(AT_ONCE);
  return (vectors) => {
    const [w0, w1, w2, w3] = vectors as [Float64Array, Float64Array, Float64Array, Float64Array];
    let [n0, n1, n2, n3] = [0, 0, 0, 0];
    for (let i = 0; i < k; i++) {
      let [s0, s1, s2, s3] = [0, 0, 0, 0];
      for (let b = 0, at = i; b < count; b++, at += k) {
        const v = restricted[at] as number;
        s0 += (w0[b] as number) * v;
        s1 += (w1[b] as number) * v;
        s2 += (w2[b] as number) * v;
        s3 += (w3[b] as number) * v;
      }
      const z = direction[i] as number;
      n0 += z * s0;
      n1 += z * s1;
      n2 += z * s2;
      n3 += z * s3;
      totals[4 * i] = s0;
      totals[4 * i + 1] = s1;
      totals[4 * i + 2] = s2;
      totals[4 * i + 3] = s3;
    }
    let [d0, d1, d2, d3] = [0, 0, 0, 0];
    for (let b = 0, at = 0; b < count; b++, at += k) {
      const p = pull[b] as number;
      let l0 = (w0[b] as number) * p;
      let l1 = (w1[b] as number) * p;
      let l2 = (w2[b] as number) * p;
      let l3 = (w3[b] as number) * p;
      for (let i = 0, j = 0; i < k; i++, j += 4) {
        const h = share[at + i] as number;
        l0 -= h * (totals[j] as number);
        l1 -= h * (totals[j + 1] as number);
        l2 -= h * (totals[j + 2] as number);
        l3 -= h * (totals[j + 3] as number);
      }
      d0 += l0 * l0;
      d1 += l1 * l1;
      d2 += l2 * l2;
      d3 += l3 * l3;
    }
    squares[0] = d0 > 0 ? (n0 * n0) / d0 : Infinity;
    squares[1] = d1 > 0 ? (n1 * n1) / d1 : Infinity;
    squares[2] = d2 > 0 ? (n2 * n2) / d2 : Infinity;
    squares[3] = d3 > 0 ? (n3 * n3) / d3 : Infinity;
    return squares;
  };
}

function squareOfSeveral(test: WildTest): (vector: Float64Array, total: Float64Array) => number {
  const { count, k, own, shared, directions } = test;
  const l = directions.length;
  const spread = new Float64Array(l * l);
  const row = new Float64Array(l);
  const along = new Float64Array(l);
  return (vector, total) => {
    spread.fill(0);
    for (let b = 0; b < count; b++) {
      for (let a = 0; a < l; a++) {
        const share = shared[a] as Float64Array;
        let left = (vector[b] as number) * ((own[a] as Float64Array)[b] as number);
        for (let i = 0; i < k; i++) left -= (share[b * k + i] as number) * (total[i] as number);
        row[a] = left;
      }
      for (let a = 0; a < l; a++)
        for (let c = 0; c <= a; c++)
          spread[a * l + c] = (spread[a * l + c] as number) + (row[a] as number) * (row[c] as number);
    }
    const factor = choleskyOf(spread, l);
    if (!factor) return Infinity;
    for (const [a, direction] of directions.entries()) {
      let sum = 0;
      for (let i = 0; i < k; i++) sum += (direction[i] as number) * (total[i] as number);
      along[a] = sum;
    }
    forwardInPlace(factor, along, l);
    let square = 0;
    for (let a = 0; a < l; a++) square += (along[a] as number) * (along[a] as number);
    return square;
  };
}
