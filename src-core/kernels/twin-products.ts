import { BLOCK, CHUNK, type Range } from './chunks';
import { dotsOfFour, weigh } from './twin-sums';

/** What `timesChunks` works on; places in the memory. */
export interface Product {
  /** k columns, stride apart. */
  readonly columns: number;
  readonly stride: number;
  readonly k: number;
  /** A factor for each row before the product, or 0 for none; and one after it. */
  readonly factors: number;
  readonly after: number;
  /** For each pair of columns that come out, in turn, two numbers for each of the k. */
  readonly matrix: number;
  /** 1 where column c takes the columns to c alone, -1 where it takes those from c on, 0 for all. */
  readonly upTo: number;
  /** 4 ceil(k / 4) columns, intoStride apart, the last of them zeros. */
  readonly into: number;
  readonly intoStride: number;
  /** Of each chunk the inner products of what comes out, from the diagonal on, 4 ceil(k / 4) squared; 0 for none. */
  readonly grams: number;
  /** Room for k columns of a block. */
  readonly block: number;
}

/** Columns, each row times its factor, times a small matrix. */
export function timesChunks(m: Float64Array, of: Product, { rows, from, to }: Range): void {
  const { columns, stride, k, factors, after, matrix, upTo, into, intoStride, grams, block } = of;
  const wide = 4 * Math.ceil(k / 4);
  for (let chunk = from; chunk < to; chunk++) {
    const gram = grams + chunk * wide * wide;
    if (grams !== 0) m.fill(0, gram, gram + wide * wide);
    const end = Math.min(rows, (chunk + 1) * CHUNK);
    for (let row = chunk * CHUNK; row < end; row += BLOCK) {
      for (let c = 0; c < k; c++)
        weigh(m, columns + c * stride + row, factors && factors + row, BLOCK, block + c * BLOCK);
      for (let c = 0; c < wide; c++) {
        const pair = c & ~1;
        const first = upTo < 0 ? Math.min(pair, k) : 0;
        const last = upTo > 0 ? Math.min(pair + 2, k) : k;
        const out = into + c * intoStride + row;
        combine(m, { block, first, last, coefficients: matrix + pair * k + (c & 1), out });
        if (after !== 0) weigh(m, out, after + row, BLOCK, out);
      }
      if (grams !== 0) addGram(m, { columns: into + row, stride: intoStride, wide, gram });
    }
  }
}

function combine(
  m: Float64Array,
  of: { block: number; first: number; last: number; coefficients: number; out: number },
): void {
  const { block, first, last, coefficients, out } = of;
  m.fill(0, out, out + BLOCK);
  for (let j = first; j < last; j++) {
    const f = m[coefficients + 2 * j] as number;
    const x = block + j * BLOCK;
    for (let i = 0; i < BLOCK; i++) m[out + i] = (m[out + i] as number) + f * (m[x + i] as number);
  }
}

const four = new Float64Array(4);

function addGram(m: Float64Array, of: { columns: number; stride: number; wide: number; gram: number }): void {
  const { columns, stride, wide, gram } = of;
  for (let i = 0; i < wide; i += 4)
    for (let j = i; j < wide; j++) {
      dotsOfFour(m, { v: columns + i * stride, stride, n: BLOCK }, columns + j * stride, four);
      for (let p = 0; p < 4; p++) {
        const place = gram + (i + p) * wide + j;
        m[place] = (m[place] as number) + (four[p] as number);
      }
    }
}

/** Sums of all chunks added to those of the first, in their order. */
export function joinSums(m: Float64Array, sums: number, count: number, each: number): void {
  for (let chunk = 1; chunk < count; chunk++)
    for (let i = 0; i < each; i++) m[sums + i] = (m[sums + i] as number) + (m[sums + chunk * each + i] as number);
}
