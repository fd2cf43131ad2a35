// Residuals in double-double, and what the columns still find along them.
import { across } from './sums';
import { BLOCK, CHUNK } from './reduce';

const SPLIT: f64 = 134217729;

/** What rounding took from product = a b, lane by lane (Dekker 1971). */
// @ts-ignore: a decorator of AssemblyScript
@inline
function restOfProduct(a: v128, b: v128, product: v128): v128 {
  const split = f64x2.splat(SPLIT);
  let spread = f64x2.mul(split, a);
  const a1 = f64x2.sub(spread, f64x2.sub(spread, a));
  const a2 = f64x2.sub(a, a1);
  spread = f64x2.mul(split, b);
  const b1 = f64x2.sub(spread, f64x2.sub(spread, b));
  const b2 = f64x2.sub(b, b1);
  let rest = f64x2.sub(f64x2.mul(a1, b1), product);
  rest = f64x2.add(rest, f64x2.mul(a1, b2));
  rest = f64x2.add(rest, f64x2.mul(a2, b1));
  return f64x2.add(rest, f64x2.mul(a2, b2));
}

/** hi, lo: r -= b x over one block; b: high, low and the two halves of high. lows: 0 where the column has none. */
function takeWide(high: usize, low: usize, x: usize, lows: usize, b: usize): void {
  const split = f64x2.splat(SPLIT);
  const f = v128.load64_splat(b);
  const fl = v128.load64_splat(b, 8);
  const f1 = v128.load64_splat(b, 16);
  const f2 = v128.load64_splat(b, 24);
  const end = (<usize>BLOCK) << 3;
  for (let at: usize = 0; at < end; at += 16) {
    const value = v128.load(x + at);
    const product = f64x2.mul(f, value);
    const spread = f64x2.mul(split, value);
    const x1 = f64x2.sub(spread, f64x2.sub(spread, value));
    const x2 = f64x2.sub(value, x1);
    let error = f64x2.sub(f64x2.mul(f1, x1), product);
    error = f64x2.add(error, f64x2.mul(f1, x2));
    error = f64x2.add(error, f64x2.mul(f2, x1));
    error = f64x2.add(error, f64x2.mul(f2, x2));
    let small = f64x2.mul(fl, value);
    if (lows != 0) small = f64x2.add(small, f64x2.mul(f, v128.load(lows + at)));
    error = f64x2.add(error, small);
    const old = v128.load(high + at);
    const next = f64x2.sub(old, product);
    const part = f64x2.sub(next, old);
    const rest = f64x2.sub(f64x2.sub(old, f64x2.sub(next, part)), f64x2.add(product, part));
    v128.store(high + at, next);
    v128.store(low + at, f64x2.add(v128.load(low + at), f64x2.sub(rest, error)));
  }
}

/** High and low brought to one rounded number and its rest. */
function settle(high: usize, low: usize): void {
  const end = (<usize>BLOCK) << 3;
  for (let at: usize = 0; at < end; at += 16) {
    const h = v128.load(high + at);
    const l = v128.load(low + at);
    const sum = f64x2.add(h, l);
    const part = f64x2.sub(sum, h);
    v128.store(high + at, sum);
    v128.store(low + at, f64x2.add(f64x2.sub(h, f64x2.sub(sum, part)), f64x2.sub(l, part)));
  }
}

/** into = r w in double-double, with the halves of its high part: four columns of a block. factors: 0 for w = 1. */
function weighWide(high: usize, low: usize, factors: usize, rests: usize, into: usize): void {
  const split = f64x2.splat(SPLIT);
  const step = (<usize>BLOCK) << 3;
  for (let at: usize = 0; at < step; at += 16) {
    let h = v128.load(high + at);
    let l = v128.load(low + at);
    if (factors != 0) {
      const w = v128.load(factors + at);
      const product = f64x2.mul(h, w);
      const error = restOfProduct(h, w, product);
      l = f64x2.add(error, f64x2.add(f64x2.mul(h, v128.load(rests + at)), f64x2.mul(w, l)));
      h = product;
    }
    const spread = f64x2.mul(split, h);
    const h1 = f64x2.sub(spread, f64x2.sub(spread, h));
    v128.store(into + at, h);
    v128.store(into + step + at, l);
    v128.store(into + 2 * step + at, h1);
    v128.store(into + 3 * step + at, f64x2.sub(h, h1));
  }
}

