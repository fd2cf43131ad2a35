import { leastSquares } from '@core/algebra/least-squares';
import { fromDoubles } from '@core/numbers/decimals';
import { tTwoSided } from '@core/numbers/distributions';
import type { IndividualLevel } from '@core/protocol/result';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { answered, runOn, type Said } from '../engine/hostile';

const said: Said = {
  roles: { label: ['cell'], outcome: 'y', size: 'n', withinSd: 'sd' },
  terms: [{ column: 'x' }],
  variance: { parts: [{ kind: 'per-size' }] },
};

/** Answers of persons, cell by cell; x is the cell's. */
const persons = fc
  .array(
    fc.record({
      x: fc.integer({ min: -50, max: 50 }),
      answers: fc.array(fc.integer({ min: -300, max: 300 }), { minLength: 1, maxLength: 8 }),
    }),
    { minLength: 4, maxLength: 9 },
  )
  .filter(
    (cells) => new Set(cells.map(({ x }) => x)).size > 2 && cells.some(({ answers }) => new Set(answers).size > 1),
  );

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

function deviation(values: readonly number[]): number {
  if (values.length === 1) return 0;
  const centre = mean(values);
  return Math.sqrt(values.reduce((sum, value) => sum + (value - centre) ** 2, 0) / (values.length - 1));
}

describe('least squares on the respondents, from cell means, sizes and deviations', () => {
  it('is what least squares on the persons one by one gives: coefficients, errors, freedom, p, R squared', () => {
    fc.assert(
      fc.property(persons, (cells) => {
        const columns = {
          cell: cells.map((_, g) => `cell ${g}`),
          x: cells.map(({ x }) => x),
          n: cells.map(({ answers }) => answers.length),
          y: cells.map(({ answers }) => mean(answers)),
          sd: cells.map(({ answers }) => deviation(answers)),
        };
        const run = runOn(columns, said);
        if (!run.ok) throw new Error(JSON.stringify(run.problems));
        const own = run.value.individualLevel as IndividualLevel;
        const y = cells.flatMap(({ answers }) => answers);
        const x = cells.flatMap(({ x: at, answers }) => answers.map(() => at));
        const solved = leastSquares({
          columns: [fromDoubles(y.map(() => 1)), fromDoubles(x)],
          y: fromDoubles(y),
          variances: null,
        });
        if ('dependent' in solved) throw new Error('dependent');
        const freedom = y.length - 2;
        const rss = solved.residuals.reduce((sum, r) => sum + r * r, 0);
        expect([own.persons, own.residualFreedom]).toEqual([y.length, freedom]);
        expect(own.residualSd).toBeCloseTo(Math.sqrt(rss / freedom), 8);
        const total = y.reduce((sum, value) => sum + (value - mean(y)) ** 2, 0);
        expect(own.rSquared).toBeCloseTo(1 - rss / total, 9);
        for (const [j, one] of own.coefficients.entries()) {
          const se = Math.sqrt((rss / freedom) * (solved.gramInverse[j]?.[j] as number));
          expect(Math.abs(one.estimate - (solved.solution[j] as number))).toBeLessThan(1e-10 * (1 + se));
          expect((one.se as number) / se).toBeCloseTo(1, 9);
          expect(one.reference).toEqual({ kind: 't', freedom });
          expect(one.p).toBeCloseTo(tTwoSided((solved.solution[j] as number) / se, freedom), 8);
        }
      }),
      { seed: 5, numRuns: 40 },
    );
  });

  it('tells by F whether cells scatter more than their persons: the classical lack of fit, worked by hand', () => {
    const columns = { cell: ['a', 'b', 'c'], x: [0, 1, 2], n: [3, 3, 3], y: [0, 3, 0], sd: [1, 2, 3] };
    const own = answered(runOn(columns, said)).individualLevel as IndividualLevel;
    // Line through 0, 3, 0: level 1, residuals -1, 2, -1; between 3 * 6 on 1; inside 2 (1 + 4 + 9) on 6.
    expect(own.lackOfFit).toMatchObject({ freedom1: 1, freedom2: 6 });
    expect(own.lackOfFit?.statistic).toBeCloseTo(18 / (28 / 6), 12);
    expect(own.withinSd).toBeCloseTo(Math.sqrt(28 / 6), 12);
    expect(own.coefficients[0]?.se).toBeCloseTo(Math.sqrt((46 / 7) * (5 / 18)), 12);
  });

  it('does not depend on the structure stated, nor on a design effect', () => {
    const columns = {
      cell: ['a', 'b', 'c', 'd'],
      x: [0, 1, 2, 4],
      n: [3, 9, 4, 7],
      y: [1, 3, 2, 5],
      sd: [1, 2, 3, 1],
      d: [1.5, 2, 1.1, 3],
    };
    const plain = answered(runOn(columns, said)).individualLevel;
    const other = answered(
      runOn(columns, {
        ...said,
        roles: { ...(said['roles'] as object), designEffect: 'd' },
        variance: { parts: [{ kind: 'constant' }] },
      }),
    ).individualLevel;
    expect(other).toEqual(plain);
  });

  it('is null without deviations, on a log scale, and with a size below 1', () => {
    const columns = {
      cell: ['a', 'b', 'c', 'd'],
      x: [0, 1, 2, 4],
      n: [3, 9, 4, 7],
      y: [1, 3, 2, 5],
      sd: [1, 2, 3, 1],
      se: [0.1, 0.2, 0.3, 0.1],
    };
    const none = { ...said, roles: { label: ['cell'], outcome: 'y', size: 'n' } };
    expect(answered(runOn(columns, none)).individualLevel).toBeNull();
    expect(answered(runOn(columns, { ...said, outcomeScale: 'log' })).individualLevel).toBeNull();
    expect(answered(runOn({ ...columns, n: [0.5, 9, 4, 7] }, said)).individualLevel).toBeNull();
  });

  it('with one person a cell has no spread inside and no lack of fit, and is the unweighted fit', () => {
    const columns = { cell: ['a', 'b', 'c', 'd'], x: [0, 1, 2, 4], n: [1, 1, 1, 1], y: [1, 3, 2, 5], sd: [0, 0, 0, 0] };
    const { individualLevel: own, fit } = answered(runOn(columns, said));
    expect([own?.withinSd, own?.lackOfFit]).toEqual([null, null]);
    for (const [j, one] of (own as IndividualLevel).coefficients.entries())
      expect(one.se).toBeCloseTo(fit.coefficients[j]?.se as number, 12);
  });
});
