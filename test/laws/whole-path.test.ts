import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { answered, type Columns, runOn, type Said } from '../engine/hostile';
import { expectClose, expectCoefficients, expectEvidence, expectPrices } from './alike';

interface Row {
  readonly x: number;
  readonly w: number;
  readonly y: number;
  readonly n: number;
  readonly se: number;
}

const decimal = (low: number, high: number) =>
  fc.integer({ min: low * 1000, max: high * 1000 }).map((thousandths) => thousandths / 1000);

/** 10 to 16 cells, no two of equal size: ties are broken by the order of the rows. */
const tables = fc
  .uniqueArray(
    fc.record({
      x: decimal(-20, 20),
      w: decimal(-3, 3),
      y: decimal(-50, 50),
      n: fc.integer({ min: 1, max: 400 }),
      se: decimal(1, 9),
    }),
    { minLength: 10, maxLength: 16, selector: ({ n }) => n },
  )
  .filter((rows) => new Set(rows.map(({ x }) => x)).size > 5 && new Set(rows.map(({ w }) => w)).size > 5);

const some = { seed: 7, numRuns: 6, endOnFailure: true };
type Parts = readonly { readonly kind: Plan['variance']['parts'][number]['kind']; readonly scale?: 'fixed' | 'free' }[];

const given = { kind: 'given', scale: 'fixed' } as const;
const freeScale: readonly [string, Parts][] = [
  ['constant', [{ kind: 'constant' }]],
  ['per-size', [{ kind: 'per-size' }]],
  ['per-size + between', [{ kind: 'per-size' }, { kind: 'between' }]],
];
const every: readonly [string, Parts][] = [
  ...freeScale,
  ['given', [given]],
  ['given + between', [given, { kind: 'between' }]],
];

/** A column for each field of the rows, with labels that keep their cell whatever its row. */
function columnsOf(rows: readonly (Row & { readonly label?: number })[]): Columns {
  const column = (of: (row: Row, g: number) => number | string) => rows.map(of);
  return {
    label: rows.map(({ label }, g) => `cell ${label ?? g}`),
    block: rows.map(({ label }, g) => `block ${(label ?? g) % 3}`),
    x: column(({ x }) => x),
    w: column(({ w }) => w),
    y: column(({ y }) => y),
    n: column(({ n }) => n),
    se: column(({ se }) => se),
  };
}

const said: Said = {
  roles: { label: ['block', 'label'], outcome: 'y', size: 'n', error: 'se' },
  terms: [{ column: 'x' }, { column: 'w' }],
  beside: ['constant', 'per-size', 'given'],
  questions: [{ kind: 'joint', terms: ['x', 'w'] }],
};

function fitted(rows: Parameters<typeof columnsOf>[0], parts: Parts, more: Said = {}): Result {
  return answered(runOn(columnsOf(rows), { ...said, variance: { parts }, ...more }));
}

describe.each(every)('the whole path under %s', (_, parts) => {
  it('gives each cell the same, whatever the order of the rows', () => {
    fc.assert(
      fc.property(tables, (table) => {
        const rows = table.map((row, label) => ({ ...row, label }));
        const [straight, turned] = [fitted(rows, parts), fitted(rows.toReversed(), parts)];
        expectCoefficients(straight, turned);
        expectEvidence(straight, turned);
        expectPrices(straight, turned);
        const byLabel = new Map(turned.cells.map((cell) => [cell.label, cell]));
        for (const { label, leverage, residual, studentised, shrunken } of straight.cells) {
          const own = byLabel.get(label);
          expectClose(leverage, own?.leverage, 1e-5);
          expectClose(residual, own?.residual, 1e-5, 1e-6);
          expectClose(studentised, own?.studentised, 1e-5, 1e-6);
          expectClose(shrunken, own?.shrunken, 1e-5, 1e-6);
        }
        for (const [j, { heaviest }] of straight.beam.entries())
          expect(new Set(heaviest.cells)).toEqual(new Set(turned.beam[j]?.heaviest.cells));
      }),
      some,
    );
  });

  it('changes a column’s own coefficient alone when its unit changes', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom(1000, 0.001), (rows, factor) => {
        const other = rows.map((row) => ({ ...row, x: Number((row.x * factor).toPrecision(12)) }));
        const [one, scaled] = [fitted(rows, parts), fitted(other, parts)];
        const times = (term: string) => (term === 'x' ? 1 / factor : 1);
        expectCoefficients(one, scaled, times);
        expectEvidence(one, scaled);
        expectPrices(one, scaled, times);
        const [joint, again] = [one, scaled].map(({ questions }) => questions[0]?.answer);
        expectClose(
          joint && 'statistic' in joint ? joint.statistic : null,
          again && 'statistic' in again ? again.statistic : null,
        );
      }),
      some,
    );
  });

  it('multiplies every coefficient and error by the unit of the outcome, and no p value', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom(1e6, 1e-4), (rows, unit) => {
        const round = (value: number) => Number((value * unit).toPrecision(12));
        const other = rows.map((row) => ({ ...row, y: round(row.y), se: round(row.se) }));
        const [one, scaled] = [fitted(rows, parts), fitted(other, parts)];
        expectCoefficients(one, scaled, () => unit);
        expectPrices(one, scaled, () => unit);
        expectEvidence(one, scaled);
      }),
      some,
    );
  });

  it('prices no rival below the structure itself, in any direction', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        const { beside, square, fit } = fitted(rows, parts);
        for (const { price, eigenvalues, efficiency } of beside) {
          for (const { cost } of price) expect(cost).toBeGreaterThanOrEqual(0);
          for (const value of eigenvalues) expect(value).toBeGreaterThanOrEqual(0);
          if (efficiency !== null) expect(efficiency).toBeLessThanOrEqual(1);
        }
        // Whatever the truth, its own weighting has the smallest error.
        for (const { truth, term, se } of square) {
          const own = square.find((one) => one.truth === truth && one.weighting === truth && one.term === term);
          expect(se as number).toBeGreaterThanOrEqual((own?.se as number) * (1 - 1e-9));
        }
        expect(fit.coefficients).toHaveLength(3);
      }),
      some,
    );
  });
});

