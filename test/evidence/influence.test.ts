import { cellResultsOf } from '@core/evidence/cell-results';
import { heldFit } from '@core/evidence/held';
import { deletionShifts, influenceOf } from '@core/evidence/influence';
import { placesWithout } from '@core/evidence/subset';
import fc from 'fast-check';
import { describe, expect, it, test } from 'vitest';
import { valueOf as quantityIn } from '../reference/quantities-sensitivity';
import { outside } from '../support/case';
import { apart, fittedCase, fittedTable } from './sensitivity-case';

const influence = [
  'leverage',
  'studentised',
  'cooks',
  'dffits',
  'covratio',
  'dfbetas',
  'whitened',
  'weight',
  'effective',
];

// library-influence (R influence.measures, 50 digits), physics-influence (the same).
test.each([
  ['library-influence', 'per-size', 782 - 1],
  ['physics-influence', 'scale-free', 101],
])('every influence figure of %s is the reference', (id, fit, values) => {
  const { of, plan, cells, fitted } = fittedCase(id, fit);
  const results = cellResultsOf({ fitted, cells });
  const asked = of.expected.filter(({ quantity }) => influence.some((name) => quantity.startsWith(name)));
  expect(asked.length).toBe(values);
  let worst = 0;
  for (const { quantity } of asked) {
    const found = quantityIn(quantity, results, { plan, terms: fitted.design.names });
    worst = Math.max(worst, apart(found as number, outside(of, fit, quantity)));
  }
  expect(worst).toBeLessThan(1e-10);
});

// areas-shrinkage, schools-shrinkage (second routes at 50 digits), library-shrunken (computed).
test.each([
  ['areas-shrinkage', 'full', 43 * 3],
  ['areas-shrinkage', 'restricted', 43 * 3 + 3],
  ['schools-shrinkage', 'full', 40 * 3],
  ['schools-shrinkage', 'restricted', 40 * 3 + 3],
  ['library-shrunken', 'between-per-size-restricted', 60 * 3 + 36],
])('every shrunken estimate and its error in %s under %s is the reference', (id, fit, values) => {
  const { of, plan, cells, fitted } = fittedCase(id, fit);
  const results = cellResultsOf({ fitted, cells });
  const asked = of.expected.filter(
    (one) => one.fit === fit && /^(shrunken|shrinkage|mse|g1|g2|g3):/.test(one.quantity),
  );
  expect(asked.length).toBe(values);
  for (const { quantity, value } of asked) {
    const found = quantityIn(quantity, results, { plan, terms: fitted.design.names }) as number;
    expect(apart(found, value as number)).toBeLessThan(1e-7);
  }
});

const cell = fc.record({
  x: fc.integer({ min: -60, max: 60 }).map((x) => x / 20),
  y: fc.integer({ min: -5000, max: 5000 }).map((y) => y / 100),
  n: fc.integer({ min: 1, max: 500 }),
  se: fc.integer({ min: 5, max: 200 }).map((se) => se / 10),
});
const tables = fc
  .array(cell, { minLength: 6, maxLength: 25 })
  .filter((rows) => new Set(rows.map(({ x }) => x)).size > 4)
  .map((rows) => ['run,x,y,n,se', ...rows.map(({ x, y, n, se }, g) => `c${g},${x},${y},${n},${se}`)].join('\n'));

