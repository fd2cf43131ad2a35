import { BLOCK } from './chunks';
import type { Machine } from './machine';

const FIRST = 1024;
const K = 5;
const STRIDE = BLOCK + 8;

/** Runs every kind of step on one block of made-up numbers, and returns all that it leaves in the memory; null where there is no memory. */
export function trialOf(run: Machine): Float64Array | null {
  const columns = FIRST;
  const v = columns + (K + 1) * STRIDE;
  const [roots, high, low, r, rest] = [1, 2, 3, 4, 5].map((i) => v + i * BLOCK) as [
    number,
    number,
    number,
    number,
    number,
  ];
  const whitened = rest + BLOCK;
  const small = whitened + BLOCK;
  const triangles = small + 128;
  const block = triangles + 64;
  const into = block + BLOCK * (K + 2) + 1024;
  const grams = into + 8 * STRIDE;
  const end = grams + 64;
  const m = run.memory(end);
  if (!m) return null;
  m.fill(0, FIRST, end);
  const range = { rows: BLOCK, from: 0, to: 1 };
  // Numbers without a pattern in their digits: a multiplicative sequence modulo a prime.
  let state = 1;
  const next = () => (state = (state * 48271) % 2147483647) / 2147483647;
  for (let i = columns; i < v + BLOCK; i++) m[i] = next() + 0.1;
  run.weights({ v, roots, high, low }, range);
  run.reduce({ columns, stride: STRIDE, k: K, factors: roots, triangles, block }, range);
  for (let i = 0; i < 4 * K; i++) m[small + i] = next();
  const common = { columns, stride: STRIDE, k: K, high: r, low: rest };
  const along = small + 4 * K + 4;
  run.residuals({ ...common, lows: 0, flags: grams, factors: high, rests: low, b: small, along, work: block }, range);
  run.settle({ ...common, roots, steps: small, whitened, largest: along, work: block }, range);
  const product = { columns, stride: STRIDE, k: K, factors: roots, after: 0, matrix: small, upTo: 0, into };
  run.times({ ...product, intoStride: STRIDE, grams, block }, range);
  return m.slice(FIRST, end);
}

/** True where two runs left the same bits. */
export function alike(a: Float64Array | null, b: Float64Array | null): boolean {
  return a !== null && b !== null && a.length === b.length && a.every((value, i) => Object.is(value, b[i]));
}
