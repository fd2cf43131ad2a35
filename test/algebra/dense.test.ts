import { choleskyOf, forwardInPlace, solveByFactor } from '@core/algebra/cholesky';
import { singularValues, solve, symmetricEigen, symmetricEigenvalues, symmetricInverse } from '@core/algebra/dense';
import { powerOfFourBelow, powerOfTwoBelow } from '@core/algebra/powers-of-two';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const entries = fc.array(fc.double({ min: -10, max: 10, noNaN: true }), { minLength: 12, maxLength: 12 });

/** A'A of a 4 x 3 matrix, plus a tenth on the diagonal. */
function positive(values: readonly number[]): number[][] {
  const at = (g: number, j: number) => values[g * 3 + j] as number;
  return [0, 1, 2].map((i) =>
    [0, 1, 2].map((j) => [0, 1, 2, 3].reduce((sum, g) => sum + at(g, i) * at(g, j), i === j ? 0.1 : 0)),
  );
}

describe('small dense matrices', () => {
  it('have eigenvalues largest first that add up to the trace and multiply to the determinant', () => {
    expect([
      ...symmetricEigenvalues([
        [2, 0],
        [0, 3],
      ]),
    ]).toEqual([3, 2]);
    fc.assert(
      fc.property(entries, (values) => {
        const rows = positive(values);
        const found = symmetricEigenvalues(rows);
        const trace = rows.reduce((sum, row, i) => sum + (row[i] as number), 0);
        expect(found.reduce((sum, value) => sum + value, 0)).toBeCloseTo(trace, 9);
        expect([...found]).toEqual([...found].sort((a, b) => b - a));
      }),
    );
  });

  it('have eigenvectors that the matrix stretches by the eigenvalues', () => {
    fc.assert(
      fc.property(entries, (values) => {
        const rows = positive(values);
        const { values: found, vectors } = symmetricEigen(rows);
        for (const [a, vector] of vectors.entries())
          for (const [i, row] of rows.entries()) {
            const image = row.reduce((sum, value, j) => sum + value * (vector[j] as number), 0);
            expect(Math.abs(image - (found[a] as number) * (vector[i] as number))).toBeLessThan(
              1e-11 * (found[0] as number),
            );
          }
      }),
    );
  });

  it('have an inverse that gives the unit matrix, in any units', () => {
    fc.assert(
      fc.property(entries, fc.constantFrom(1e-120, 1, 1e120), (values, unit) => {
        const rows = positive(values).map((row, i) =>
          row.map((value, j) => value * (i === 0 ? unit : 1) * (j === 0 ? unit : 1)),
        );
        const inverse = symmetricInverse(rows) as Float64Array[];
        for (let i = 0; i < 3; i++)
          for (let j = 0; j < 3; j++) {
            const sum = [0, 1, 2].reduce((s, l) => s + (rows[i]?.[l] as number) * (inverse[l]?.[j] as number), 0);
            const relative = (sum * (j === 0 ? unit : 1)) / (i === 0 ? unit : 1);
            expect(Math.abs(relative - (i === j ? 1 : 0))).toBeLessThan(1e-8);
          }
      }),
    );
  });

  it('are refused an inverse where they are singular, indefinite or zero, and throw where an entry is not finite', () => {
    expect(
      symmetricInverse([
        [1, 1],
        [1, 1],
      ]),
    ).toBeNull();
    expect(
      symmetricInverse([
        [1, 2],
        [2, 1],
      ]),
    ).toBeNull();
    expect(symmetricInverse([[0]])).toBeNull();
    expect(symmetricInverse([])).toEqual([]);
    expect(
      solve(
        [
          [1, 2],
          [2, 4],
        ],
        [1, 1],
      ),
    ).toBeNull();
    expect(() => symmetricEigenvalues([[Number.NaN]])).toThrow(RangeError);
    expect(() => solve([[Infinity]], [1])).toThrow(RangeError);
  });

  it('are solved and have singular values', () => {
    expect([
      ...(solve(
        [
          [2, 1],
          [1, 3],
        ],
        [3, 5],
      ) as Float64Array),
    ]).toEqual([expect.closeTo(0.8, 14), expect.closeTo(1.4, 14)]);
    expect([
      ...singularValues([
        [3, 0],
        [0, -4],
      ]),
    ]).toEqual([4, 3]);
  });
});

describe('a Cholesky factor', () => {
  it('rebuilds its matrix and solves with it', () => {
    fc.assert(
      fc.property(entries, (values) => {
        const rows = positive(values);
        const factor = choleskyOf(Float64Array.from(rows.flat()), 3) as Float64Array;
        const size = Math.max(...rows.flat().map(Math.abs));
        for (let i = 0; i < 3; i++)
          for (let j = 0; j < 3; j++) {
            const sum = [0, 1, 2].reduce(
              (s, l) => s + (factor[i * 3 + l] as number) * (factor[j * 3 + l] as number),
              0,
            );
            expect(Math.abs(sum - (rows[i]?.[j] as number))).toBeLessThan(1e-13 * size);
          }
        const x = solveByFactor(factor, Float64Array.of(1, 2, 3), 3);
        const back = rows.map((row) => row.reduce((s, value, j) => s + value * (x[j] as number), 0));
        for (const [i, value] of back.entries()) expect(Math.abs(value - (i + 1))).toBeLessThan(1e-8);
        const half = Float64Array.of(1, 2, 3);
        forwardInPlace(factor, half, 3);
        expect((factor[0] as number) * (half[0] as number)).toBeCloseTo(1, 12);
      }),
    );
  });

  it('is refused to a matrix that is not positive definite', () => {
    expect(choleskyOf(Float64Array.of(1, 1, 1, 1), 2)).toBeNull();
    expect(choleskyOf(Float64Array.of(-1), 1)).toBeNull();
    expect(choleskyOf(Float64Array.of(Number.NaN), 1)).toBeNull();
  });
});

it('a power of two or four below a number is exact and within its range, over all of the doubles', () => {
  fc.assert(
    fc.property(fc.double({ min: 1e-300, max: 1e300, noNaN: true }), (x) => {
      const power = powerOfTwoBelow(x);
      expect(power <= x && x < power * 2).toBe(true);
      expect(Number.isInteger(Math.log2(power))).toBe(true);
      const { power: four, root } = powerOfFourBelow(x);
      expect(root * root).toBe(four);
      expect(four <= x * (1 + 1e-15) && x < 4 * four * (1 + 1e-15)).toBe(true);
    }),
  );
  expect(powerOfTwoBelow(0)).toBe(1);
  expect(powerOfTwoBelow(-5)).toBe(4);
});
