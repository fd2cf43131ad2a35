import type { Result } from '@core/protocol/result';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { answered, type Columns, type Files, refusedOrWhole, runOn, type Said } from '../engine/hostile';
import { expectClose, expectCoefficients, expectEvidence, expectPrices } from './alike';

interface Row {
  readonly region: number;
  readonly year: number;
  readonly x: number;
  readonly y: number;
  readonly n: number;
  readonly se: number;
  readonly share: number;
}

const decimal = (low: number, high: number) =>
  fc.integer({ min: low * 1000, max: high * 1000 }).map((thousandths) => thousandths / 1000);

/** Five regions by three or four years, shocks of their own in both; no two cells of equal size: ties are broken by the order of the rows. */
const tables: fc.Arbitrary<readonly Row[]> = fc
  .tuple(
    fc.uniqueArray(
      fc.record({
        x: decimal(-9, 9),
        e: decimal(-3, 3),
        n: fc.integer({ min: 30, max: 900 }),
        se: decimal(1, 3),
        s: decimal(0, 1),
      }),
      { minLength: 15, maxLength: 20, selector: ({ n }) => n },
    ),
    fc.array(decimal(-4, 4), { minLength: 5, maxLength: 5 }),
  )
  .filter(([cells]) => new Set(cells.map(({ x }) => x)).size > 8 && new Set(cells.map(({ e }) => e)).size > 8)
  .map(([cells, shocks]) =>
    cells.map(({ x, e, n, se, s }, g) => ({
      region: g % 5,
      year: 2000 + Math.floor(g / 5),
      x,
      y: Number((5 + x / 2 + e + (shocks[g % 5] as number)).toFixed(3)),
      n,
      se,
      share: 0.3 + x / 60 + (s - 0.5) / 5,
    })),
  );

function columnsOf(rows: readonly Row[], unit = 1): Columns {
  const exact = (value: number) => Number((value * unit).toPrecision(12));
  return {
    region: rows.map(({ region }) => `r${region}`),
    zone: rows.map(({ region }) => `z${region % 2}`),
    year: rows.map(({ year }) => year),
    own: rows.map(({ region, year }) => `${region} in ${year}`),
    x: rows.map(({ x }) => x),
    z: rows.map(({ n }) => Number((1 + n / 300).toFixed(4))),
    kind: rows.map(({ region, year }) => 'AB'[(region + year) % 2] as string),
    y: rows.map(({ y }) => exact(y)),
    n: rows.map(({ n }) => n),
    se: rows.map(({ se }) => exact(se)),
    count: rows.map(({ n, share }) => Math.round(n * share)),
    exposure: rows.map(({ n }) => 4 * n),
  };
}

/** Errors correlated by .3 inside regions, as a square by label. */
function squareOf(rows: readonly Row[], unit = 1): Files {
  const labels = rows.map(({ region, year }) => `r${region} · ${year}`);
  const entry = (a: Row, b: Row) =>
    (a === b ? a.se * a.se : a.region === b.region ? 0.3 * a.se * b.se : 0) * unit * unit;
  const lines = rows.map((a, i) => [labels[i], ...rows.map((b) => Number(entry(a, b).toPrecision(14)))]);
  return { 'square.csv': [['', ...labels], ...lines].map((line) => line.join(',')).join('\n') };
}

const roles = { label: ['region', 'year'], outcome: 'y', size: 'n', error: 'se' };
const ofCounts = { ...roles, outcome: null, count: 'count' };
const ofRates = { ...ofCounts, exposure: 'exposure' };
const base: Said = {
  roles,
  terms: [{ column: 'x' }],
  beside: ['constant'],
  questions: [
    { kind: 'joint', terms: ['intercept', 'x'] },
    { kind: 'combination', of: { x: 2 }, equals: 0 },
  ],
};

const byRegion = { kind: 'exchangeable', by: ['region'] };
const inYears = { kind: 'serial', by: ['region'], order: 'year' };
const given = { kind: 'given', scale: 'fixed' };
const perSize = { kind: 'per-size' };
const constant = { kind: 'constant' };

