import { readFileSync } from 'node:fs';
import { breakEvenBetween, breakEvenOf } from '@core/evidence/break-even';
import { cellResultsOf } from '@core/evidence/cell-results';
import { pricesOf, squareOf } from '@core/evidence/price';
import type { Plan, Variance } from '@core/protocol/plan';
import fc from 'fast-check';
import { expect, it, test } from 'vitest';
import { valueOf as quantityIn } from '../reference/quantities-sensitivity';
import { caseFile } from '../support/case';
import { apart, fittedCase, fittedTable, rivalsOf } from './sensitivity-case';

const perSize: Variance = { parts: [{ kind: 'per-size', correlation: null }], fixed: {} };
const betweenPerSize: Variance = {
  parts: [
    { kind: 'per-size', correlation: null },
    { kind: 'between', correlation: null },
  ],
  fixed: {},
};

// schools-price: 50-digit values of prices, square, break-even and moves. What hangs on tau^2 is good to 1e-7 relative.
test('every price, square, break-even and move of schools-price is the reference', () => {
  const known = fittedCase('schools-price', 'between-given-restricted');
  const { of, plan, cells, fitted } = known;
  const rivals = rivalsOf(known);
  const pieces = {
    beside: pricesOf({ fitted, rivals }),
    square: squareOf([fitted, ...rivals.map((rival) => rival.fitted)]),
    breakEven: breakEvenOf({ fitted, cells }),
    cells: cellResultsOf({ fitted, cells }).cells,
  };
  const asked = of.expected.filter(({ quantity }) => /^(price|square|break_even|moved):/.test(quantity));
  expect(asked.length).toBe(115 + 60 + 64 + 4);
  for (const { quantity, value } of asked) {
    const found = quantityIn(quantity, pieces, { plan, terms: fitted.design.names }) as number;
    expect(apart(found, value as number), quantity).toBeLessThan(1e-9);
  }
});

// PRACTICE.md of the design, 15: cells of 5, 10, 20, 50, 100, 400.
test('the break-even of a mean is the published closed form', () => {
  const sizes = Float64Array.of(5, 10, 20, 50, 100, 400);
  const total = 585;
  const [found] = breakEvenBetween({
    terms: ['intercept'],
    equal: [sizes.map(() => 1 / 6)],
    sized: [sizes.map((n) => n / total)],
    sizes,
  });
  const ratio =
    (sizes.reduce((sum, n) => sum + 1 / n, 0) / 36 - 1 / total) /
    (sizes.reduce((s, n) => s + n * n, 0) / total ** 2 - 1 / 6);
  expect(ratio).toBeCloseTo(0.026305771096, 12);
  expect(found?.intraclass).toBeCloseTo(ratio / (1 + ratio), 14);
  expect(found?.intraclass).toBeCloseTo(0.02563, 5);
});

it('has no break-even where all sizes are equal, and none at all without sizes', () => {
  const { plan } = fittedCase('library-influence', 'per-size');
  const simple: Plan = { ...plan, terms: [{ column: 'income' }] };
  const csv = 'district,mean_visits,n,income\na,1,7,1\nb,2,7,2\nc,4,7,4\nd,5,7,6';
  const { fitted, cells } = fittedTable(csv, simple);
  expect(breakEvenOf({ fitted, cells }).map(({ intraclass }) => intraclass)).toEqual([null, null]);
  expect(breakEvenOf({ fitted, cells: { ...cells, effectiveSize: null } })).toEqual([]);
});

// Worked example D of the design: the thirteen vaccine trials on latitude, restricted; n is all persons of a trial.
test('prices on the vaccine trials are those of worked example D', () => {
  const { plan } = fittedCase('bcg-latitude', 'restricted');
  const [head = '', ...lines] = readFileSync(caseFile('bcg-latitude'), 'utf8').trim().split('\n');
  const persons = (line: string): number =>
    line
      .split(',')
      .slice(1, 5)
      .reduce((sum, text) => sum + Number(text), 0);
  const csv = [`${head},n`, ...lines.map((line) => `${line},${persons(line)}`)].join('\n');
  const known = fittedTable(csv, { ...plan, roles: { ...plan.roles, size: 'n' } });
  const rivals = rivalsOf(known, ['constant', 'given', 'per-size']);
  const [unweighted, inverse, bySize] = pricesOf({ fitted: known.fitted, rivals });
  expect(1 / (1 + (bySize?.price[1]?.cost ?? 0))).toBeCloseTo(0.496, 3);
  expect(bySize?.price[1]?.claimedOverActual).toBeCloseTo(0.73, 2);
  const slope = 1;
  expect(1 / (1 + (unweighted?.price[slope]?.cost ?? 0))).toBeCloseTo(0.744, 3);
  expect(unweighted?.price[slope]?.claimedOverActual).toBeCloseTo(1.45, 2);
  expect(1 / (1 + (inverse?.price[slope]?.cost ?? 0))).toBeCloseTo(0.62, 3);
  expect(inverse?.price[slope]?.claimedOverActual).toBeCloseTo(0.485, 3);
  expect(Math.sqrt(known.fitted.covariance[slope]?.[slope] as number)).toBeCloseTo(0.007195, 6);
});

