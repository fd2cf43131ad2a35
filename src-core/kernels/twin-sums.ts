// Sums over columns of one memory: the TypeScript twin of source/sums.ts, the same operations in the same order. A column is the place of its
// first number; lengths are whole multiples of 8.

/** Sum of a b over n places, in eight strands. */
export function dot(m: Float64Array, a: number, b: number, n: number): number {
  let [s0, s1, s2, s3, s4, s5, s6, s7] = [0, 0, 0, 0, 0, 0, 0, 0];
  for (let i = 0; i < n; i += 8) {
    s0 += (m[a + i] as number) * (m[b + i] as number);
    s1 += (m[a + i + 1] as number) * (m[b + i + 1] as number);
    s2 += (m[a + i + 2] as number) * (m[b + i + 2] as number);
    s3 += (m[a + i + 3] as number) * (m[b + i + 3] as number);
    s4 += (m[a + i + 4] as number) * (m[b + i + 4] as number);
    s5 += (m[a + i + 5] as number) * (m[b + i + 5] as number);
    s6 += (m[a + i + 6] as number) * (m[b + i + 6] as number);
    s7 += (m[a + i + 7] as number) * (m[b + i + 7] as number);
  }
  return s0 + s2 + (s4 + s6) + (s1 + s3 + (s5 + s7));
}

/** Four columns, `stride` apart. */
export interface Four {
  readonly v: number;
  readonly stride: number;
  readonly n: number;
}

/** Sums of four columns times another, into four places. */
export function dotsOfFour(m: Float64Array, { v, stride, n }: Four, c: number, into: Float64Array): void {
  const [v1, v2, v3] = [v + stride, v + 2 * stride, v + 3 * stride];
  let [a0, b0, a1, b1, a2, b2, a3, b3] = [0, 0, 0, 0, 0, 0, 0, 0];
  for (let i = 0; i < n; i += 2) {
    const x = m[c + i] as number;
    const y = m[c + i + 1] as number;
    a0 += (m[v + i] as number) * x;
    b0 += (m[v + i + 1] as number) * y;
    a1 += (m[v1 + i] as number) * x;
    b1 += (m[v1 + i + 1] as number) * y;
    a2 += (m[v2 + i] as number) * x;
    b2 += (m[v2 + i + 1] as number) * y;
    a3 += (m[v3 + i] as number) * x;
    b3 += (m[v3 + i + 1] as number) * y;
  }
  into[0] = a0 + b0;
  into[1] = a1 + b1;
  into[2] = a2 + b2;
  into[3] = a3 + b3;
}

/** Takes multiples of four columns from another. */
export function takeFour(m: Float64Array, { v, stride, n }: Four, c: number, factors: Float64Array): void {
  const [v1, v2, v3] = [v + stride, v + 2 * stride, v + 3 * stride];
  const [f0, f1, f2, f3] = factors as unknown as readonly [number, number, number, number];
  for (let i = 0; i < n; i++)
    m[c + i] =
      (m[c + i] as number) -
      ((m[v + i] as number) * f0 +
        (m[v1 + i] as number) * f1 +
        ((m[v2 + i] as number) * f2 + (m[v3 + i] as number) * f3));
}

/** c -= factor v. */
export function takeOne(
  m: Float64Array,
  of: { readonly v: number; readonly n: number },
  c: number,
  factor: number,
): void {
  const { v, n } = of;
  for (let i = 0; i < n; i++) m[c + i] = (m[c + i] as number) - factor * (m[v + i] as number);
}

/** into = x, or x times a factor of each row where factors is not 0; returns the largest |x|, NaN where one is. */
export function weigh(m: Float64Array, x: number, factors: number, n: number, into: number): number {
  let largest = 0;
  for (let i = 0; i < n; i++) {
    const value = m[x + i] as number;
    const size = Math.abs(value);
    if (!(size <= largest)) largest = Number.isNaN(largest) ? largest : size;
    m[into + i] = factors === 0 ? value : value * (m[factors + i] as number);
  }
  return largest;
}
