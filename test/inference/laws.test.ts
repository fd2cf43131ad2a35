import { inferenceOf } from '@core/inference/inferred';
import { intraclassOf } from '@core/inference/intraclass';
import { likelihoodsOf } from '@core/inference/likelihoods';
import type { Inference, Plan } from '@core/protocol/plan';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Fit, fitOf, must, partsOf, planFor, withTable } from './whole-fit';

type Table = Record<string, (number | string)[]>;

const perSize: Plan['variance']['parts'] = [{ kind: 'per-size', correlation: null }];
const constant: Plan['variance']['parts'] = [{ kind: 'constant', correlation: null }];
const given = (scale: 'fixed' | 'free'): Plan['variance']['parts'] => [
  { kind: 'given', scale, freedom: null, correlation: null },
];
const plusBetween = (parts: Plan['variance']['parts']): Plan['variance']['parts'] => [
  ...parts,
  { kind: 'between', correlation: null },
];
const kinds: Inference[] = [
  { kind: 'model', level: 0.95 },
  ...(['HC0', 'HC1', 'HC2', 'HC3', 'HC4'] as const).map(
    (correction): Inference => ({ kind: 'robust', level: 0.95, correction }),
  ),
];

/** A table of 6 to 14 cells with two covariates, sizes and errors. */
const tables: fc.Arbitrary<Table> = fc
  .array(
    fc.record({
      y: fc.integer({ min: -500, max: 500 }),
      x: fc.integer({ min: -40, max: 40 }),
      z: fc.integer({ min: 0, max: 9 }),
      n: fc.integer({ min: 2, max: 300 }),
      s: fc.integer({ min: 5, max: 90 }),
    }),
    { minLength: 6, maxLength: 14 },
  )
  .map((rows) => ({
    y: rows.map((row) => row.y / 10),
    x: rows.map((row, g) => row.x + g / 8),
    z: rows.map((row, g) => row.z + (g % 3)),
    n: rows.map((row) => row.n),
    s: rows.map((row) => row.s / 10),
  }))
  .filter(({ x, z }) => new Set(x).size > 3 && new Set(z).size > 3);

const terms: Plan['terms'] = [{ column: 'x' }, { column: 'z' }];
const runs = { numRuns: 25, seed: 8 };

function fitted(table: Table, said: Partial<Parameters<typeof planFor>[0]>): Fit {
  const plan = planFor({ outcome: 'y', size: 'n', error: 's', terms, parts: perSize, ...said });
  return fitOf(plan, withTable(table)(plan));
}

function close(found: number | null | undefined, wanted: number | null | undefined, relative = 1e-9): void {
  if (found === null || wanted === null || found === undefined || wanted === undefined) {
    expect(found).toBe(wanted);
    return;
  }
  expect(Math.abs(found - wanted)).toBeLessThanOrEqual(relative * Math.max(Math.abs(found), Math.abs(wanted), 1e-9));
}

/** A random design may be singular, or fitted perfectly; such a draw says nothing. */
function attempt(run: () => void): void {
  try {
    run();
  } catch (error) {
    if (error instanceof Error && error.message.includes('dependent-columns')) return;
    throw error;
  }
}

