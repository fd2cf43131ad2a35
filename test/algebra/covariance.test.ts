import { denseOf, takeForm } from '@core/algebra/block-form';
import {
  applied,
  type Covariance,
  formedBlock,
  independent,
  takeCovariance,
  throughCovariance,
  timesFactor,
} from '@core/algebra/covariance';
import { errorOf, factored, factorOf } from '@core/algebra/factored';
import { leastSquares } from '@core/algebra/least-squares';
import { fromDoubles } from '@core/numbers/decimals';
import { seeded } from '@core/numbers/random';
import { describe, expect, it } from 'vitest';
import { eliminated, inFull, times, turned } from '../estimate/dense-omega';

/** A covariance with a dense block, a block of ranks (nested, crossed, negative), a chain and cells alone; sizes over some orders. */
function mixed(seed: number, spread = 1): Covariance {
  const random = seeded(seed);
  const size = () => 10 ** (spread * (2 * random.uniform() - 1));
  const places = (...of: number[]) => Int32Array.from(of);
  const factor = Array.from({ length: 25 }, () => random.normal());
  const sizes = Float64Array.from({ length: 5 }, size);
  const dense = Float64Array.from({ length: 25 }, (_, at) => {
    const [i, j] = [Math.floor(at / 5), at % 5];
    let sum = i === j ? 0.3 : 0;
    for (let l = 0; l < 5; l++) sum += (factor[i * 5 + l] as number) * (factor[j * 5 + l] as number);
    return sum * (sizes[i] as number) * (sizes[j] as number);
  });
  const vector = (n: number) => Float64Array.from({ length: n }, () => random.normal());
  const ranks = formedBlock(places(1, 3, 6, 8, 12, 13, 14), {
    kind: 'ranks',
    diagonal: Float64Array.from({ length: 7 }, size),
    ranks: [
      { factor: 0.8, vector: new Float64Array(7).fill(1), places: places(0, 1, 2, 3, 4, 5, 6) },
      { factor: 2, vector: vector(3), places: places(0, 1, 2) },
      { factor: 0.5, vector: vector(3), places: places(2, 3, 4) },
      { factor: -0.02 * 10 ** -spread, vector: vector(2), places: places(5, 6) },
      { factor: 0, vector: vector(2), places: places(0, 6) },
    ],
  });
  const chain = formedBlock(places(0, 2, 9, 10), {
    kind: 'serial',
    variances: Float64Array.from({ length: 4 }, size),
    order: places(2, 0, 3, 1),
    steps: Float64Array.of(0.7, -0.4, 0.9),
  });
  const blocks = [{ cells: places(4, 5, 7, 11, 15), matrix: dense }, ranks, chain];
  const diagonal = Float64Array.from({ length: 17 }, size);
  for (const { cells, matrix } of blocks)
    for (const [i, g] of cells.entries()) diagonal[g] = matrix[i * cells.length + i] as number;
  return { diagonal, blocks };
}

function near(found: ArrayLike<number>, expected: ArrayLike<number>, share: number): void {
  const size = Math.max(...Array.from(expected, Math.abs));
  for (let i = 0; i < expected.length; i++)
    expect(Math.abs((found[i] as number) - (expected[i] as number))).toBeLessThan(share * size);
}

const seeds = [1, 2, 3, 4, 5];

