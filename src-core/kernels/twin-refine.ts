import { plainRestOfProduct } from '../numbers/error-free';
import { BLOCK, CHUNK, type Range } from './chunks';

/** 2^27 + 1: splits a double into two halves of 26 bits (Dekker 1971). */
const SPLIT = 134217729;

/** What `residualChunks` works on; places in the memory. */
export interface Residuals {
  /** k columns and the response, stride apart, and their low parts, each used where its flag is not 0. */
  readonly columns: number;
  readonly lows: number;
  readonly flags: number;
  readonly stride: number;
  readonly k: number;
  /** 1 / v of each row in double-double, or 0 for none. */
  readonly factors: number;
  readonly rests: number;
  /** Of each column high, low and the two halves of high. */
  readonly b: number;
  readonly high: number;
  readonly low: number;
  /** Of each chunk k pairs X'W r, and the pair r'W r. */
  readonly along: number;
  /** Room for four columns of a block. */
  readonly work: number;
}

/**
 * r = y - X b, and X'W r of every chunk, in double-double.
 *
 * Source: Dekker 1971; Ogita, Rump & Oishi 2005.
 */
export function residualChunks(m: Float64Array, of: Residuals, { rows, from, to }: Range): void {
  const { columns, lows, flags, stride, k, along, work } = of;
  const lowOf = (j: number, row: number) => (m[flags + j] === 0 ? 0 : lows + j * stride + row);
  for (let chunk = from; chunk < to; chunk++) {
    const sums = along + chunk * 2 * (k + 1);
    m.fill(0, sums, sums + 2 * (k + 1));
    const end = Math.min(rows, (chunk + 1) * CHUNK);
    for (let row = chunk * CHUNK; row < end; row += BLOCK) {
      const [high, low] = [of.high + row, of.low + row];
      m.copyWithin(high, columns + k * stride + row, columns + k * stride + row + BLOCK);
      const own = lowOf(k, row);
      if (own === 0) m.fill(0, low, low + BLOCK);
      else m.copyWithin(low, own, own + BLOCK);
      for (let j = 0; j < k; j++)
        takeWide(m, { high, low, x: columns + j * stride + row, lows: lowOf(j, row), b: of.b + 4 * j });
      settle(m, high, low);
      weighWide(m, { high, low, factors: of.factors && of.factors + row, rests: of.rests + row, work });
      for (let j = 0; j < k; j++)
        addAlong(m, { x: columns + j * stride + row, lows: lowOf(j, row), work, into: sums + 2 * j });
      addAlong(m, { x: high, lows: low, work, into: sums + 2 * k });
    }
  }
}

/** r -= b x over one block. */
function takeWide(m: Float64Array, of: { high: number; low: number; x: number; lows: number; b: number }): void {
  const { high, low, x, lows, b } = of;
  const f = m[b] as number;
  const fl = m[b + 1] as number;
  const f1 = m[b + 2] as number;
  const f2 = m[b + 3] as number;
  for (let i = 0; i < BLOCK; i++) {
    const value = m[x + i] as number;
    const product = f * value;
    const spread = SPLIT * value;
    const x1 = spread - (spread - value);
    const x2 = value - x1;
    const small = lows === 0 ? fl * value : fl * value + f * (m[lows + i] as number);
    const error = f1 * x1 - product + f1 * x2 + f2 * x1 + f2 * x2 + small;
    const old = m[high + i] as number;
    const next = old - product;
    const part = next - old;
    m[high + i] = next;
    m[low + i] = (m[low + i] as number) + (old - (next - part) - (product + part) - error);
  }
}

/** High and low brought to one rounded number and its rest. */
function settle(m: Float64Array, high: number, low: number): void {
  for (let i = 0; i < BLOCK; i++) {
    const h = m[high + i] as number;
    const l = m[low + i] as number;
    const sum = h + l;
    const part = sum - h;
    m[high + i] = sum;
    m[low + i] = h - (sum - part) + (l - part);
  }
}

/** r w in double-double, with the halves of its high part: four columns of a block. */
function weighWide(
  m: Float64Array,
  of: { high: number; low: number; factors: number; rests: number; work: number },
): void {
  const { high, low, factors, rests, work } = of;
  for (let i = 0; i < BLOCK; i++) {
    let h = m[high + i] as number;
    let l = m[low + i] as number;
    if (factors !== 0) {
      const w = m[factors + i] as number;
      const product = h * w;
      l = plainRestOfProduct(h, w, product) + (h * (m[rests + i] as number) + w * l);
      h = product;
    }
    const spread = SPLIT * h;
    const h1 = spread - (spread - h);
    m[work + i] = h;
    m[work + BLOCK + i] = l;
    m[work + 2 * BLOCK + i] = h1;
    m[work + 3 * BLOCK + i] = h - h1;
  }
}

const lanes = new Float64Array(4);

/** Adds the product of a column with the weighed residuals of a block to a pair: even rows, then odd ones. */
function addAlong(m: Float64Array, of: { x: number; lows: number; work: number; into: number }): void {
  const { x, lows, work, into } = of;
  for (let lane = 0; lane < 2; lane++) {
    let sum = 0;
    let rest = 0;
    for (let i = lane; i < BLOCK; i += 2) {
      const value = m[x + i] as number;
      const y = m[work + i] as number;
      const product = value * y;
      const spread = SPLIT * value;
      const x1 = spread - (spread - value);
      const x2 = value - x1;
      const y1 = m[work + 2 * BLOCK + i] as number;
      const y2 = m[work + 3 * BLOCK + i] as number;
      const own = value * (m[work + BLOCK + i] as number);
      const small = lows === 0 ? own : own + y * (m[lows + i] as number);
      const error = x1 * y1 - product + x1 * y2 + x2 * y1 + x2 * y2 + small;
      const next = sum + product;
      const part = next - sum;
      rest += sum - (next - part) + (product - part) + error;
      sum = next;
    }
    lanes[lane] = sum;
    lanes[2 + lane] = rest;
  }
  addPair(m, into, lanes[0] as number, lanes[2] as number);
  addPair(m, into, lanes[1] as number, lanes[3] as number);
}

/** A pair in memory += high + low. */
function addPair(m: Float64Array, into: number, high: number, low: number): void {
  const old = m[into] as number;
  const next = old + high;
  const part = next - old;
  const rest = old - (next - part) + (high - part) + ((m[into + 1] as number) + low);
  const sum = next + rest;
  m[into] = sum;
  m[into + 1] = next - sum + rest;
}

/** Pairs of all chunks added to those of the first, in their order. */
export function joinPairs(m: Float64Array, pairs: number, count: number, each: number): void {
  for (let chunk = 1; chunk < count; chunk++)
    for (let i = 0; i < each; i++) {
      const own = pairs + 2 * (chunk * each + i);
      addPair(m, pairs + 2 * i, m[own] as number, m[own + 1] as number);
    }
}