/** Adds the product of a column with the weighed residuals of a block to a double-double sum in memory. */
function addAlong(x: usize, lows: usize, weighed: usize, into: usize): void {
  const split = f64x2.splat(SPLIT);
  const step = (<usize>BLOCK) << 3;
  let sum = f64x2.splat(0);
  let rest = sum;
  for (let at: usize = 0; at < step; at += 16) {
    const value = v128.load(x + at);
    const y = v128.load(weighed + at);
    const product = f64x2.mul(value, y);
    const spread = f64x2.mul(split, value);
    const x1 = f64x2.sub(spread, f64x2.sub(spread, value));
    const x2 = f64x2.sub(value, x1);
    const y1 = v128.load(weighed + 2 * step + at);
    const y2 = v128.load(weighed + 3 * step + at);
    let error = f64x2.sub(f64x2.mul(x1, y1), product);
    error = f64x2.add(error, f64x2.mul(x1, y2));
    error = f64x2.add(error, f64x2.mul(x2, y1));
    error = f64x2.add(error, f64x2.mul(x2, y2));
    let small = f64x2.mul(value, v128.load(weighed + step + at));
    if (lows != 0) small = f64x2.add(small, f64x2.mul(y, v128.load(lows + at)));
    error = f64x2.add(error, small);
    const next = f64x2.add(sum, product);
    const part = f64x2.sub(next, sum);
    rest = f64x2.add(
      rest,
      f64x2.add(f64x2.add(f64x2.sub(sum, f64x2.sub(next, part)), f64x2.sub(product, part)), error),
    );
    sum = next;
  }
  addPair(into, f64x2.extract_lane(sum, 0), f64x2.extract_lane(rest, 0));
  addPair(into, f64x2.extract_lane(sum, 1), f64x2.extract_lane(rest, 1));
}

/** A pair in memory += high + low. */
function addPair(into: usize, high: f64, low: f64): void {
  const old = load<f64>(into);
  const next = old + high;
  const part = next - old;
  const rest = old - (next - part) + (high - part) + (load<f64>(into, 8) + low);
  const sum = next + rest;
  store<f64>(into, sum);
  store<f64>(into, next - sum + rest, 8);
}

/**
 * r = y - X b, and X'W r of every chunk, in double-double.
 *
 * columns: k and the response, stride apart; lows: their low parts, each used where its flag is not 0. b: four numbers a column. along: for
 * each chunk k pairs and one of r'W r. work: four columns of a block.
 */
export function residualChunks(
  columns: usize,
  lows: usize,
  flags: usize,
  stride: usize,
  k: i32,
  factors: usize,
  rests: usize,
  b: usize,
  high: usize,
  low: usize,
  along: usize,
  work: usize,
  rows: i32,
  from: i32,
  to: i32,
): void {
  const step = (<usize>BLOCK) << 3;
  const size = (<usize>(k + 1)) << 4;
  for (let chunk = from; chunk < to; chunk++) {
    const sums = along + <usize>chunk * size;
    memory.fill(sums, 0, size);
    const end = min<i32>(rows, (chunk + 1) * CHUNK);
    for (let row = chunk * CHUNK; row < end; row += BLOCK) {
      const at = (<usize>row) << 3;
      const h = high + at;
      const l = low + at;
      memory.copy(h, columns + <usize>k * stride + at, step);
      if (load<f64>(flags + ((<usize>k) << 3)) != 0) memory.copy(l, lows + <usize>k * stride + at, step);
      else memory.fill(l, 0, step);
      for (let j = 0; j < k; j++) {
        const own = load<f64>(flags + ((<usize>j) << 3)) != 0 ? lows + <usize>j * stride + at : 0;
        takeWide(h, l, columns + <usize>j * stride + at, own, b + ((<usize>j) << 5));
      }
      settle(h, l);
      weighWide(h, l, factors == 0 ? 0 : factors + at, rests + at, work);
      for (let j = 0; j < k; j++) {
        const own = load<f64>(flags + ((<usize>j) << 3)) != 0 ? lows + <usize>j * stride + at : 0;
        addAlong(columns + <usize>j * stride + at, own, work, sums + ((<usize>j) << 4));
      }
      addAlong(h, l, work, sums + ((<usize>k) << 4));
    }
  }
}