describe('a covariance of dense blocks, ranks, chains and cells alone', () => {
  it('is P P-transposed, whichever way P is taken', () => {
    for (const seed of seeds) {
      const omega = mixed(seed);
      const full = inFull(omega);
      const factor = factorOf(omega);
      const x = Float64Array.from({ length: 17 }, (_, g) => Math.sin(seed + g));
      const product = (v: Float64Array) =>
        times(
          full,
          Array.from(v, (value) => [value]),
        ).map(([value]) => value as number);
      near(factor.unwhiten(factor.root(x)), product(x), 1e-13);
      near(applied(omega, x), product(x), 1e-13);
      near(factor.whitened(factor.unwhiten(x)), x, 1e-12);
      near(factor.backwards(factor.root(x)), x, 1e-12);
      near(applied(omega, factor.solve(x)), x, 1e-11);
    }
  });

  it('has the determinant and the inverse that elimination finds', () => {
    for (const seed of seeds) {
      const omega = mixed(seed);
      const { inverse, logDeterminant } = eliminated(inFull(omega));
      const factor = factorOf(omega);
      expect(factor.logDeterminant).toBeCloseTo(logDeterminant, 10);
      near(
        factor.inverseDiagonal(),
        inverse.map((row, g) => row[g] as number),
        1e-10,
      );
      const cells = [12, 4, 1, 16, 0, 2, 7, 10];
      near(
        factor.inverseAmong(cells),
        cells.flatMap((g) => cells.map((h) => inverse[g]?.[h] as number)),
        1e-10,
      );
    }
  });

  it('whitens in double-double as it does in doubles, and back to thirty digits', () => {
    for (const seed of seeds) {
      const omega = mixed(seed);
      const factor = factorOf(omega);
      const x = Float64Array.from({ length: 17 }, (_, g) => Math.cos(seed * g));
      const wide = factor.whiten(fromDoubles(x));
      near(wide.high, factor.whitened(x), 1e-12);
      for (const [g, low] of wide.low.entries())
        expect(Math.abs(low)).toBeLessThanOrEqual(2.3e-16 * Math.abs(wide.high[g] as number));
      // e'e = x' Omega^-1 x by either route.
      const squares = wide.high.reduce((sum, e) => sum + e * e, 0);
      const direct = x.reduce((sum, value, g) => sum + value * (factor.solve(x)[g] as number), 0);
      expect(squares / direct).toBeCloseTo(1, 11);
    }
  });

  it('keeps its factor when it is multiplied by a number, up to the root', () => {
    const omega = mixed(7);
    const four = timesFactor(omega, 4);
    const x = Float64Array.from({ length: 17 }, (_, g) => g - 8);
    near(
      factorOf(four).whitened(x),
      factorOf(omega)
        .whitened(x)
        .map((value) => value / 2),
      1e-14,
    );
    near(
      inFull(four).flat(),
      inFull(omega)
        .flat()
        .map((value) => 4 * value),
      1e-15,
    );
    expect(factorOf(four).logDeterminant).toBeCloseTo(factorOf(omega).logDeterminant + 17 * Math.log(4), 10);
  });

  it('taken at some cells in another order is the same covariance at those places', () => {
    const omega = mixed(9);
    const full = inFull(omega);
    const rows = [16, 14, 3, 0, 10, 2, 7, 5, 1, 6, 11];
    const taken = takeCovariance(omega, rows);
    near(
      inFull(taken).flat(),
      rows.flatMap((g) => rows.map((h) => full[g]?.[h] as number)),
      1e-14,
    );
    for (const { cells } of taken.blocks ?? []) expect([...cells]).toEqual([...cells].sort((a, b) => a - b));
    expect(takeCovariance(omega, [16, 4, 1, 0]).blocks).toBeNull();
  });

  it('gives A Omega B-transposed and the error of a combination as the sums say', () => {
    const omega = mixed(11);
    const a = [1, 2, 3].map((seed) => Float64Array.from({ length: 17 }, (_, g) => Math.sin(seed * (g + 1))));
    const rows = a.map((row) => Array.from(row));
    const expected = times(times(rows, inFull(omega)), turned(rows));
    near(
      throughCovariance(a, omega).flatMap((row) => [...row]),
      expected.flat(),
      1e-13,
    );
    for (const [j, row] of a.entries())
      expect(errorOf(row, omega)).toBeCloseTo(Math.sqrt(expected[j]?.[j] as number), 11);
  });
});

