import { dependenceAmong } from '@core/algebra/dependence';
import { leastSquares, type Solved } from '@core/algebra/least-squares';
import { wideGramInverse, wideLeastSquares } from '@core/algebra/wide-householder';
import { type Decimals, fromDoubles } from '@core/numbers/decimals';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const column = (...values: number[]): Decimals => fromDoubles(values);

function solved(columns: readonly Decimals[], y: Decimals, variances: Float64Array | null = null): Solved {
  const found = leastSquares({ columns, y, variances });
  if ('dependent' in found) throw new Error(`dependent: ${found.dependent}`);
  return found;
}

/** Whole numbers, so that an exact solution can be had in fractions of big integers. */
const wholeProblem = fc.integer({ min: 4, max: 9 }).chain((cells) => {
  const whole = fc.array(fc.integer({ min: -50, max: 50 }), { minLength: cells, maxLength: cells });
  return fc.record({ x: whole, z: whole, y: whole });
});

/** Solves the normal equations of an intercept and two columns exactly, by Cramer's rule in big integers; null where they are singular. */
function exact(x: readonly number[], z: readonly number[], y: readonly number[]): number[] | null {
  const columns = [x.map(() => 1), x, z];
  const inner = (a: readonly number[], b: readonly number[]) =>
    a.reduce((sum, value, g) => sum + BigInt(value) * BigInt(b[g] as number), 0n);
  const rows = columns.map((a) => columns.map((b) => inner(a, b)));
  const right = columns.map((a) => inner(a, y));
  const determinant = cofactors(rows);
  if (determinant === 0n) return null;
  return columns.map((_, j) => {
    const top = cofactors(rows.map((row, i) => row.map((value, l) => (l === j ? (right[i] as bigint) : value))));
    return ratio(top, determinant);
  });
}

function cofactors(m: readonly (readonly bigint[])[]): bigint {
  const at = (i: number, j: number) => m[i]?.[j] as bigint;
  const minor = (i: number, j: number) => at(1, i) * at(2, j) - at(1, j) * at(2, i);
  return at(0, 0) * minor(1, 2) - at(0, 1) * minor(0, 2) + at(0, 2) * minor(0, 1);
}

function ratio(top: bigint, bottom: bigint): number {
  const shift = 10n ** 30n;
  return Number((top * shift) / bottom) / 1e30;
}

