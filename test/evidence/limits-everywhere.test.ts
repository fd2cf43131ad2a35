import { normalPlan } from '@core/protocol/read';
import type { Result } from '@core/protocol/result';
import { validateResult } from '@core/protocol/validate-result';
import { reportOf } from '@core/report/report-of';
import { describe, expect, it } from 'vitest';
import { ran, table } from './limited-run';

const towns = ['a', 'b', 'c', 'd', 'e', 'f', 'g'];
const head = 'town,year,y,c,n,e,x,se,kind';
const rows = towns.flatMap((town, t) =>
  [1, 2, 3].map((year) => {
    const i = 3 * t + year;
    const n = 30 + ((i * 37) % 60);
    const mean = 0.2 + 0.02 * i + 0.03 * ((i * 13) % 7);
    const count = Math.max(1, Math.round(n * Math.min(0.9, mean)));
    return [
      town,
      year,
      mean.toFixed(3),
      count,
      n,
      n / 2,
      (i * 7) % 11,
      (0.05 + 0.01 * (i % 4)).toFixed(2),
      i % 2 ? 'u' : 'v',
    ];
  }),
);

/** The table with the outcome and the count of some rows suppressed. */
const csv = table(
  head,
  rows.map((row, g) => (g === 4 || g === 11 ? row.map((cell, c) => (c === 2 || c === 3 ? '(c)' : cell)) : row)),
);

const read = { statuses: { '(c)': 'suppressed-confidential' } };
const base = { label: ['town', 'year'], outcome: 'y', size: 'n', error: 'se' };
const written = (parts: object, limits: object = { y: { suppressed: [0, 1.5] }, c: { suppressed: [0, 9] } }) => ({
  data: { file: 'cells.csv', read, limits },
  roles: base,
  terms: [{ column: 'x' }],
  ...parts,
});

const given = { parts: [{ kind: 'given', scale: 'fixed' }, { kind: 'between' }] };
const counted = { roles: { label: ['town', 'year'], count: 'c', size: 'n' } };

const plans: readonly (readonly [string, object])[] = [
  [
    'serial between beside given errors',
    {
      variance: {
        parts: [
          { kind: 'given', scale: 'fixed' },
          { kind: 'between', correlation: { kind: 'serial', by: ['town'], order: 'year' } },
        ],
        fixed: { 'rho: between': 0.5 },
      },
    },
  ],
  ['shared', { variance: { parts: [{ kind: 'per-size' }, { kind: 'shared', by: ['town'] }] } }],
  [
    'exchangeable alone',
    { variance: { parts: [{ kind: 'per-size', correlation: { kind: 'exchangeable', by: ['town'] } }] } },
  ],
  ['per-class', { variance: { parts: [{ kind: 'per-class', column: 'kind', perSize: true }] } }],
  ['log-linear', { variance: { parts: [{ kind: 'log-linear', terms: [{ column: 'n', transform: 'log' }] }] } }],
  ['proxy', { variance: { parts: [{ kind: 'proxy', column: 'n', exponent: 'estimate' }] } }],
  ['clustered', { inference: { kind: 'clustered', by: ['town'] } }],
  ['wild', { inference: { kind: 'wild', by: ['town'], replications: 99 } }],
  [
    'Kenward-Roger',
    { variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }] }, inference: { kind: 'kenward-roger' } },
  ],
  ['binomial, identity', { ...counted, variance: { parts: [{ kind: 'binomial', scale: 'free' }] } }],
  [
    'binomial, logit',
    {
      ...counted,
      outcomeScale: 'logit',
      estimate: { method: 'full' },
      variance: { parts: [{ kind: 'binomial', scale: 'fixed' }] },
    },
  ],
  [
    'minimum chi-square',
    { ...counted, outcomeScale: 'logit', variance: { parts: [{ kind: 'binomial', scale: 'fixed' }] } },
  ],
  [
    'counts, log',
    {
      roles: { label: ['town', 'year'], count: 'c', exposure: 'e', per: 10 },
      outcomeScale: 'log',
      variance: { parts: [{ kind: 'counts', scale: 'fixed' }] },
    },
  ],
  ['log of a mean with given errors', { outcomeScale: 'log', variance: given }],
  ['coefficients of variation', { roles: { ...base, errorKind: 'cv' }, variance: given }],
  ['target persons', { target: 'persons', variance: given }],
  ['a target of its own', { target: { parts: [{ kind: 'size-power', exponent: 'estimate' }] }, variance: given }],
  ['moments', { variance: given, estimate: { method: 'moments', rule: 'paule-mandel' } }],
  ['two steps', { variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }] }, estimate: { method: 'two-step' } }],
  ['sizes rounded', { data: { file: 'cells.csv', read, limits: { y: { suppressed: [0, 1] }, n: { rounding: 10 } } } }],
  [
    'covariate and outcome',
    { data: { file: 'cells.csv', read, limits: { y: { suppressed: [0, 1] }, x: { rounding: 1 } } } },
  ],
  [
    'categories',
    {
      terms: [
        { column: 'x' },
        { column: 'kind', as: 'category' },
        { product: [{ column: 'x' }, { column: 'kind', as: 'category' }] },
      ],
    },
  ],
];