describe('a covariance that is none', () => {
  it('names the first pair of cells that would be correlated by more than 1', () => {
    const matrix = Float64Array.of(1, 0.2, 0, 0.2, 1, 3, 0, 3, 1);
    const found = factored({
      diagonal: new Float64Array(5).fill(1),
      blocks: [{ cells: Int32Array.of(1, 2, 4), matrix }],
    });
    expect(found).toMatchObject({ ok: false, pair: [2, 4], correlation: 3 });
  });

  it('else tells the smallest eigenvalue: three cells correlated by -.9 have 1 - 1.8', () => {
    const matrix = Float64Array.from({ length: 9 }, (_, at) => (at % 4 === 0 ? 1 : -0.9));
    const found = factored({
      diagonal: new Float64Array(3).fill(1),
      blocks: [{ cells: Int32Array.of(0, 1, 2), matrix }],
    });
    expect(found.ok).toBe(false);
    if (!found.ok) {
      expect(found.pair).toBeNull();
      expect(found.smallestEigenvalue()).toBeCloseTo(-0.8, 12);
    }
  });

  it('still serves errors where it is only semidefinite: two cells that are one', () => {
    const omega = {
      diagonal: Float64Array.of(4, 4),
      blocks: [{ cells: Int32Array.of(0, 1), matrix: new Float64Array(4).fill(4) }],
    };
    expect(factored(omega).ok).toBe(false);
    expect(errorOf(Float64Array.of(1, -1), omega)).toBe(0);
    expect(errorOf(Float64Array.of(0.5, 0.5), omega)).toBe(2);
  });

  it('is refused too where a variance is 0, or an exchangeable block goes below its bound', () => {
    expect(factored(independent(Float64Array.of(1, 0))).ok).toBe(false);
    const block = formedBlock(Int32Array.of(0, 1, 2), {
      kind: 'ranks',
      diagonal: new Float64Array(3).fill(1.5),
      ranks: [{ factor: -0.5, vector: new Float64Array(3).fill(1), places: Int32Array.of(0, 1, 2) }],
    });
    expect(factored({ diagonal: new Float64Array(3).fill(1), blocks: [block] }).ok).toBe(false);
  });
});

describe('least squares under a covariance', () => {
  it('is (X-transposed Omega^-1 X)^-1 X-transposed Omega^-1 y, and its residuals are y - X b', () => {
    for (const seed of seeds) {
      const omega = mixed(seed, 0.5);
      const { inverse } = eliminated(inFull(omega));
      const random = seeded(seed + 50);
      const columns = [1, 2, 3].map((j) => Float64Array.from({ length: 17 }, () => (j === 1 ? 1 : random.normal())));
      const y = Float64Array.from({ length: 17 }, () => random.normal());
      const X = turned(columns.map((column) => Array.from(column)));
      const gram = eliminated(times(times(turned(X), inverse), X)).inverse;
      const expected = times(
        gram,
        times(
          times(turned(X), inverse),
          Array.from(y, (value) => [value]),
        ),
      );
      const solved = leastSquares({ columns: columns.map(fromDoubles), y: fromDoubles(y), covariance: omega });
      if ('dependent' in solved) throw new Error('a random design is independent');
      near(solved.solution, expected.flat(), 1e-10);
      near(
        solved.gramInverse.flatMap((row) => [...row]),
        gram.flat(),
        1e-10,
      );
      const left = times(X, expected).map(([fit], g) => (y[g] as number) - (fit as number));
      near(solved.residuals, left, 1e-10);
      near(solved.whitened, factorOf(omega).whitened(Float64Array.from(left)), 1e-9);
    }
  });

  it('with a diagonal matrix is the weighted one, to the last digits', () => {
    const variances = Float64Array.from({ length: 12 }, (_, g) => 0.1 + g);
    const matrix = Float64Array.from({ length: 144 }, (_, at) => (at % 13 === 0 ? (variances[at / 13] as number) : 0));
    const covariance = {
      diagonal: variances,
      blocks: [{ cells: Int32Array.from({ length: 12 }, (_, g) => g), matrix }],
    };
    const columns = [0, 1, 2].map((p) => fromDoubles(Float64Array.from({ length: 12 }, (_, g) => (g + 1) ** p)));
    const y = fromDoubles(Float64Array.from({ length: 12 }, (_, g) => Math.sin(g)));
    const one = leastSquares({ columns, y, covariance });
    const other = leastSquares({ columns, y, variances });
    if ('dependent' in one || 'dependent' in other) throw new Error('powers are independent');
    for (const [j, b] of other.solution.entries())
      expect(Math.abs((one.solution[j] as number) - b)).toBeLessThanOrEqual(2e-16 * Math.abs(b));
  });

  it('keeps all digits where the block is barely positive definite: Hilbert, six cells, condition 1.5e7, against fractions', () => {
    // X = 1, Omega = the Hilbert matrix of 6: (1' H^-1 1) = 36 and 1' H^-1 y = sum over i of (H^-1 1)_i y_i, H^-1 1 = (-6, 210, -1680, 5040, -6300, 2772).
    // 1/3 and the like are rounded as they enter: agreement to the condition times a rounding, not to the last digit.
    const matrix = Float64Array.from({ length: 36 }, (_, at) => 1 / (Math.floor(at / 6) + (at % 6) + 1));
    const cells = Int32Array.from({ length: 6 }, (_, g) => g);
    const diagonal = Float64Array.from(cells, (g) => matrix[g * 7] as number);
    const y = Float64Array.of(1, 2, 4, 8, 16, 32);
    const solved = leastSquares({
      columns: [fromDoubles(new Float64Array(6).fill(1))],
      y: fromDoubles(y),
      covariance: { diagonal, blocks: [{ cells, matrix }] },
    });
    if ('dependent' in solved) throw new Error('one column');
    const weights = [-6, 210, -1680, 5040, -6300, 2772];
    const expected = weights.reduce((sum, w, g) => sum + w * (y[g] as number), 0) / 36;
    expect(Math.abs((solved.solution[0] as number) / expected - 1)).toBeLessThan(1e-9);
    expect(Math.abs((solved.gramInverse[0]?.[0] as number) * 36 - 1)).toBeLessThan(1e-9);
  });
});

