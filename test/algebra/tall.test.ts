import { leastSquares } from '@core/algebra/least-squares';
import type { Solved } from '@core/algebra/solved';
import { whitenColumns } from '@core/algebra/whitened';
import { wideLeastSquares } from '@core/algebra/wide-householder';
import { type Decimals, fromDoubles } from '@core/numbers/decimals';
import { seeded } from '@core/numbers/random';
import { dot, plainDot } from '@core/numbers/sums';
import { describe, expect, it } from 'vitest';

interface Problem {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly variances: Float64Array;
}

/** An intercept, and columns that differ from it by `apart`: of condition about 1 / apart. */
function problem(cells: number, terms: number, apart: number): Problem {
  const random = seeded(cells + terms);
  const columns = Array.from({ length: terms }, (_, j) =>
    fromDoubles(Float64Array.from({ length: cells }, () => (j === 0 ? 1 : 1 + apart * random.normal()))),
  );
  const y = fromDoubles(Float64Array.from({ length: cells }, () => 50 + random.normal()));
  return { columns, y, variances: Float64Array.from({ length: cells }, () => 0.01 + random.uniform()) };
}

function solved(of: Problem): Solved {
  const found = leastSquares(of);
  if ('dependent' in found) throw new Error('dependent');
  return found;
}

// Truth: the same problem solved wholly in double-double, 31 digits less those of the condition.
function truthOf(of: Problem): number[] {
  const { columns, y, columnScale, yScale } = whitenColumns(of);
  const { high } = wideLeastSquares(columns, y).solution;
  return Array.from(high, (b, j) => (b * yScale) / (columnScale[j] as number));
}

describe('least squares on many cells', () => {
  for (const apart of [1, 1e-4, 1e-8])
    it(`has every digit of its coefficients at a condition of about ${1 / apart}`, () => {
      const of = problem(12_000, 6, apart);
      const { solution, condition } = solved(of);
      expect(condition).toBeGreaterThan(0.3 / apart);
      for (const [j, truth] of truthOf(of).entries())
        expect(Math.abs((solution[j] as number) / truth - 1)).toBeLessThan(2.3e-16);
    });

  it('leaves residuals that are orthogonal to every column, and a basis that is orthonormal and spans them', () => {
    const of = problem(30_001, 7, 1e-5);
    const { basis, whitened, inverse, triangle, residuals } = solved(of);
    for (const [i, q] of basis.entries()) {
      for (const [j, other] of basis.entries()) expect(Math.abs(dot(q, other) - (i === j ? 1 : 0))).toBeLessThan(1e-14);
      expect(Math.abs(dot(q, whitened))).toBeLessThan(1e-9);
    }
    const at = 29_999;
    const root = Math.sqrt(of.variances[at] as number);
    expect((whitened[at] as number) / ((residuals[at] as number) / root)).toBeCloseTo(1, 14);
    for (let j = 0; j < 7; j++) {
      const row = basis.reduce(
        (sum, q, i) => sum + (q[at] as number) * ((triangle[j] as Float64Array)[i] as number),
        0,
      );
      expect(row / ((of.columns[j] as Decimals).high[at] as number) / (1 / root)).toBeCloseTo(1, 10);
      const unit = (inverse[j] as Float64Array).map((_, i) =>
        plainDot(
          Float64Array.from(triangle, (column) => column[i] as number),
          inverse[j] as Float64Array,
        ),
      );
      expect(unit[j]).toBeCloseTo(1, 9);
    }
  });

  it('keeps its basis when other work was done in between', () => {
    const of = problem(30_000, 4, 1);
    const first = solved(of);
    const before = solved(of).basis[2]?.slice(0, 5);
    solved(problem(25_000, 5, 0.1));
    expect(first.basis[2]?.slice(0, 5)).toEqual(before);
  });

  it('does not depend on units, equal variances, or the size of either, beyond rounding', () => {
    const of = problem(30_000, 4, 0.5);
    const plain = solved(of).solution;
    for (const unit of [1e-200, 1e-40, 1e40, 1e200]) {
      const times = ({ high }: Decimals) => fromDoubles(high.map((x) => x * unit));
      const scaled = solved({ ...of, columns: of.columns.map(times) }).solution;
      for (let j = 0; j < 4; j++) expect(((scaled[j] as number) * unit) / (plain[j] as number)).toBeCloseTo(1, 13);
      const varied = solved({ ...of, variances: of.variances.map((v) => v * unit) }).solution;
      for (let j = 0; j < 4; j++) expect((varied[j] as number) / (plain[j] as number)).toBeCloseTo(1, 15);
    }
    const alone = solved({ ...of, variances: new Float64Array(30_000).fill(7) });
    const none = solved({ ...of, variances: new Float64Array(30_000).fill(1) });
    for (let j = 0; j < 4; j++) {
      expect(alone.solution[j]).toBe(none.solution[j]);
      expect((alone.gramInverse[j]?.[j] as number) / (none.gramInverse[j]?.[j] as number)).toBeCloseTo(7, 13);
    }
  });

  it('names a dependent column, takes a response of zeros, and calls a perfect fit perfect', () => {
    const of = problem(30_000, 4, 0.5);
    const [one, two] = of.columns as [Decimals, Decimals];
    const sum = fromDoubles(one.high.map((x, g) => 2 * x - (two.high[g] as number)));
    expect(leastSquares({ ...of, columns: [...of.columns, sum] })).toEqual({ dependent: [0, 1, 4] });
    const zeros = fromDoubles(new Float64Array(30_000));
    expect([...solved({ ...of, y: zeros }).solution]).toEqual([0, 0, 0, 0]);
    const exact = solved({ ...of, y: sum });
    expect(exact.perfect).toBe(true);
    expect(exact.residuals.every((r) => Math.abs(r) < 1e-15)).toBe(true);
    expect(exact.solution[0]).toBeCloseTo(2, 14);
  });

  it('throws where a value is not finite, or a variance not above 0: a caller bug', () => {
    const of = problem(30_000, 4, 0.5);
    const broken = fromDoubles((of.columns[1] as Decimals).high.slice());
    broken.high[777] = Number.NaN;
    expect(() => leastSquares({ ...of, columns: [of.columns[0] as Decimals, broken, ...of.columns.slice(2)] })).toThrow(
      RangeError,
    );
    expect(() => leastSquares({ ...of, variances: of.variances.map((v, g) => (g === 5 ? 0 : v)) })).toThrow(RangeError);
  });
});
