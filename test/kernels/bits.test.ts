import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { Worker } from 'node:worker_threads';
import { choleskyOf } from '@core/algebra/cholesky';
import { leastSquares } from '@core/algebra/least-squares';
import { timesTransposed, trianglesOfGroups } from '@core/algebra/tall-products';
import { invited, load, unload } from '@core/kernels/kernels';
import type { Invitation } from '@core/kernels/team';
import { fromPairs } from '@core/numbers/decimals';
import { parseDecimal } from '@core/numbers/double-double';
import { seeded } from '@core/numbers/random';
import fc from 'fast-check';
import { afterEach, describe, expect, it } from 'vitest';

// The compiled kernels against their twins in TypeScript: every number to the last bit. They are built with the program (`npm run build`).
const out = join(import.meta.dirname, '../../out');
const file = join(out, 'kernels/kernels.wasm');
const bytes = existsSync(file) ? readFileSync(file) : null;

afterEach(unload);

interface Drawn {
  readonly cells: number;
  readonly terms: number;
  readonly seed: number;
  readonly decimals: boolean;
}

function problem({ cells, terms, seed, decimals }: Drawn) {
  const random = seeded(seed);
  const digits = (x: number) => (decimals ? parseDecimal(x.toFixed(3)) : null) ?? ([x, 0] as const);
  const column = (of: () => number) => fromPairs(Array.from({ length: cells }, () => digits(of())));
  const columns = Array.from({ length: terms }, (_, j) => column(() => (j === 0 ? 1 : 100 * j + random.normal())));
  const y = column(() => 1000 + random.normal());
  const variances = Float64Array.from({ length: cells }, () => 1 / (1 + Math.floor(900 * random.uniform())));
  return { columns, y, variances };
}

/** All numbers of a solution. */
function numbersOf(of: Drawn): number[] {
  const solved = leastSquares(problem(of));
  if ('dependent' in solved) throw new Error('dependent');
  const { solution, shift, residuals, whitened, basis, inverse, triangle, gramInverse } = solved;
  const rows = [solution, shift, residuals, whitened, ...basis, ...inverse, ...triangle, ...gramInverse];
  return [...rows.flatMap((row) => [...row]), solved.condition];
}

function sameBits(work: () => number[]): void {
  unload();
  const twin = work();
  expect(load(bytes as Uint8Array)).toBe(true);
  const compiled = work();
  expect(compiled.length).toBe(twin.length);
  expect(compiled.findIndex((value, i) => !Object.is(value, twin[i]))).toBe(-1);
}