describe('least squares', () => {
  it('gives the solution of its example and residuals that are exactly zero', () => {
    const { solution, residuals, perfect } = solved([column(1, 1, 1), column(0, 1, 2)], column(1, 3, 5));
    expect([...solution]).toEqual([1, 2]);
    expect([...residuals]).toEqual([0, 0, 0]);
    expect(perfect).toBe(true);
  });

  it('agrees with the exact solution in fractions to the last digits of a double', () => {
    fc.assert(
      fc.property(wholeProblem, ({ x, z, y }) => {
        const outside = exact(x, z, y);
        const found = leastSquares({
          columns: [column(...x.map(() => 1)), column(...x), column(...z)],
          y: column(...y),
          variances: null,
        });
        expect('dependent' in found).toBe(outside === null);
        if (!outside || 'dependent' in found) return;
        const size = Math.max(...outside.map(Math.abs), 1e-3);
        for (const [j, b] of outside.entries())
          expect(Math.abs((found.solution[j] as number) - b)).toBeLessThan(2e-15 * size);
      }),
    );
  });

  it('is the plain route where the problem is large, and agrees with the double-double route there', () => {
    const cells = 30_000;
    const x = Float64Array.from({ length: cells }, (_, g) => 100 + ((g * 7919) % 1009) / 1009);
    const z = x.map((value, g) => value * value + ((g * 31) % 17) / 17);
    const y = x.map((value, g) => 3 - 2 * value + ((g * 101) % 13) / 13);
    const columns = [fromDoubles(new Float64Array(cells).fill(1)), fromDoubles(x), fromDoubles(z)];
    expect(cells * 9).toBeGreaterThan(2e5);
    const whole = solved(columns, fromDoubles(y));
    const wide = wideLeastSquares(columns, fromDoubles(y));
    const gram = wideGramInverse(wide.inverse);
    expect([...whole.solution]).toEqual([...wide.solution.high]);
    for (const [i, row] of whole.gramInverse.entries())
      for (const [j, value] of row.entries()) {
        const size = Math.sqrt(((gram[i] as Float64Array)[i] as number) * ((gram[j] as Float64Array)[j] as number));
        expect(Math.abs(value - ((gram[i] as Float64Array)[j] as number))).toBeLessThan(1e-15 * whole.condition * size);
      }
  });

  it('does not change when a column or the response is scaled by a power of two, up to 1e300 and down to 1e-300', () => {
    const x = [3, 1, 4, 1, 5, 9, 2, 6];
    const y = [2, 7, 1, 8, 2, 8, 1, 8];
    const ones = x.map(() => 1);
    const plain = solved([column(...ones), column(...x)], column(...y));
    for (const power of [-996, -500, -1, 1, 500, 990]) {
      const factor = power < 0 ? 1 / 2 ** -power : 2 ** power;
      const scaled = solved([column(...ones), column(...x.map((value) => value * factor))], column(...y));
      expect(scaled.solution[0]).toBe(plain.solution[0]);
      expect(scaled.solution[1]).toBe((plain.solution[1] as number) / factor);
      const response = solved([column(...ones), column(...x)], column(...y.map((value) => value * factor)));
      expect([...response.residuals]).toEqual([...plain.residuals].map((r) => r * factor));
    }
  });

  it('solves tiny and huge columns side by side', () => {
    const { solution } = solved([column(1e-300, 3e-300, 2e-300), column(1e300, -1e300, 2e300)], column(1, 3, 2));
    expect((solution[0] as number) / 1e300).toBeCloseTo(1, 13);
  });

  it('takes variances from 1e-300 to 1e300 and gives the residual sum of the whitened cells', () => {
    const columns = [column(1, 1, 1, 1), column(1, 2, 3, 5)];
    const y = column(2, 3, 5, 6);
    const base = solved(columns, y, Float64Array.of(1, 4, 16, 4));
    for (const factor of [4 ** -498, 4 ** 490]) {
      const far = solved(
        columns,
        y,
        Float64Array.of(1, 4, 16, 4).map((v) => v * factor),
      );
      expect([...far.solution]).toEqual([...base.solution]);
    }
  });

  it('weights by whitening: it equals the unweighted fit of root-scaled data', () => {
    const x = [1, 2, 3, 5, 8];
    const y = [1, 4, 2, 7, 9];
    const roots = [1, 2, 4, 2, 1];
    const weighted = solved(
      [column(...x.map(() => 1)), column(...x)],
      column(...y),
      Float64Array.from(roots, (r) => r * r),
    );
    const by = (values: number[]) => column(...values.map((value, g) => value / (roots[g] as number)));
    const scaled = solved([by(x.map(() => 1)), by(x)], by(y));
    expect([...weighted.solution]).toEqual([...scaled.solution]);
    for (const [i, row] of weighted.gramInverse.entries())
      expect([...row]).toEqual([...(scaled.gramInverse[i] as Float64Array)]);
  });

  it('gives an orthonormal basis and a triangle that rebuild the columns', () => {
    const columns = [column(1, 1, 1, 1, 1), column(1, 2, 4, 8, 9), column(0, 1, 0, 1, 1)];
    const { basis, triangle, gramInverse, inverse } = solved(columns, column(1, 2, 3, 4, 6));
    const inner = (a: ArrayLike<number>, b: ArrayLike<number>) =>
      Array.from(a, (value, g) => value * (b[g] as number)).reduce((s, v) => s + v, 0);
    for (const [i, a] of basis.entries())
      for (const [j, b] of basis.entries()) expect(inner(a, b)).toBeCloseTo(i === j ? 1 : 0, 14);
    for (const [j, original] of columns.entries())
      for (let g = 0; g < 5; g++) {
        const rebuilt = basis.reduce(
          (sum, q, i) => sum + (q[g] as number) * ((triangle[j] as Float64Array)[i] as number),
          0,
        );
        expect(rebuilt).toBeCloseTo(original.high[g] as number, 13);
      }
    for (let i = 0; i < 3; i++) {
      const row = inverse.map((c) => c[i] as number);
      expect(inner(row, row)).toBeCloseTo((gramInverse[i] as Float64Array)[i] as number, 13);
    }
  });

  it('works with as many cells as columns, and with no column at all', () => {
    const square = solved([column(1, 1), column(1, 2)], column(3, 5));
    expect([...square.solution]).toEqual([1, 2]);
    expect([...solved([], column(3, 5)).residuals]).toEqual([3, 5]);
  });

  it('reports a condition of 1 for orthogonal columns, whatever their units', () => {
    expect(solved([column(1, 1, 1, 1), column(1e9, -1e9, 1e9, -1e9)], column(1, 2, 3, 4)).condition).toBeCloseTo(1, 12);
  });

  it('throws at a value that is not finite, a variance not above zero and fewer cells than columns: bugs of the caller', () => {
    expect(() => solved([column(1, Number.NaN)], column(1, 2))).toThrow(RangeError);
    expect(() => solved([column(1, 1)], column(1, Infinity))).toThrow(RangeError);
    expect(() => solved([column(1, 1)], column(1, 2), Float64Array.of(1, 0))).toThrow(RangeError);
    expect(() => solved([column(1), column(2)], column(1))).toThrow(RangeError);
  });
});

describe('a dependence among columns', () => {
  it('is reported with all the columns that take part and no other', () => {
    const owners = [20, 35, 50, 61, 44];
    const income = [9, 4, 7, 1, 8];
    const tenants = owners.map((share) => 100 - share);
    const columns = [owners.map(() => 1), owners, income, tenants].map((values) => column(...values));
    expect(dependenceAmong(columns)).toEqual([0, 1, 3]);
  });

  it('is found in a repeated column at any scale, and in a column of zeros alone', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: -9, max: 9 }), { minLength: 4, maxLength: 12 }),
        fc.integer({ min: -290, max: 290 }),
        (x, exponent) => {
          fc.pre(x.some((value) => value !== x[0]));
          const factor = Number(`1e${exponent}`);
          expect(
            dependenceAmong([column(...x.map(() => 1)), column(...x), column(...x.map((value) => value * factor))]),
          ).toEqual([1, 2]);
        },
      ),
    );
    expect(dependenceAmong([column(1, 1, 1), column(0, 0, 0)])).toEqual([1]);
  });

  it('is never seen in a good design because of its units', () => {
    fc.assert(
      fc.property(fc.integer({ min: -290, max: 290 }), fc.integer({ min: -290, max: 290 }), (first, second) => {
        const columns = [
          column(1, 1, 1, 1, 1),
          column(...[1, 2, 4, 8, 9].map((value) => value * Number(`1e${first}`))),
          column(...[3, 1, 4, 1, 5].map((value) => value * Number(`1e${second}`))),
        ];
        expect(dependenceAmong(columns)).toBeNull();
      }),
    );
  });
});