/** Every number of a value, with where it stands. */
function* numbersIn(value: unknown, at = ''): Generator<readonly [string, number]> {
  if (typeof value === 'number') yield [at, value];
  else if (value !== null && typeof value === 'object')
    for (const [key, inner] of Object.entries(value)) yield* numbersIn(inner, `${at}/${key}`);
}

function expectWhole(result: Result): void {
  for (const [at, value] of numbersIn(result)) expect(Number.isFinite(value), at).toBe(true);
  const valid = validateResult(JSON.parse(JSON.stringify(result)));
  expect(valid.ok ? [] : valid.problems).toEqual([]);
  expect(JSON.stringify(reportOf({ result, edition: null }))).not.toMatch(/NaN|"undefined|undefined"|\[object/);
}

describe('limits under every structure and inference', () => {
  it.each(plans)(
    '%s: bounds that hold the estimate of the middle, a whole result and a whole report',
    { timeout: 60_000 },
    (_, parts) => {
      const result = ran(written(parts), csv);
      expectWhole(result);
      expect(result.bounds.length).toBe(result.fit.coefficients.length);
      for (const { low, high, weightsHeld, refitted, over } of result.bounds) {
        if (low !== null && high !== null) expect(low).toBeLessThanOrEqual(high);
        expect(refitted !== null).toBe(weightsHeld);
        expect(over.brought).toBe(2);
      }
    },
  );
});

describe('limits that bring nothing, or cannot be followed', () => {
  const codes = (result: Result) => result.cautions.map(({ code }) => code);

  it('of a column that the fit does not use, or whose values are all known, give no bounds', () => {
    const full = table(head, rows);
    expect(ran(written({}, { e: { rounding: 1 } }), full).bounds).toEqual([]);
    expect(ran(written({}, { y: { suppressed: [0, 1] } }), full).bounds).toEqual([]);
  });

  it('of errors, sizes and ingredients of derived columns are said not to be followed', () => {
    const limits = { se: { rounding: 0.01 }, n: { suppressed: [1, 9] } };
    const result = ran(written({ variance: given }, limits), csv);
    const caution = result.cautions.find(({ code }) => code === 'limits-not-followed');
    expect(caution?.facts).toEqual({ columns: ['se', 'n'], failed: false });
    expectWhole(result);
  });

  it('give no bounds, and say so, where the cells behind them cannot carry the model', () => {
    // With the suppressed cells the only two of a level, the level itself is unknown to the fit: they stay outside.
    const only = rows.map((row, g) =>
      g === 4 || g === 11 ? row.map((c, i) => (i === 2 ? '(c)' : i === 8 ? 'w' : c)) : row,
    );
    const parts = { terms: [{ column: 'kind', as: 'category' }] };
    expect(ran(written(parts), table(head, only)).bounds).toEqual([]);
    const zero = rows.map((row, g) =>
      g === 4
        ? row.map((c, i) => (i === 2 ? '(c)' : i === 6 ? 0 : c))
        : row.map((c, i) => (i === 6 && c === 0 ? 5 : c)),
    );
    const result = ran(written({ terms: [{ column: 'x', transform: 'log' }] }), table(head, zero));
    expect(result.bounds).toEqual([]);
    expect(codes(result)).toContain('limits-not-followed');
  });

  it('as far as doubles go are open, and sizes within more than themselves stay above 0', () => {
    const wide = ran(written({}, { y: { suppressed: [-1e300, 1e300] } }), csv);
    expectWhole(wide);
    expect(wide.bounds.every(({ low, high }) => low === null && high === null)).toBe(true);
    const sizes = ran({ ...written({}, {}), data: { file: 'cells.csv', read, sizeWithin: 1e6 } }, csv);
    expectWhole(sizes);
    expect(sizes.overturn.some(({ change }) => change.kind === 'bound')).toBe(true);
  });

  it('are read from a plan as it is written', () => {
    expect(
      normalPlan({ format: 'steelyard-plan/1', variance: { parts: [{ kind: 'per-size' }] }, ...written({}) }).ok,
    ).toBe(true);
  });
});