const structures: readonly (readonly [name: string, said: Said])[] = [
  ['per-class', { variance: { parts: [{ kind: 'per-class', column: 'kind' }] } }],
  ['log-linear', { variance: { parts: [{ kind: 'log-linear', terms: [{ column: 'z' }] }] } }],
  [
    'size-power, its exponent set',
    { variance: { parts: [{ kind: 'size-power', exponent: 'estimate' }], fixed: { delta: 0.4 } } },
  ],
  ['constant + shared', { variance: { parts: [constant, { kind: 'shared', by: ['region'] }] } }],
  [
    'given + shared, crossed',
    {
      variance: {
        parts: [given, { kind: 'shared', by: ['region'] }, { kind: 'shared', by: ['year'] }],
        fixed: { 'omega2: year': 0.5 },
      },
    },
  ],
  ['constant, exchangeable', { variance: { parts: [{ ...constant, correlation: byRegion }] } }],
  [
    'per-size, serial',
    { variance: { parts: [{ ...perSize, correlation: inYears }], fixed: { 'rho: per-size': 0.4 } } },
  ],
  ['a matrix', { variance: { parts: [{ kind: 'matrix', file: 'square.csv', scale: 'fixed' }] } }],
  [
    'a matrix, free, + between',
    { variance: { parts: [{ kind: 'matrix', file: 'square.csv', scale: 'free' }, { kind: 'between' }] } },
  ],
];

const counted: readonly (readonly [name: string, said: Said])[] = [
  ['binomial', { roles: ofCounts, variance: { parts: [{ kind: 'binomial', scale: 'free' }] } }],
  ['counts', { roles: ofRates, variance: { parts: [{ kind: 'counts', scale: 'fixed' }] } }],
  [
    'logits by minimum chi-square',
    { roles: ofCounts, outcomeScale: 'logit', variance: { parts: [{ kind: 'binomial', scale: 'free' }] } },
  ],
  [
    'logits by likelihood',
    {
      roles: ofCounts,
      outcomeScale: 'logit',
      estimate: { method: 'full' },
      variance: { parts: [{ kind: 'binomial', scale: 'fixed' }] },
    },
  ],
  [
    'rates with a log link',
    { roles: ofRates, outcomeScale: 'log', variance: { parts: [{ kind: 'counts', scale: 'free' }] } },
  ],
];

const inferences: readonly Said[] = [
  ...['HC0', 'HC1', 'HC2', 'HC3', 'HC4'].map((correction) => ({ kind: 'robust', correction })),
  ...['CR0', 'CR1', 'CR2', 'CR3'].map((correction) => ({ kind: 'clustered', correction, by: ['region'] })),
  { kind: 'clustered', correction: 'CR1', by: ['region'], alsoBy: ['year'] },
  { kind: 'wild', by: ['region'], replications: 5000 },
];

const some = { seed: 11, numRuns: 2, endOnFailure: true };

/** A result; null where a search says that these data have no maximum. */
function fitted(
  rows: readonly Row[],
  said: Said,
  { unit = 1, columns = {} }: { unit?: number; columns?: Columns } = {},
): Result | null {
  const run = runOn({ ...columnsOf(rows, unit), ...columns }, { ...base, ...said }, squareOf(rows, unit));
  if (run.ok) return answered(run);
  expect(['no-convergence', 'fitted-outside']).toContain(refusedOrWhole(run)[0]);
  return null;
}

/** Two runs of which the law says something: both are answered, or both are refused. */
function pair(one: Result | null, other: Result | null): readonly [Result, Result] | null {
  expect(other === null).toBe(one === null);
  return one && other && [one, other];
}

const statistics = ({ questions }: Result) =>
  questions.map(({ answer }) => ('statistic' in answer ? answer.statistic : 'p' in answer ? answer.p : null));