it('a chain closes over the cells that are taken out of it', () => {
  const form = {
    kind: 'serial',
    variances: Float64Array.of(1, 2, 3, 4),
    order: Int32Array.of(3, 1, 0, 2),
    steps: Float64Array.of(0.5, 0.6, 0.7),
  } as const;
  const kept = [3, 0, 2];
  const full = denseOf(form);
  near(
    denseOf(takeForm(form, kept)),
    kept.flatMap((i) => kept.map((j) => full[i * 4 + j] as number)),
    1e-15,
  );
});

it('refines on Omega itself where the block is too large for a factor in double-double: 480 cells against the same split in thirty digits', () => {
  // A dense block of 480 cells made of a diagonal and two shocks: as ranks its factor is in double-double whatever its size.
  const n = 480;
  const places = Int32Array.from({ length: n }, (_, g) => g);
  const form = {
    kind: 'ranks',
    diagonal: Float64Array.from(places, (g) => 2 ** -(g % 12)),
    ranks: [
      { factor: 1, vector: new Float64Array(n).fill(1), places },
      { factor: 0.5, vector: Float64Array.from(places, (g) => (g % 7) - 3), places },
    ],
  } as const;
  // Entries of both are whole multiples of 2^-11: they are the same matrix to the last digit.
  const matrix = denseOf(form);
  const diagonal = Float64Array.from(places, (g) => matrix[g * n + g] as number);
  const columns = [0, 1, 2].map((p) => fromDoubles(Float64Array.from(places, (g) => Math.round(64 * Math.cos(p * g)))));
  const y = fromDoubles(Float64Array.from(places, (g) => Math.round(1000 * Math.sin(g))));
  const dense = leastSquares({ columns, y, covariance: { diagonal, blocks: [{ cells: places, matrix }] } });
  const thin = leastSquares({ columns, y, covariance: { diagonal, blocks: [formedBlock(places, form)] } });
  if ('dependent' in dense || 'dependent' in thin) throw new Error('the columns are independent');
  for (const [j, b] of thin.solution.entries()) {
    expect(Math.abs((dense.solution[j] as number) - b)).toBeLessThanOrEqual(4.5e-16 * Math.abs(b));
    expect(Math.abs((dense.gramInverse[j]?.[j] as number) / (thin.gramInverse[j]?.[j] as number) - 1)).toBeLessThan(
      1e-11,
    );
  }
  near(dense.residuals, thin.residuals, 1e-14);
  near(factorOf({ diagonal, blocks: [{ cells: places, matrix }] }).unwhiten(dense.whitened), thin.residuals, 1e-11);
});
