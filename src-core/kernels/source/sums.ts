// Sums over columns in memory. A column is a byte address; lengths are whole multiples of 8. Every sum has a fixed order, which the
// TypeScript twin repeats: lane by lane, then the lanes.

/** Both lanes together. */
// @ts-ignore: decorator
@inline
export function across(lanes: v128): f64 {
  return f64x2.extract_lane(lanes, 0) + f64x2.extract_lane(lanes, 1);
}

/** Sum of a b over n places, in eight strands. */
export function dot(a: usize, b: usize, n: i32): f64 {
  let s0 = f64x2.splat(0);
  let s1 = s0;
  let s2 = s0;
  let s3 = s0;
  const end = a + ((<usize>n) << 3);
  while (a < end) {
    s0 = f64x2.add(s0, f64x2.mul(v128.load(a), v128.load(b)));
    s1 = f64x2.add(s1, f64x2.mul(v128.load(a, 16), v128.load(b, 16)));
    s2 = f64x2.add(s2, f64x2.mul(v128.load(a, 32), v128.load(b, 32)));
    s3 = f64x2.add(s3, f64x2.mul(v128.load(a, 48), v128.load(b, 48)));
    a += 64;
    b += 64;
  }
  return across(f64x2.add(f64x2.add(s0, s1), f64x2.add(s2, s3)));
}

/** Sums of four columns (stride apart) times each of two others, into eight places: four for c, then four for d. */
export function dotsOfFour(v: usize, stride: usize, c: usize, d: usize, n: i32, into: usize): void {
  const v1 = v + stride;
  const v2 = v1 + stride;
  const v3 = v2 + stride;
  let c0 = f64x2.splat(0);
  let c1 = c0;
  let c2 = c0;
  let c3 = c0;
  let d0 = c0;
  let d1 = c0;
  let d2 = c0;
  let d3 = c0;
  const end = (<usize>n) << 3;
  for (let at: usize = 0; at < end; at += 16) {
    const x = v128.load(c + at);
    const y = v128.load(d + at);
    let w = v128.load(v + at);
    c0 = f64x2.add(c0, f64x2.mul(w, x));
    d0 = f64x2.add(d0, f64x2.mul(w, y));
    w = v128.load(v1 + at);
    c1 = f64x2.add(c1, f64x2.mul(w, x));
    d1 = f64x2.add(d1, f64x2.mul(w, y));
    w = v128.load(v2 + at);
    c2 = f64x2.add(c2, f64x2.mul(w, x));
    d2 = f64x2.add(d2, f64x2.mul(w, y));
    w = v128.load(v3 + at);
    c3 = f64x2.add(c3, f64x2.mul(w, x));
    d3 = f64x2.add(d3, f64x2.mul(w, y));
  }
  store<f64>(into, across(c0));
  store<f64>(into, across(c1), 8);
  store<f64>(into, across(c2), 16);
  store<f64>(into, across(c3), 24);
  store<f64>(into, across(d0), 32);
  store<f64>(into, across(d1), 40);
  store<f64>(into, across(d2), 48);
  store<f64>(into, across(d3), 56);
}

/** Takes multiples of four columns (stride apart) from two others; factors: eight, as `dotsOfFour` leaves them. */
export function takeFour(v: usize, stride: usize, c: usize, d: usize, n: i32, factors: usize): void {
  const v1 = v + stride;
  const v2 = v1 + stride;
  const v3 = v2 + stride;
  const c0 = v128.load64_splat(factors);
  const c1 = v128.load64_splat(factors, 8);
  const c2 = v128.load64_splat(factors, 16);
  const c3 = v128.load64_splat(factors, 24);
  const d0 = v128.load64_splat(factors, 32);
  const d1 = v128.load64_splat(factors, 40);
  const d2 = v128.load64_splat(factors, 48);
  const d3 = v128.load64_splat(factors, 56);
  const end = (<usize>n) << 3;
  for (let at: usize = 0; at < end; at += 16) {
    const w0 = v128.load(v + at);
    const w1 = v128.load(v1 + at);
    const w2 = v128.load(v2 + at);
    const w3 = v128.load(v3 + at);
    const alongC = f64x2.add(
      f64x2.add(f64x2.mul(w0, c0), f64x2.mul(w1, c1)),
      f64x2.add(f64x2.mul(w2, c2), f64x2.mul(w3, c3)),
    );
    v128.store(c + at, f64x2.sub(v128.load(c + at), alongC));
    const alongD = f64x2.add(
      f64x2.add(f64x2.mul(w0, d0), f64x2.mul(w1, d1)),
      f64x2.add(f64x2.mul(w2, d2), f64x2.mul(w3, d3)),
    );
    v128.store(d + at, f64x2.sub(v128.load(d + at), alongD));
  }
}

/** c -= factor v. */
export function takeOne(v: usize, c: usize, n: i32, factor: f64): void {
  const f = f64x2.splat(factor);
  const end = (<usize>n) << 3;
  for (let at: usize = 0; at < end; at += 16)
    v128.store(c + at, f64x2.sub(v128.load(c + at), f64x2.mul(f, v128.load(v + at))));
}

/** c *= factor. */
export function scale(c: usize, n: i32, factor: f64): void {
  const f = f64x2.splat(factor);
  const end = (<usize>n) << 3;
  for (let at: usize = 0; at < end; at += 16) v128.store(c + at, f64x2.mul(f, v128.load(c + at)));
}

/** into = x, or x times a factor of each row where factors is not 0; returns the largest |x|, NaN where one is. */
export function weigh(x: usize, factors: usize, n: i32, into: usize): f64 {
  let largest = f64x2.splat(0);
  const end = (<usize>n) << 3;
  if (factors == 0) {
    for (let at: usize = 0; at < end; at += 16) {
      const value = v128.load(x + at);
      largest = f64x2.max(largest, f64x2.abs(value));
      v128.store(into + at, value);
    }
  } else {
    for (let at: usize = 0; at < end; at += 16) {
      const value = v128.load(x + at);
      largest = f64x2.max(largest, f64x2.abs(value));
      v128.store(into + at, f64x2.mul(value, v128.load(factors + at)));
    }
  }
  return max<f64>(f64x2.extract_lane(largest, 0), f64x2.extract_lane(largest, 1));
}
