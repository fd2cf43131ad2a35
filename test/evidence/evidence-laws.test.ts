import { independent } from '@core/algebra/covariance';
import { smallest } from '@core/evidence/search';
import { structureEvidence } from '@core/evidence/structure-evidence';
import type { Plan } from '@core/protocol/plan';
import type { Evidence, EvidenceTest } from '@core/protocol/result';
import * as fc from 'fast-check';
import { expect, test } from 'vitest';
import { cellsFrom } from '../support/case';
import { evidenceFor, fitPlan, fittedCase } from './fitted-case';

const order: EvidenceTest[] = [
  'breusch-pagan',
  'koenker',
  'size-score',
  'size-score-studentised',
  'size-slope',
  'white',
  'goldfeld-quandt',
  'brown-forsythe',
  'dumouchel-duncan',
  'dependence',
  'heterogeneity',
  'boundary-likelihood-ratio',
  'shapiro-wilk',
];
const perSize = fittedCase('library-structure-tests', 'per-size');
const evidence = structureEvidence(perSize);

test('every test of the contract stands in its order, with a reading at level .05', () => {
  expect(evidence.map((entry) => entry.test)).toEqual(order);
  for (const { p, reading } of evidence)
    expect(reading).toBe(p === null ? 'not-applicable' : p < 0.05 ? 'rejects' : 'does-not-contradict');
});

test('no figure of the evidence is other than a finite number or null', () => {
  for (const of of [perSize, fittedCase('bcg-latitude', 'restricted'), fittedCase('branches-tau-zero', 'full')])
    expect(JSON.parse(JSON.stringify(structureEvidence(of)))).toEqual(structureEvidence(of));
});

test('the same fit gives the same evidence to the last bit', () => {
  expect(JSON.stringify(structureEvidence(perSize))).toBe(JSON.stringify(evidence));
});

test('sizes in another unit change no figure while the scale is free', () => {
  const scaled = { ...perSize.cells, effectiveSize: (perSize.cells.effectiveSize as Float64Array).map((m) => m * 8) };
  const again = structureEvidence(fitPlan(perSize.plan, scaled));
  for (const [i, entry] of evidence.entries()) {
    expect(close(again[i]?.p ?? null, entry.p), entry.test).toBe(true);
    expect(close(again[i]?.smallestDeparture?.size ?? null, entry.smallestDeparture?.size ?? null), entry.test).toBe(
      true,
    );
  }
});

test('an outcome in another unit changes no p value and scales the errors under a departure', () => {
  const { high, low } = perSize.cells.outcome;
  const outcome = { high: high.map((y) => y * 4), low: low.map((y) => y * 4) };
  const again = structureEvidence(fitPlan(perSize.plan, { ...perSize.cells, outcome }));
  for (const [i, entry] of evidence.entries()) {
    expect(close(again[i]?.p ?? null, entry.p), entry.test).toBe(true);
    for (const [j, { se }] of (entry.smallestDeparture?.errors ?? []).entries())
      expect(close((again[i]?.smallestDeparture?.errors[j]?.se ?? Number.NaN) / 4, se), entry.test).toBe(true);
  }
});

test('the errors under a departure name every coefficient in its order', () => {
  const found = entryOf(evidence, 'size-score').smallestDeparture?.errors.map(({ term }) => term);
  expect(found).toEqual(perSize.design.names);
});

test('without a size the tests by size say so, and no departure is looked for', () => {
  const found = evidenceFor('stopping-breusch-pagan', 'constant');
  for (const which of ['size-score', 'size-slope', 'goldfeld-quandt', 'brown-forsythe', 'dumouchel-duncan'] as const)
    expect(entryOf(found, which)).toMatchObject({
      reading: 'not-applicable',
      statistic: null,
      detail: { why: 'no-size' },
    });
  expect(entryOf(found, 'breusch-pagan')).toMatchObject({
    smallestDeparture: null,
    detail: { departureWhy: 'no-size' },
  });
});

test('a moment rule has no likelihood ratio, and a structure without a between part none either', () => {
  expect(entryOf(evidenceFor('bcg-mean', 'dersimonian_laird'), 'boundary-likelihood-ratio').detail['why']).toBe(
    'method',
  );
  expect(entryOf(evidenceFor('bcg-mean', 'common'), 'boundary-likelihood-ratio').detail['why']).toBe('structure');
});

test('an intercept alone leaves nothing for Breusch-Pagan and White', () => {
  const found = evidenceFor('bcg-mean', 'common');
  for (const which of ['breusch-pagan', 'koenker', 'white'] as const)
    expect(entryOf(found, which).detail['why']).toBe('no-columns');
});

const small = 'x,y,n,group\n1,2.5,10,a\n2,3.5,20,a\n3,5.5,30,b\n4,5,40,b\n5,7.25,55,c\n6,6.5,70,c\n';

test('with as many cells as coefficients no test of residuals has a say', () => {
  const found = structureEvidence(fitPlan(tinyPlan(), cellsFrom(small.split('\n').slice(0, 3).join('\n'), tinyPlan())));
  for (const entry of found) expect(entry.reading, entry.test).toBe('not-applicable');
});

test('a fit without residuals has no say', () => {
  const exact = cellsFrom('x,y,n,group\n1,1,1,a\n2,2,2,a\n3,3,3,b\n4,4,4,b\n5,5,5,b\n', tinyPlan());
  for (const entry of structureEvidence(fitPlan(tinyPlan(), exact)))
    expect(entry.reading, entry.test).toBe('not-applicable');
});