describe('standard errors of every kind', () => {
  it('are those of the unweighted fit on data scaled by the root of the sizes', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom(...kinds), (table, inference) =>
        attempt(() => {
          const weighted = partsOf(fitted(table, { inference })).fit;
          const { n = [], x = [], z = [], y = [] } = table as Record<string, number[]>;
          const root = n.map(Math.sqrt);
          const times = (column: number[]) => column.map((value, g) => value * (root[g] as number));
          const scaled = { y: times(y), one: root, x: times(x), z: times(z) };
          const plan = planFor({
            outcome: 'y',
            terms: [{ column: 'one' }, ...terms],
            intercept: false,
            parts: constant,
            inference,
          });
          const unweighted = partsOf(fitOf(plan, withTable(scaled)(plan))).fit;
          for (const [j, coefficient] of weighted.coefficients.entries()) {
            close(unweighted.coefficients[j]?.se, coefficient.se);
            close(unweighted.coefficients[j]?.p, coefficient.p, 1e-7);
          }
        }),
      ),
      runs,
    );
  });

  it('do not change with the sizes taken ten times while the scale is free, and by the root of ten while it is fixed', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom(...kinds), (table, inference) =>
        attempt(() => {
          const tenfold = { ...table, n: (table['n'] as number[]).map((n) => n * 10) };
          const before = partsOf(fitted(table, { inference })).fit.coefficients;
          const after = partsOf(fitted(tenfold, { inference })).fit.coefficients;
          for (const [j, { se }] of before.entries()) close(after[j]?.se, se);
          const known = { fixed: { phi: 40 } };
          const wide = partsOf(fitted(table, known)).fit.coefficients;
          const narrow = partsOf(fitted(tenfold, known)).fit.coefficients;
          for (const [j, { se }] of wide.entries()) close((narrow[j]?.se as number) * Math.sqrt(10), se);
        }),
      ),
      runs,
    );
  });

  it('change with the unit of a column in its own coefficient alone', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom(...kinds), (table, inference) =>
        attempt(() => {
          const thousand = { ...table, x: (table['x'] as number[]).map((x) => x * 1000) };
          const before = partsOf(fitted(table, { inference })).fit.coefficients;
          const after = partsOf(fitted(thousand, { inference })).fit.coefficients;
          for (const [j, { se, p }] of before.entries()) {
            close((after[j]?.se as number) * (j === 1 ? 1000 : 1), se);
            close(after[j]?.p, p, 1e-7);
          }
        }),
      ),
      runs,
    );
  });

  it('grow from HC0 over HC2 to HC3 in every diagonal entry', () => {
    fc.assert(
      fc.property(tables, (table) =>
        attempt(() => {
          const { fitted: fit, cells, plan } = fitted(table, {});
          const [hc0, hc2, hc3] = (['HC0', 'HC2', 'HC3'] as const).map((correction) =>
            must(
              inferenceOf({
                fitted: fit,
                cells,
                plan: { ...plan, inference: { kind: 'robust', level: 0.95, correction } },
              }),
            ),
          );
          for (const [j, coefficient] of (hc2?.coefficients ?? []).entries()) {
            expect(hc0?.coefficients[j]?.se).toBeLessThanOrEqual(coefficient.se as number);
            expect(hc3?.coefficients[j]?.se).toBeGreaterThanOrEqual(coefficient.se as number);
          }
        }),
      ),
      runs,
    );
  });
});

describe('questions', () => {
  it('a joint question of one coefficient has the square of its t and the same p value', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom(...kinds), (table, inference) =>
        attempt(() => {
          const questions: Plan['questions'] = [{ kind: 'joint', terms: ['x'], name: null, family: null }];
          const { fit, questions: answers } = partsOf(fitted(table, { inference, questions }));
          const t = fit.coefficients[1];
          if (t?.ratio === null || t?.ratio === undefined) return;
          expect(answers[0]?.answer).toMatchObject({ freedom1: 1, freedom2: t.reference?.freedom });
          const answer = answers[0]?.answer as { statistic: number; p: number };
          close(answer.statistic, t.ratio * t.ratio);
          close(answer.p, t.p, 1e-7);
        }),
      ),
      runs,
    );
  });

  it('a combination of one coefficient is that coefficient, under given errors of freedom 6 too', () => {
    fc.assert(
      fc.property(tables, (table) =>
        attempt(() => {
          const questions: Plan['questions'] = [
            { kind: 'combination', of: { z: 1 }, equals: 0, name: null, family: null },
          ];
          const parts: Plan['variance']['parts'] = [{ kind: 'given', scale: 'fixed', freedom: 6, correlation: null }];
          const { fit, questions: answers } = partsOf(fitted(table, { parts, questions }));
          const { term: _, ratio: __, ...own } = fit.coefficients[2] ?? { term: '', ratio: null };
          const answer = answers[0]?.answer as unknown as Record<string, number>;
          for (const key of ['estimate', 'low', 'high', 'se', 'p'] as const)
            close(answer[key], (own as unknown as Record<string, number>)[key], 1e-8);
          expect(fit.coefficients[2]?.reference?.kind).toBe('t');
        }),
      ),
      runs,
    );
  });

  it('the three intervals of an expectation lie inside each other, and their variances differ by tau^2 and the sampling variance', () => {
    fc.assert(
      fc.property(tables, (table) =>
        attempt(() => {
          const questions: Plan['questions'] = [
            { kind: 'expect', where: { x: 3, z: 4 }, size: 25, error: 2, name: null, family: null },
          ];
          const parts = plusBetween(given('fixed'));
          const { fit, questions: answers } = partsOf(
            fitted(table, { parts, questions, estimate: { method: 'moments', rule: 'paule-mandel' } }),
          );
          const tau2 = fit.variance[0]?.estimate as number;
          const answer = answers[0]?.answer;
          if (!answer || !('fitted' in answer)) throw new Error('no expectation');
          const mean = answer.fitted.se as number;
          close((answer.newCellTrue?.se as number) ** 2, mean * mean + tau2);
          close((answer.newCellObserved?.se as number) ** 2, mean * mean + tau2 + 4);
        }),
      ),
      runs,
    );
  });
});