describe('compiled kernels', () => {
  it('are built', () => {
    expect(bytes).not.toBeNull();
  });

  it('give the bits of the twin for least squares of any number of columns and cells, decimals or not', () => {
    const drawn = fc.record({
      cells: fc.integer({ min: 2000, max: 20_000 }),
      terms: fc.integer({ min: 1, max: 13 }),
      seed: fc.integer({ min: 1, max: 1e6 }),
      decimals: fc.boolean(),
    });
    fc.assert(
      fc.property(drawn, (one) =>
        sameBits(() => numbersOf({ ...one, cells: Math.max(one.cells, 2.1e5 / one.terms ** 2) | 0 })),
      ),
      { numRuns: 12, seed: 5 },
    );
  });

  it('give the bits of the twin for products with a triangle and for triangles of groups', () => {
    const { columns, y } = problem({ cells: 9000, terms: 6, seed: 3, decimals: false });
    const highs = [...columns, y].map(({ high }) => high);
    const random = seeded(4);
    const triangle = highs.map((_, j) => Float64Array.from(highs, (__, i) => (i <= j ? random.normal() : 0)));
    const order = Int32Array.from({ length: 9000 }, (_, i) => (i * 7) % 9000);
    const starts = Int32Array.from([0, 3, 5, 700, 701, 5000, 9000]);
    sameBits(() => timesTransposed(highs, triangle, y.high).flatMap((row) => [...row]));
    sameBits(() => trianglesOfGroups(highs, order, starts).flatMap((row) => [...row]));
  });

  it('give the bits of the twin for Cholesky factors, whatever the size, and refuse the same matrices', () => {
    for (const n of [97, 128, 203, 330]) {
      const matrix = spreadMatrix(n);
      sameBits(() => [...(choleskyOf(matrix, n) as Float64Array)]);
      const broken = matrix.slice();
      broken[(n - 5) * n + n - 5] = 1e-9;
      sameBits(() => [choleskyOf(broken, n) === null ? 1 : 0]);
      expect(choleskyOf(broken, n)).toBeNull();
    }
  });

  it('give the same bits on two threads as on one', async () => {
    const drawn = { cells: 140_000, terms: 6, seed: 2, decimals: true };
    expect(load(bytes as Uint8Array)).toBe(true);
    const alone = numbersOf(drawn);
    const invitation = invited() as Invitation;
    const built = readdirSync(join(out, 'main')).find((name) => name.startsWith('analysis.worker')) as string;
    const second = new Worker(join(out, 'main', built), { workerData: { kernels: invitation } });
    const state = new Int32Array(invitation.desk);
    for (let wait = 0; state[2] !== 1 && wait < 300; wait++) await new Promise((turn) => setTimeout(turn, 50));
    expect(state[2]).toBe(1);
    const together = numbersOf(drawn);
    expect(state[0]).toBeGreaterThan(3);
    await second.terminate();
    expect(together.findIndex((value, i) => !Object.is(value, alone[i]))).toBe(-1);
  });

  it('are not taken where their bytes are no module', () => {
    expect(load(Uint8Array.of(1, 2, 3))).toBe(false);
  });
});

/** Positive definite: correlations that fall off, and uneven variances. */
function spreadMatrix(n: number): Float64Array {
  const random = seeded(n);
  const roots = Float64Array.from({ length: n }, () => 0.1 + 3 * random.uniform());
  const matrix = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++)
      matrix[i * n + j] = ((roots[i] as number) * (roots[j] as number)) / (1 + Math.abs(i - j) / 3);
  return matrix;
}

describe('a large Cholesky factor', () => {
  it('times its transpose is the matrix, and has nothing above its diagonal', () => {
    for (const n of [96, 101, 260]) {
      const matrix = spreadMatrix(n);
      const factor = choleskyOf(matrix, n) as Float64Array;
      for (let i = 0; i < n; i++)
        for (let j = 0; j < n; j++) {
          let sum = 0;
          for (let l = 0; l < n; l++) sum += (factor[i * n + l] as number) * (factor[j * n + l] as number);
          expect(Math.abs(sum - (matrix[i * n + j] as number))).toBeLessThan(2e-14);
          if (j > i) expect(factor[i * n + j]).toBe(0);
        }
    }
  });
});

describe('triangles of groups', () => {
  it('hold the inner products of their rows', () => {
    const { columns } = problem({ cells: 500, terms: 4, seed: 9, decimals: false });
    const highs = columns.map(({ high }) => high);
    const order = Int32Array.from({ length: 500 }, (_, i) => 499 - i);
    const starts = Int32Array.from([0, 2, 100, 500]);
    for (const [group, r] of trianglesOfGroups(highs, order, starts).entries())
      for (let i = 0; i < 4; i++)
        for (let j = 0; j < 4; j++) {
          let inner = 0;
          let own = 0;
          for (let at = starts[group] as number; at < (starts[group + 1] as number); at++) {
            const g = order[at] as number;
            inner += ((highs[i] as Float64Array)[g] as number) * ((highs[j] as Float64Array)[g] as number);
          }
          for (let l = 0; l < 4; l++) own += (r[4 * l + i] as number) * (r[4 * l + j] as number);
          expect(Math.abs(own / inner - 1)).toBeLessThan(1e-12);
        }
  });
});