describe.each([...structures, ...counted])('the whole path under %s', (name, said) => {
  it('gives the same, whatever the order of the rows', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        const both = pair(fitted(rows, said), fitted(rows.toReversed(), said));
        if (!both) return;
        expectCoefficients(...both);
        expectEvidence(...both);
        expectPrices(...both);
        const [one, other] = both;
        const byLabel = new Map(other.cells.map((cell) => [cell.label, cell]));
        for (const { label, leverage, residual, studentised } of one.cells) {
          const own = byLabel.get(label);
          expectClose(leverage, own?.leverage, 1e-5, 1e-9);
          expectClose(residual, own?.residual, 1e-5, 1e-6);
          expectClose(studentised, own?.studentised, 1e-5, 1e-6);
        }
        for (const [q, statistic] of statistics(one).entries())
          expectClose(statistic, statistics(other)[q], 1e-4, 1e-12);
      }),
      some,
    );
  });

  it('changes a column’s own coefficient alone when its unit changes, and no answer', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom(1000, 0.001), (rows, factor) => {
        const x = rows.map((row) => Number((row.x * factor).toPrecision(12)));
        const both = pair(fitted(rows, said), fitted(rows, said, { columns: { x } }));
        if (!both) return;
        const times = (term: string) => (term === 'x' ? 1 / factor : 1);
        expectCoefficients(...both, times);
        expectEvidence(...both);
        expectPrices(...both, times);
        for (const [q, statistic] of statistics(both[0]).entries())
          expectClose(statistic, statistics(both[1])[q], 1e-4, 1e-12);
      }),
      some,
    );
  });

  it('prices no rival below the structure itself, and pulls times observations are the coefficients', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        const result = fitted(rows, said);
        if (!result) return;
        for (const { price, eigenvalues, efficiency } of result.beside) {
          for (const { cost } of price) expect(cost).toBeGreaterThanOrEqual(0);
          for (const value of eigenvalues) expect(value).toBeGreaterThanOrEqual(0);
          if (efficiency !== null) expect(efficiency).toBeLessThanOrEqual(1);
        }
        // Under maximum likelihood with a link pulls are of the working response.
        if (/likelihood|link/.test(name)) return;
        for (const [j, { pulls }] of result.beam.entries()) {
          const products = pulls.map((pull, g) => pull * (result.cells[g]?.observed as number));
          const size = products.reduce((sum, value) => sum + Math.abs(value), 0);
          const sum = products.reduce((total, value) => total + value, 0);
          expect(Math.abs(sum - (result.fit.coefficients[j]?.estimate as number))).toBeLessThan(1e-11 * size);
        }
      }),
      some,
    );
  });
});

/** What is set in the outcome's own unit does not go with it. */
const free = structures.filter(([, said]) => {
  const { variance } = said as { variance: { fixed?: Said } };
  return !Object.keys(variance.fixed ?? {}).some((key) => key.startsWith('omega2'));
});

describe.each(free)('the unit of the outcome under %s', (_, said) => {
  it('multiplies every coefficient and error, and no p value', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom(1e6, 1e-4), (rows, unit) => {
        const both = pair(fitted(rows, said), fitted(rows, said, { unit }));
        if (!both) return;
        expectCoefficients(...both, () => unit);
        expectPrices(...both, () => unit);
        expectEvidence(...both);
      }),
      some,
    );
  });
});

describe.each(inferences)('the inference %j', (inference) => {
  const said = { variance: { parts: [perSize] }, inference };
  const alike = (both: readonly [Result, Result] | null, times?: (term: string) => number) => {
    if (!both) return;
    expectCoefficients(...both, times);
    for (const [q, statistic] of statistics(both[0]).entries())
      expectClose(statistic, statistics(both[1])[q], 1e-6, 1e-9);
    for (const [j, own] of (both[0].fit.wild ?? []).entries()) expect(both[1].fit.wild?.[j]).toEqual(own);
  };

  it('knows neither the order of the rows nor the unit of a column', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        const one = fitted(rows, said);
        const x = rows.map((row) => Number((row.x * 1000).toPrecision(12)));
        alike(pair(one, fitted(rows.toReversed(), said)));
        alike(pair(one, fitted(rows, said, { columns: { x } })), (term) => (term === 'x' ? 1 / 1000 : 1));
      }),
      some,
    );
  });
});

