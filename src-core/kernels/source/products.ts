// Tall columns times a small matrix, and their inner products.
import { dotsOfFour, weigh } from './sums';
import { BLOCK, CHUNK, eightPlaces } from './reduce';

/** Two columns of block times a small matrix: into c and d, n rows. coefficients: two numbers for each of the columns first to last. */
function combine(block: usize, n: i32, first: i32, last: i32, coefficients: usize, c: usize, d: usize): void {
  const stride = (<usize>n) << 3;
  for (let at: usize = 0; at < stride; at += 64) {
    let c0 = f64x2.splat(0);
    let c1 = c0;
    let c2 = c0;
    let c3 = c0;
    let d0 = c0;
    let d1 = c0;
    let d2 = c0;
    let d3 = c0;
    let x = block + <usize>first * stride + at;
    for (let j = first; j < last; j++) {
      const f = v128.load64_splat(coefficients + ((<usize>j) << 4));
      const g = v128.load64_splat(coefficients + ((<usize>j) << 4), 8);
      let value = v128.load(x);
      c0 = f64x2.add(c0, f64x2.mul(f, value));
      d0 = f64x2.add(d0, f64x2.mul(g, value));
      value = v128.load(x, 16);
      c1 = f64x2.add(c1, f64x2.mul(f, value));
      d1 = f64x2.add(d1, f64x2.mul(g, value));
      value = v128.load(x, 32);
      c2 = f64x2.add(c2, f64x2.mul(f, value));
      d2 = f64x2.add(d2, f64x2.mul(g, value));
      value = v128.load(x, 48);
      c3 = f64x2.add(c3, f64x2.mul(f, value));
      d3 = f64x2.add(d3, f64x2.mul(g, value));
      x += stride;
    }
    v128.store(c + at, c0);
    v128.store(c + at, c1, 16);
    v128.store(c + at, c2, 32);
    v128.store(c + at, c3, 48);
    v128.store(d + at, d0);
    v128.store(d + at, d1, 16);
    v128.store(d + at, d2, 32);
    v128.store(d + at, d3, 48);
  }
}

/**
 * Columns, each row times its factor, times a small matrix, of every chunk; with the inner products of what comes out where grams is not 0.
 *
 * columns: k, stride apart; matrix: for each pair of columns that come out, in turn, two numbers for each of the k. upTo: 1 where column c
 * takes the columns to c alone, -1 where it takes those from c on, 0 for all. into: 4 ceil(k / 4) columns, intoStride apart, the last of them zeros.
 * block: room for k columns of a block.
 */
export function timesChunks(
  columns: usize,
  stride: usize,
  k: i32,
  factors: usize,
  matrix: usize,
  upTo: i32,
  into: usize,
  intoStride: usize,
  after: usize,
  grams: usize,
  block: usize,
  rows: i32,
  from: i32,
  to: i32,
): void {
  const wide = (k + 3) & ~3;
  const size = (<usize>(wide * wide)) << 3;
  for (let chunk = from; chunk < to; chunk++) {
    const gram = grams + <usize>chunk * size;
    if (grams != 0) memory.fill(gram, 0, size);
    const end = min<i32>(rows, (chunk + 1) * CHUNK);
    for (let row = chunk * CHUNK; row < end; row += BLOCK) {
      const at = (<usize>row) << 3;
      for (let c = 0; c < k; c++)
        weigh(columns + <usize>c * stride + at, factors == 0 ? 0 : factors + at, BLOCK, block + (<usize>(c * BLOCK) << 3));
      for (let c = 0; c < wide; c += 2) {
        const first = upTo < 0 ? min<i32>(c, k) : 0;
        const last = upTo > 0 ? min<i32>(c + 2, k) : k;
        const one = into + <usize>c * intoStride + at;
        combine(block, BLOCK, first, last, matrix + (<usize>(c * k) << 3), one, one + intoStride);
        if (after != 0) {
          weigh(one, after + at, BLOCK, one);
          weigh(one + intoStride, after + at, BLOCK, one + intoStride);
        }
      }
      if (grams != 0) addGram(into + at, intoStride, wide, gram);
    }
  }
}

/** Adds the inner products of one block of columns, of four rows of the matrix from the diagonal block on. */
function addGram(columns: usize, stride: usize, wide: i32, gram: usize): void {
  const eight = eightPlaces();
  for (let i = 0; i < wide; i += 4)
    for (let j = i; j < wide; j += 2) {
      const c = columns + <usize>j * stride;
      dotsOfFour(columns + <usize>i * stride, stride, c, c + stride, BLOCK, eight);
      for (let p = 0; p < 4; p++)
        for (let q = 0; q < 2; q++) {
          const place = gram + (<usize>((i + p) * wide + j + q) << 3);
          store<f64>(place, load<f64>(place) + load<f64>(eight + ((<usize>(q * 4 + p)) << 3)));
        }
    }
}

/** Sums of all chunks added to those of the first, in their order. */
export function joinSums(sums: usize, count: i32, each: i32): void {
  for (let chunk = 1; chunk < count; chunk++)
    for (let i = 0; i < each; i++) {
      const place = sums + ((<usize>i) << 3);
      store<f64>(place, load<f64>(place) + load<f64>(sums + ((<usize>(chunk * each + i)) << 3)));
    }
}