/** Pairs of all chunks added to those of the first, in their order. */
export function joinPairs(pairs: usize, count: i32, each: i32): void {
  for (let chunk = 1; chunk < count; chunk++)
    for (let i = 0; i < each; i++) {
      const own = pairs + ((<usize>(chunk * each + i)) << 4);
      addPair(pairs + ((<usize>i) << 4), load<f64>(own), load<f64>(own, 8));
    }
}

/**
 * The last step: r less X d, in high; whitened: r times the root factors (as they are where roots is 0). Of every chunk the largest |whitened|
 * and the largest whitened |y| + sum |x b|, two numbers. steps: d, |b|, two numbers a column; work: two columns of a block.
 */
export function settleChunks(
  columns: usize,
  stride: usize,
  k: i32,
  roots: usize,
  steps: usize,
  high: usize,
  low: usize,
  whitened: usize,
  largest: usize,
  work: usize,
  rows: i32,
  from: i32,
  to: i32,
): void {
  const step = (<usize>BLOCK) << 3;
  for (let chunk = from; chunk < to; chunk++) {
    let most = f64x2.splat(0);
    let mostPart = most;
    const end = min<i32>(rows, (chunk + 1) * CHUNK);
    for (let row = chunk * CHUNK; row < end; row += BLOCK) {
      const base = (<usize>row) << 3;
      const y = columns + <usize>k * stride + base;
      for (let at: usize = 0; at < step; at += 16) {
        v128.store(work + at, f64x2.abs(v128.load(y + at)));
        v128.store(work + step + at, v128.load(low + base + at));
      }
      for (let j = 0; j < k; j++) {
        const x = columns + <usize>j * stride + base;
        const d = v128.load64_splat(steps + ((<usize>j) << 4));
        const size = v128.load64_splat(steps + ((<usize>j) << 4), 8);
        for (let at: usize = 0; at < step; at += 16) {
          const value = v128.load(x + at);
          v128.store(work + at, f64x2.add(v128.load(work + at), f64x2.mul(size, f64x2.abs(value))));
          v128.store(work + step + at, f64x2.sub(v128.load(work + step + at), f64x2.mul(d, value)));
        }
      }
      for (let at: usize = 0; at < step; at += 16) {
        const r = f64x2.add(v128.load(high + base + at), v128.load(work + step + at));
        v128.store(high + base + at, r);
        let w = r;
        let part = v128.load(work + at);
        if (roots != 0) {
          const root = v128.load(roots + base + at);
          w = f64x2.mul(r, root);
          part = f64x2.mul(part, root);
        }
        v128.store(whitened + base + at, w);
        most = f64x2.max(most, f64x2.abs(w));
        mostPart = f64x2.max(mostPart, part);
      }
    }
    const own = largest + ((<usize>chunk) << 4);
    store<f64>(own, max<f64>(f64x2.extract_lane(most, 0), f64x2.extract_lane(most, 1)));
    store<f64>(own, max<f64>(f64x2.extract_lane(mostPart, 0), f64x2.extract_lane(mostPart, 1)), 8);
  }
}

/** 1 / root v, and 1 / v in double-double, of every chunk; v: above 0. */
export function weightChunks(v: usize, roots: usize, high: usize, low: usize, rows: i32, from: i32, to: i32): void {
  const one = f64x2.splat(1);
  const first = (<usize>from * CHUNK) << 3;
  const end = (<usize>min<i32>(rows, to * CHUNK)) << 3;
  for (let at = first; at < end; at += 16) {
    const value = v128.load(v + at);
    v128.store(roots + at, f64x2.div(one, f64x2.sqrt(value)));
    const h = f64x2.div(one, value);
    const product = f64x2.mul(h, value);
    const error = restOfProduct(h, value, product);
    v128.store(high + at, h);
    v128.store(low + at, f64x2.mul(f64x2.sub(f64x2.sub(one, product), error), h));
  }
}
