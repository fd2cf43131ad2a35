import { plainRestOfProduct } from '../numbers/error-free';
import { BLOCK, CHUNK, type Range } from './chunks';

/** What `settleChunks` works on; places in the memory. */
export interface Settling {
  readonly columns: number;
  readonly stride: number;
  readonly k: number;
  /** 1 / root v of each row, or 0 for none. */
  readonly roots: number;
  /** Of each column d and |b|. */
  readonly steps: number;
  readonly high: number;
  readonly low: number;
  readonly whitened: number;
  /** Of each chunk the largest |whitened|, and the largest whitened |y| + sum |x b|. */
  readonly largest: number;
  /** Room for two columns of a block. */
  readonly work: number;
}

/** The last step of the residuals: r less X d, in high; whitened: r times the root factors. */
export function settleChunks(m: Float64Array, of: Settling, { rows, from, to }: Range): void {
  const { columns, stride, k, roots, steps, high, low, whitened, work } = of;
  for (let chunk = from; chunk < to; chunk++) {
    let most = 0;
    let mostPart = 0;
    const end = Math.min(rows, (chunk + 1) * CHUNK);
    for (let row = chunk * CHUNK; row < end; row += BLOCK) {
      for (let i = 0; i < BLOCK; i++) {
        m[work + i] = Math.abs(m[columns + k * stride + row + i] as number);
        m[work + BLOCK + i] = m[low + row + i] as number;
      }
      for (let j = 0; j < k; j++) takeStep(m, columns + j * stride + row, steps + 2 * j, work);
      for (let i = 0; i < BLOCK; i++) {
        const r = (m[high + row + i] as number) + (m[work + BLOCK + i] as number);
        const root = roots === 0 ? 1 : (m[roots + row + i] as number);
        m[high + row + i] = r;
        m[whitened + row + i] = r * root;
        most = Math.max(most, Math.abs(r * root));
        mostPart = Math.max(mostPart, (m[work + i] as number) * root);
      }
    }
    m[of.largest + 2 * chunk] = most;
    m[of.largest + 2 * chunk + 1] = mostPart;
  }
}

function takeStep(m: Float64Array, x: number, step: number, work: number): void {
  const d = m[step] as number;
  const size = m[step + 1] as number;
  for (let i = 0; i < BLOCK; i++) {
    const value = m[x + i] as number;
    m[work + i] = (m[work + i] as number) + size * Math.abs(value);
    m[work + BLOCK + i] = (m[work + BLOCK + i] as number) - d * value;
  }
}

/** 1 / root v, and 1 / v in double-double, of every chunk; v: above 0. */
export function weightChunks(
  m: Float64Array,
  { v, roots, high, low }: { readonly v: number; readonly roots: number; readonly high: number; readonly low: number },
  { rows, from, to }: Range,
): void {
  for (let row = from * CHUNK; row < Math.min(rows, to * CHUNK); row++) {
    const value = m[v + row] as number;
    m[roots + row] = 1 / Math.sqrt(value);
    const h = 1 / value;
    const product = h * value;
    m[high + row] = h;
    m[low + row] = (1 - product - plainRestOfProduct(h, value, product)) * h;
  }
}