describe('the deletion figures of any table', () => {
  const { plan } = fittedCase('physics-influence', 'scale-free');
  const structures = [
    { ...plan, variance: { parts: [{ kind: 'given', scale: 'free', freedom: null, correlation: null }], fixed: {} } },
    { ...plan, variance: { parts: [{ kind: 'given', scale: 'fixed', freedom: null, correlation: null }], fixed: {} } },
    {
      ...plan,
      roles: { ...plan.roles, size: 'n' },
      variance: { parts: [{ kind: 'per-size', correlation: null }], fixed: {} },
      target: 'cells',
    },
  ] as const satisfies readonly (typeof plan)[];

  it.each(structures)('are those of a refit without the cell', (structure) => {
    fc.assert(
      fc.property(tables, fc.nat(), (csv, chosen) => {
        const { fitted } = fittedTable(csv, structure);
        const g = chosen % fitted.whitened.length;
        const left = heldFit(fitted, placesWithout(fitted.whitened.length, new Set([g])));
        if (!left) return;
        const own = influenceOf(fitted)[g];
        const shifts = deletionShifts(fitted);
        const free = fitted.scale !== null;
        const sAll = free ? Math.sqrt(squares(fitted.whitened) / fitted.residualFreedom) : 1;
        const sLeft = free && fitted.targetIsStructure ? Math.sqrt(squares(left.whitened) / left.residualFreedom) : 1;
        for (const [j, b] of fitted.coefficients.entries()) {
          const d = b - (left.coefficients[j] as number);
          const error = Math.sqrt(fitted.covariance[j]?.[j] as number);
          expect(Math.abs(d - (shifts[j]?.[g] as number))).toBeLessThanOrEqual(1e-8 * (Math.abs(b) + error));
          const unit = fitted.targetIsStructure
            ? (sLeft * error) / (free ? Math.sqrt(fitted.scale as number) : 1)
            : error;
          if (unit > 1e-6 * error) near(own?.coefficientShifts[j] ?? Number.NaN, d / unit);
        }
        if (!fitted.targetIsStructure) return;
        if (own?.covarianceRatio == null) return;
        near(own.covarianceRatio, determinant(left.gramInverse, sLeft) / determinant(fitted.gramInverse, sAll));
      }),
      { seed: 7, numRuns: 60 },
    );
  });
});

it('leaves deletion figures undefined where a cell is its own fit, and says so of that cell alone', () => {
  const { plan } = fittedCase('physics-influence', 'scale-free');
  const rows = ['run,x,y,se', 'a,0,1,1', 'b,0,2,1', 'c,0,4,1', 'd,1,9,1'];
  const { fitted } = fittedTable(rows.join('\n'), plan);
  const found = influenceOf(fitted);
  expect(found[3]).toMatchObject({
    studentised: null,
    studentisedWithout: null,
    cookDistance: null,
    covarianceRatio: null,
  });
  expect(found[0]?.studentised).not.toBeNull();
});

it('leaves what needs a residual without the cell undefined at one degree of freedom', () => {
  const { plan } = fittedCase('physics-influence', 'scale-free');
  const { fitted } = fittedTable('run,x,y,se\na,0,1,1\nb,1,2,1\nc,2,4,1', plan);
  const found = influenceOf(fitted);
  expect(found.every(({ studentised }) => studentised !== null)).toBe(true);
  expect(found.every(({ studentisedWithout, fitShift }) => studentisedWithout === null && fitShift === null)).toBe(
    true,
  );
});

it('has no influence figures with as many cells as terms', () => {
  const { plan } = fittedCase('physics-influence', 'scale-free');
  const { fitted, cells } = fittedTable('run,x,y,se\na,0,1,1\nb,1,2,1', plan);
  const { cells: results } = cellResultsOf({ fitted, cells });
  expect(results.map(({ studentised }) => studentised)).toEqual([null, null]);
  expect(results.every(({ variance, weight }) => Number.isFinite(variance) && Number.isFinite(weight))).toBe(true);
});

function near(found: number, expected: number): void {
  expect(Math.abs(found - expected)).toBeLessThan(1e-7 * Math.max(1, Math.abs(expected)));
}

function squares(values: Float64Array): number {
  return values.reduce((sum, value) => sum + value * value, 0);
}

/** Of a 2 x 2 matrix times s^2. */
function determinant([a, b]: readonly Float64Array[], s: number): number {
  const [aa = 0, ab = 0] = a ?? [];
  const [ba = 0, bb = 0] = b ?? [];
  return (aa * bb - ab * ba) * s * s * s * s;
}