describe('sizes ten times as large', () => {
  const tenfold = (rows: readonly Row[]) => rows.map((row) => ({ ...row, n: row.n * 10 }));

  it.each(freeScale)(
    'change neither coefficients nor errors nor evidence under %s while the scale is free',
    (_, parts) => {
      fc.assert(
        fc.property(tables, (rows) => {
          const [one, more] = [fitted(rows, parts), fitted(tenfold(rows), parts)];
          expectCoefficients(one, more);
          expectPrices(one, more);
          // A size slope is told per person: its p value stays.
          expectEvidence(one, more, false);
          for (const [j, { intraclass }] of one.breakEven.entries()) {
            const ratio = (share: number) => share / (1 - share);
            const own = more.breakEven[j]?.intraclass;
            if (intraclass !== null && own) expectClose(ratio(intraclass), 10 * ratio(own), 1e-8);
          }
        }),
        some,
      );
    },
  );

  it('divide every error by the root of ten while the scale is set', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        const variance = { parts: [{ kind: 'per-size' }], fixed: { phi: 900 } };
        const run = (of: readonly Row[]) => fitted(of, [{ kind: 'per-size' }], { variance });
        const [one, more] = [run(rows), run(tenfold(rows))];
        for (const [j, { estimate, se }] of one.fit.coefficients.entries()) {
          const own = more.fit.coefficients[j];
          expectClose(estimate, own?.estimate, 1e-10, 1e-10 * (se as number));
          expectClose((se as number) / Math.sqrt(10), own?.se, 1e-10);
        }
      }),
      some,
    );
  });
});

describe('a weighted fit and the unweighted one of the same data divided by the roots of the variances', () => {
  const kinds = [
    { kind: 'model' },
    ...['HC0', 'HC1', 'HC2', 'HC3', 'HC4'].map((correction) => ({ kind: 'robust', correction })),
  ];

  it.each(kinds)('have the same coefficients and errors of kind %j', (inference) => {
    fc.assert(
      fc.property(tables, (rows) => {
        // Errors that are powers of two divide without rounding.
        const weighed = rows.map((row) => ({ ...row, se: 2 ** Math.floor(row.se / 3) }));
        const one = fitted(weighed, [{ kind: 'given', scale: 'free' } as const], { inference });
        const rooted: Columns = {
          ...columnsOf(weighed),
          one: weighed.map(({ se }) => 1 / se),
          x: weighed.map(({ x, se }) => x / se),
          w: weighed.map(({ w, se }) => w / se),
          y: weighed.map(({ y, se }) => y / se),
        };
        const other = answered(
          runOn(rooted, {
            ...said,
            terms: [{ column: 'one' }, { column: 'x' }, { column: 'w' }],
            intercept: false,
            variance: { parts: [{ kind: 'constant' }] },
            inference,
          }),
        );
        for (const [j, { estimate, se, p }] of one.fit.coefficients.entries()) {
          const own = other.fit.coefficients[j];
          expectClose(estimate, own?.estimate, 1e-9, 1e-10 * (se as number));
          expectClose(se, own?.se, 1e-9);
          expectClose(p, own?.p, 1e-7);
        }
        expectClose(one.fit.weightedRss, other.fit.weightedRss, 1e-9);
        for (const [g, { leverage, studentised }] of one.cells.entries()) {
          expectClose(leverage, other.cells[g]?.leverage, 1e-9);
          expectClose(studentised, other.cells[g]?.studentised, 1e-9, 1e-9);
        }
      }),
      some,
    );
  });
});

describe('a between part that is set to 0', () => {
  it.each([
    ['per-size', { kind: 'per-size' }, 'restricted'],
    ['per-size', { kind: 'per-size' }, 'full'],
    ['given', given, 'restricted'],
  ] as const)('is none: the fit of %s is the same (%o, by %s likelihood)', (_, part, method) => {
    fc.assert(
      fc.property(tables, (rows) => {
        const estimate = { method };
        const alone = fitted(rows, [part], { estimate });
        const parts = [part, { kind: 'between' }] as const;
        const variance = { parts, fixed: { tau2: 0 } };
        const beside = fitted(rows, parts, { estimate, variance });
        for (const [j, { estimate: b, se }] of alone.fit.coefficients.entries()) {
          const own = beside.fit.coefficients[j];
          expectClose(b, own?.estimate, 1e-8, 1e-8 * (se as number));
          expectClose(se, own?.se, 1e-8);
        }
        expectClose(alone.fit.logLikelihood, beside.fit.logLikelihood, 1e-9);
        expectClose(alone.fit.restrictedLogLikelihood, beside.fit.restrictedLogLikelihood, 1e-9);
        expect(alone.cells.map(({ leverage }) => leverage.toFixed(9))).toEqual(
          beside.cells.map(({ leverage }) => leverage.toFixed(9)),
        );
        expect(beside.cells.every(({ ownShare }) => ownShare === 0)).toBe(true);
      }),
      some,
    );
  });
});