test('equal sizes leave the tests by size without a say', () => {
  const cells = cellsFrom(small.replace(/,(10|20|30|40|55|70),/g, ',12,'), tinyPlan());
  const found = structureEvidence(fitPlan(tinyPlan(), cells));
  for (const which of ['size-score', 'size-slope', 'goldfeld-quandt', 'brown-forsythe'] as const)
    expect(entryOf(found, which).detail['why']).toBe('equal-sizes');
  expect(entryOf(found, 'dumouchel-duncan').detail['why']).toBe('nothing-added');
});

test('six cells in three groups are enough for what can be computed, and nothing throws', () => {
  const found = structureEvidence(fitPlan(tinyPlan(), cellsFrom(small, tinyPlan())));
  expect(entryOf(found, 'size-score').p).not.toBeNull();
  expect(entryOf(found, 'dependence').detail['by']).toEqual(['group']);
});

test('a cancelled run ends without departures', () => {
  const hooks = { cancelled: () => true, progress: () => {} };
  const found = structureEvidence({ ...perSize, hooks });
  expect(found.every((entry) => entry.smallestDeparture === null)).toBe(true);
  expect(entryOf(found, 'white').p).toBe(entryOf(evidence, 'white').p);
});

test('under another target the evidence is that of the structure', () => {
  const { fitted } = perSize;
  const shifted = { ...fitted, targetIsStructure: false, whitened: fitted.whitened.map((r) => r + 1) };
  const found = structureEvidence({
    ...perSize,
    fitted: { ...shifted, weighting: independent(new Float64Array(60).fill(1)) },
  });
  expect(found.map(({ p }) => p)).toEqual(evidence.map(({ p }) => p));
});

test('on any small table every figure is a finite number or null, and nothing throws', () => {
  const cell = fc.record({
    x: fc.integer({ min: -5, max: 5 }),
    y: fc.integer({ min: -9, max: 9 }),
    n: fc.oneof(fc.integer({ min: 1, max: 9 }), fc.integer({ min: 1, max: 1e9 })),
    group: fc.constantFrom('a', 'b', 'c'),
  });
  const kind = fc.constantFrom('constant' as const, 'per-size' as const);
  fc.assert(
    fc.property(fc.array(cell, { minLength: 3, maxLength: 12 }), kind, (rows, part) => {
      fc.pre(new Set(rows.map(({ x }) => x)).size > 1);
      const plan: Plan = { ...tinyPlan(), variance: { parts: [{ kind: part, correlation: null }], fixed: {} } };
      const csv = `x,y,n,group\n${rows.map(({ x, y, n, group }) => `${x},${y},${n},${group}`).join('\n')}\n`;
      const found = structureEvidence(fitPlan(plan, cellsFrom(csv, plan)));
      expect(JSON.parse(JSON.stringify(found))).toEqual(found);
    }),
    { seed: 17, numRuns: 60 },
  );
});

test('on any small table with given errors every figure is a finite number or null, and nothing throws', () => {
  const cell = fc.record({
    x: fc.integer({ min: -5, max: 5 }),
    y: fc.integer({ min: -9, max: 9 }),
    n: fc.integer({ min: 1, max: 99 }),
  });
  fc.assert(
    fc.property(fc.array(cell, { minLength: 4, maxLength: 12 }), fc.boolean(), (rows, alone) => {
      fc.pre(new Set(rows.map(({ x }) => x)).size > 1);
      const { roles, ...rest } = tinyPlan();
      const given = { kind: 'given', scale: 'fixed', freedom: null, correlation: null } as const;
      const parts = alone ? [given] : [given, { kind: 'between', correlation: null } as const];
      const estimate = { method: alone ? 'least-squares' : 'full' } as const;
      const plan: Plan = {
        ...rest,
        roles: { ...roles, error: 'n', label: null },
        variance: { parts, fixed: {} },
        estimate,
      };
      const csv = `x,y,n\n${rows.map(({ x, y, n }) => `${x},${y},${n}`).join('\n')}\n`;
      const found = structureEvidence(fitPlan(plan, cellsFrom(csv, plan)));
      expect(JSON.parse(JSON.stringify(found))).toEqual(found);
    }),
    { seed: 23, numRuns: 40 },
  );
});

test('the search finds a threshold to the nearness asked for, from any guess', () => {
  const positive = fc.double({ min: 1e-3, max: 1e3, noNaN: true });
  fc.assert(
    fc.property(positive, positive, (threshold, guess) => {
      const near = (low: number, high: number) => high <= 1.01 * low;
      const found = smallest({ found: (x) => x >= threshold, guess, limit: 1e6, near }) as number;
      expect(found).toBeGreaterThanOrEqual(threshold);
      expect(found).toBeLessThanOrEqual(threshold * 1.0101);
    }),
    { seed: 5 },
  );
});

test('the search gives up at its limit', () => {
  expect(smallest({ found: () => false, guess: 1, limit: 100, near: () => true })).toBeNull();
});

function tinyPlan(): Plan {
  const { plan } = perSize;
  return {
    ...plan,
    terms: [{ column: 'x' }],
    tests: null,
    roles: { ...plan.roles, outcome: 'y', size: 'n', label: ['group', 'x'] },
    variance: { parts: [{ kind: 'per-size', correlation: null }], fixed: {} },
  };
}

function entryOf(entries: readonly Evidence[], which: EvidenceTest): Evidence {
  return entries.find((entry) => entry.test === which) as Evidence;
}

function close(a: number | null, b: number | null): boolean {
  return a === null || b === null ? a === b : Math.abs(a - b) <= 1e-9 * Math.abs(b);
}