const tables = fc
  .array(
    fc.record({
      x: fc.integer({ min: -60, max: 60 }).map((x) => x / 20),
      y: fc.integer({ min: -5000, max: 5000 }).map((y) => y / 100),
      n: fc.integer({ min: 1, max: 500 }),
    }),
    { minLength: 6, maxLength: 25 },
  )
  .filter((rows) => new Set(rows.map(({ x }) => x)).size > 4 && new Set(rows.map(({ n }) => n)).size > 2)
  .map((rows) => ['run,x,y,n', ...rows.map(({ x, y, n }, g) => `c${g},${x},${y},${n}`)].join('\n'));

const plain = (): Plan => {
  const { plan } = fittedCase('physics-influence', 'scale-free');
  return { ...plan, roles: { ...plan.roles, error: null, size: 'n' }, variance: perSize };
};

it('never makes another weighting cheaper than the right one, whatever the table', () => {
  const plan = plain();
  fc.assert(
    fc.property(tables, (csv) => {
      const known = fittedTable(csv, plan);
      const rivals = rivalsOf(known, [
        'constant',
        { parts: [{ kind: 'size-power', exponent: 0.3, correlation: null }], fixed: {} },
      ]);
      for (const one of pricesOf({ fitted: known.fitted, rivals })) {
        expect(Math.min(...one.price.map(({ cost }) => cost as number))).toBeGreaterThanOrEqual(0);
        expect(Math.min(...one.eigenvalues.map(Number))).toBeGreaterThanOrEqual(0);
        // The variance by its direct product, and moves that add up to the difference of the coefficients.
        for (const [j, { actualSe }] of one.price.entries()) {
          const rival = rivals.find((other) => other.rival === one.variance);
          const pulls = rival?.fitted.pulls[j] as Float64Array;
          const direct = pulls.reduce((sum, c, g) => sum + c * c * (known.fitted.variances[g] as number), 0);
          expect(apart(Number(actualSe) ** 2, direct)).toBeLessThan(1e-9);
          const moved = (one.moved[j]?.byCell ?? []).reduce((sum, value) => sum + value, 0);
          const difference = (rival?.fitted.coefficients[j] as number) - (known.fitted.coefficients[j] as number);
          expect(Math.abs(moved - difference)).toBeLessThan(1e-9 * (1 + Math.abs(difference)));
        }
      }
    }),
    { seed: 11, numRuns: 60 },
  );
});

it('gives a rival that is the structure itself no price, and equal weights on equal cells full efficiency', () => {
  const known = fittedTable('run,x,y,n\na,1,2,9\nb,2,3,9\nc,3,7,9\nd,5,8,9', plain());
  const [own, constant] = pricesOf({ fitted: known.fitted, rivals: rivalsOf(known, ['per-size', 'constant']) });
  expect(own?.price.map(({ cost }) => cost)).toEqual([0, 0]);
  expect(constant?.efficiency).toBeCloseTo(1, 14);
});

it('prices under another target against the weights of the structure, not against the target', () => {
  const plan: Plan = { ...plain(), target: 'cells' };
  const known = fittedTable('run,x,y,n\na,1,2,9\nb,2,3,90\nc,3,7,4\nd,5,8,30\ne,7,7,12', plan);
  const [constant, perSizeRival] = pricesOf({
    fitted: known.fitted,
    rivals: rivalsOf(known, ['constant', 'per-size']),
  });
  expect(perSizeRival?.price.every(({ cost }) => cost !== null && cost < 1e-20)).toBe(true);
  expect(constant?.price.every(({ cost }) => cost !== null && cost > 0)).toBe(true);
  const [chosen] = squareOf([known.fitted]);
  expect(chosen?.se).toBeCloseTo(constant?.price[0]?.actualSe ?? 0, 12);
});

it('expects no closed-form claim of a rival that estimates more than a scale, and the given one of errors taken as known', () => {
  const { plan } = fittedCase('schools-price', 'between-given-restricted');
  const known = fittedCase('schools-price', 'between-given-restricted');
  const given: Variance = { parts: [{ kind: 'given', scale: 'fixed', freedom: null, correlation: null }], fixed: {} };
  const [two, exact] = pricesOf({
    fitted: known.fitted,
    rivals: rivalsOf({ ...known, plan }, [betweenPerSize, given]),
  });
  expect(two?.price.every(({ expectedClaimedSe }) => expectedClaimedSe === null)).toBe(true);
  for (const { claimedSe, expectedClaimedSe } of exact?.price ?? [])
    expect(apart(expectedClaimedSe as number, claimedSe as number)).toBeLessThan(1e-12);
});