describe.each([{ kind: 'kenward-roger' }, { kind: 'knapp-hartung' }])('the inference %j', (inference) => {
  it('knows neither the order of the rows nor the unit of a column', () => {
    const said = { variance: { parts: [given, { kind: 'between' }] }, inference, estimate: { method: 'restricted' } };
    fc.assert(
      fc.property(tables, (rows) => {
        const one = fitted(rows, said) as Result;
        const x = rows.map((row) => Number((row.x * 1000).toPrecision(12)));
        expectCoefficients(one, fitted(rows.toReversed(), said) as Result);
        expectCoefficients(one, fitted(rows, said, { columns: { x } }) as Result, (term) =>
          term === 'x' ? 1 / 1000 : 1,
        );
      }),
      some,
    );
  });
});

describe('structures that say the same', () => {
  const same = (rows: readonly Row[], one: Said, other: Said, more: { columns?: Columns; files?: Files } = {}) => {
    const [a, b] = [one, other].map((said) =>
      runOn({ ...columnsOf(rows), ...more.columns }, { ...base, ...said }, more.files),
    );
    if (!a || !b || !a.ok || !b.ok) {
      expect(a?.ok).toBe(b?.ok);
      return;
    }
    const both = [answered(a), answered(b)] as const;
    expectCoefficients(...both);
    expectPrices(...both);
    expectClose(both[0].fit.logLikelihood, both[1].fit.logLikelihood, 1e-8);
    for (const [g, { leverage, residual }] of both[0].cells.entries()) {
      expectClose(leverage, both[1].cells[g]?.leverage, 1e-5, 1e-9);
      expectClose(residual, both[1].cells[g]?.residual, 1e-5, 1e-6);
    }
  };

  it('a diagonal matrix and given errors', () => {
    fc.assert(
      fc.property(tables, fc.constantFrom('fixed', 'free'), (rows, scale) => {
        const diagonal = rows.map((a, i) => [
          `r${a.region} · ${a.year}`,
          ...rows.map((_, j) => (i === j ? Number((a.se * a.se).toPrecision(17)) : 0)),
        ]);
        const names = ['', ...rows.map(({ region, year }) => `r${region} · ${year}`)];
        const files = { 'd.csv': [names, ...diagonal].map((line) => line.join(',')).join('\n') };
        for (const more of [[], [{ kind: 'between' }]])
          same(
            rows,
            { variance: { parts: [{ kind: 'matrix', file: 'd.csv', scale }, ...more] } },
            { variance: { parts: [{ kind: 'given', scale }, ...more] } },
            { files },
          );
      }),
      some,
    );
  });

  it('a shared part by a label that no two cells have, and a between part', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        for (const sampling of [given, perSize])
          for (const method of ['restricted', 'full'])
            same(
              rows,
              { estimate: { method }, variance: { parts: [sampling, { kind: 'shared', by: ['own'] }] } },
              { estimate: { method }, variance: { parts: [sampling, { kind: 'between' }] } },
            );
      }),
      some,
    );
  });

  it('neighbours a world apart, and independent cells', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        const far = rows.map(({ year }) => 100_000 * year);
        const serial = { kind: 'serial', by: ['region'], order: 'far' };
        same(
          rows,
          { variance: { parts: [{ ...perSize, correlation: serial }], fixed: { 'rho: per-size': 0.5 } } },
          { variance: { parts: [perSize] } },
          { columns: { far } },
        );
      }),
      some,
    );
  });

  it('an equal correlation of 0, set by the user, and none', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        for (const correlation of [byRegion, inYears])
          same(
            rows,
            { variance: { parts: [{ ...perSize, correlation }], fixed: { 'rho: per-size': 0 } } },
            { variance: { parts: [perSize] } },
          );
      }),
      some,
    );
  });

  it('sizes ten times as large change nothing while the scale is free, in correlated cells too', () => {
    fc.assert(
      fc.property(tables, (rows) => {
        const n = rows.map((row) => 10 * row.n);
        for (const parts of [[{ ...perSize, correlation: inYears }], [perSize, { kind: 'shared', by: ['region'] }]]) {
          const both = pair(
            fitted(rows, { variance: { parts } }),
            fitted(rows, { variance: { parts } }, { columns: { n } }),
          );
          if (!both) continue;
          expectCoefficients(...both);
          expectPrices(...both);
        }
      }),
      some,
    );
  });
});