describe('variance parameters', () => {
  it('under a restricted free scale the Knapp-Hartung factor is 1, and so it is at an interior Paule-Mandel fit', () => {
    fc.assert(
      fc.property(tables, (table) =>
        attempt(() => {
          const inference: Inference = { kind: 'knapp-hartung', level: 0.95, floor: false };
          const free = partsOf(
            fitted(table, { parts: given('free'), estimate: { method: 'restricted' }, inference }),
          ).fit;
          close(free.knappHartungQ, 1);
          const estimate: Plan['estimate'] = { method: 'moments', rule: 'paule-mandel' };
          const { fit } = partsOf(fitted(table, { parts: plusBetween(given('fixed')), estimate, inference }));
          const tau2 = fit.variance[0]?.estimate as number;
          if (tau2 > 0) close(fit.knappHartungQ, 1, 1e-8);
          else expect(fit.knappHartungQ).toBeLessThanOrEqual(1 + 1e-9);
        }),
      ),
      runs,
    );
  });

  it('have profile intervals around their estimates that widen with the level', () => {
    fc.assert(
      fc.property(tables, (table) =>
        attempt(() => {
          const of = (level: number) =>
            partsOf(
              fitted(table, {
                parts: plusBetween(given('fixed')),
                estimate: { method: 'restricted' },
                inference: { kind: 'model', level },
              }),
            ).fit.variance[0];
          const [narrow, wide] = [of(0.8), of(0.99)];
          expect(narrow?.low).toBeLessThanOrEqual(narrow?.estimate as number);
          expect(narrow?.high).toBeGreaterThanOrEqual(narrow?.estimate as number);
          expect(wide?.low).toBeLessThanOrEqual(narrow?.low as number);
          expect(wide?.high).toBeGreaterThanOrEqual(narrow?.high as number);
        }),
      ),
      { ...runs, numRuns: 12 },
    );
  });

  it('the intraclass share does not change when the outcome is taken in another unit', () => {
    fc.assert(
      fc.property(tables, (table) =>
        attempt(() => {
          const said = { parts: plusBetween(perSize), estimate: { method: 'restricted' } } as const;
          const cents = { ...table, y: (table['y'] as number[]).map((y) => y * 64) };
          const [one, other] = [table, cents].map((each) => {
            const { fitted: fit } = fitted(each, said);
            return intraclassOf(likelihoodsOf(fit), 0.95);
          });
          close(one?.estimate, other?.estimate, 1e-6);
          close(one?.low, other?.low, 1e-5);
          close(one?.high, other?.high, 1e-5);
        }),
      ),
      { ...runs, numRuns: 12 },
    );
  });
});
