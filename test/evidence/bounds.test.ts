import type { Bound, Coefficient } from '@core/protocol/result';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { boundsIn, choices, coefficient, coefficientsIn, ran, table } from './limited-run';

const sizes = [40, 25, 90, 60, 33, 120, 75, 52, 64, 81];
const x = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10];
const y = [3.1, 4.2, 4.4, 6.1, 6.4, 8.2, 8.3, 9.9, 10.1, 12.4];
const given = sizes.map((_, g) => 0.5 + 0.1 * (g % 3));
const head = 'label,y,n,x,se';

const rowsWith = (
  values: readonly (string | number)[],
  of: { n?: readonly (string | number)[]; x?: readonly (string | number)[] } = {},
) =>
  values.map((value, g) => [
    `c${g}`,
    value,
    (of.n ?? sizes)[g] as number,
    (of.x ?? x)[g] as number,
    given[g] as number,
  ]);

const statuses = {
  c: 'suppressed-confidential',
  '<5': 'interval',
  '2-9': 'interval',
  z: 'true-zero',
  '..': 'not-collected',
};
const plan = (parts: object = {}, data: object = {}) => ({
  data: { file: 'cells.csv', read: { statuses }, ...data },
  roles: { label: ['label'], outcome: 'y', size: 'n' },
  terms: [{ column: 'x' }],
  ...parts,
});

const withGiven = { roles: { label: ['label'], outcome: 'y', size: 'n', error: 'se' } };
const between = { ...withGiven, variance: { parts: [{ kind: 'given', scale: 'fixed' }, { kind: 'between' }] } };

const hidden = (...at: number[]) => y.map((value, g) => (at.includes(g) ? 'c' : value));
const endsAt = (at: readonly number[], pair: readonly [number, number]) =>
  y.map((value, g): readonly [number, number] => (at.includes(g) ? pair : [value, value]));

function sideOf({ low, high }: Coefficient): number {
  return (low as number) > 0 ? 1 : (high as number) < 0 ? -1 : 0;
}

/** What bounds must be where weights are fixed: the extremes over fits at every choice of ends, each made on a table of its own. */
function expectExact(
  bounds: readonly Bound[],
  main: readonly Coefficient[],
  fits: readonly (readonly Coefficient[])[],
) {
  expect(bounds.length).toBe(main.length);
  for (const [j, bound] of bounds.entries()) {
    const own = main[j] as Coefficient;
    const there = fits.map((one) => one[j] as Coefficient);
    const estimates = there.map(({ estimate }) => estimate);
    expect(bound.weightsHeld).toBe(false);
    expect(bound.refitted).toBeNull();
    expect(bound.low as number).toBeCloseTo(Math.min(...estimates), 11);
    expect(bound.high as number).toBeCloseTo(Math.max(...estimates), 11);
    const side = sideOf(own);
    expect(bound.survives.significance).toBe(side !== 0 && there.every((one) => sideOf(one) === side));
    expect(bound.survives.sign).toBe(estimates.every((b) => Math.sign(b) === Math.sign(own.estimate)));
  }
}

describe('bounds over suppressed and rounded cells', () => {
  it('are the extremes of fits at every choice of ends where weights do not depend on the outcome, and significance is that of all vertices', () => {
    for (const pair of [
      [2, 12],
      [5.5, 8.5],
      [-40, 60],
    ] as const) {
      const at = [3, 6, 8];
      const result = ran(plan({}, { limits: { y: { suppressed: pair } } }), table(head, rowsWith(hidden(...at))));
      const fits = choices(endsAt(at, pair)).map((chosen) => coefficientsIn(plan(), table(head, rowsWith(chosen))));
      expect(fits.length).toBe(8);
      expectExact(result.bounds, result.fit.coefficients, fits);
      expect(result.bounds[0]?.over).toMatchObject({ cells: 3, brought: 3, outside: 0, all: true });
    }
  });

  it('hold for errors that follow the residuals in other ways: robust, Knapp-Hartung', () => {
    const at = [3, 6];
    const inferences = [
      { inference: { kind: 'robust', correction: 'HC3' } },
      { inference: { kind: 'robust', correction: 'HC1', level: 0.9 } },
      { ...withGiven, variance: { parts: [{ kind: 'given', scale: 'fixed' }] } },
      { ...withGiven, variance: { parts: [{ kind: 'given', scale: 'free' }] } },
      { variance: { parts: [{ kind: 'constant' }] }, target: 'persons' },
    ];
    for (const parts of inferences) {
      const result = ran(plan(parts, { limits: { y: { suppressed: [4, 11] } } }), table(head, rowsWith(hidden(...at))));
      const fits = choices(endsAt(at, [4, 11])).map((chosen) =>
        coefficientsIn(plan(parts), table(head, rowsWith(chosen))),
      );
      expectExact(result.bounds, result.fit.coefficients, fits);
    }
  });

  it('over rounded values move every cell by half the base, but a true zero', () => {
    const values = [...y.slice(0, 5), 'z', ...y.slice(6, 8)];
    const result = ran(plan({}, { limits: { y: { rounding: 1 } } }), table(head, rowsWith(values)));
    const ends = values.map((value): readonly [number, number] =>
      typeof value === 'number' ? [value - 0.5, value + 0.5] : [0, 0],
    );
    const fits = choices(ends).map((chosen) => coefficientsIn(plan(), table(head, rowsWith(chosen))));
    expect(fits.length).toBe(128);
    expectExact(result.bounds, result.fit.coefficients, fits);
    expect(result.bounds[0]?.over).toMatchObject({ cells: 7, brought: 0, all: true });
  });

  it('take the ends of an interval from its own text, and an open one from the limit', () => {
    const values = ['<5', ...y.slice(1, 4), '2-9', ...y.slice(5)];
    const ends = y.map((value, g): readonly [number, number] => (g === 0 ? [1, 5] : g === 4 ? [2, 9] : [value, value]));
    const fits = choices(ends).map((chosen) => coefficientsIn(plan(), table(head, rowsWith(chosen))));
    const limited = ran(plan({}, { limits: { y: { suppressed: [1, 50] } } }), table(head, rowsWith(values)));
    expectExact(limited.bounds, limited.fit.coefficients, fits);
    const open = ran(plan(), table(head, rowsWith(values)));
    // The first cell has x = 1: its lower values, without end, take the slope up and the intercept down.
    expect(open.bounds.map(({ low, high }) => [low === null, high === null])).toEqual([
      [true, false],
      [false, true],
    ]);
    expect(open.bounds.every(({ survives }) => !survives.significance)).toBe(true);
    expect(open.bounds[1]?.low).toBeCloseTo(limited.bounds[1]?.low as number, 11);
  });

  it('leave out what a fit cannot use for another reason, and count it', () => {
    const rows = rowsWith(hidden(2, 3, 4));
    (rows[3] as (string | number)[])[2] = '..';
    (rows[4] as (string | number)[])[1] = '..';
    const result = ran(plan({}, { limits: { y: { suppressed: [2, 9] } } }), table(head, rows));
    expect(result.bounds[0]?.over).toMatchObject({ cells: 1, brought: 1, outside: 1 });
    expect(result.data.used).toBe(7);
    const { facts } = result.cautions.find(({ code }) => code === 'cells-suppressed') ?? { facts: {} };
    expect(facts).toEqual({ cells: 2, labels: ['c2', 'c3'], bounded: 1 });
  });

  it('are drawn in to what a share can be', () => {
    const shares = y.map((value, g) => (g === 9 ? 'c' : (value / 13).toFixed(4)));
    const parts = { roles: { label: ['label'], outcome: 'y', size: 'n', outcomeUnit: 'share' } };
    const open = ran(plan(parts, { limits: { y: { suppressed: [null, null] } } }), table(head, rowsWith(shares)));
    const closed = ran(plan(parts, { limits: { y: { suppressed: [0, 1] } } }), table(head, rowsWith(shares)));
    expect(open.bounds).toEqual(closed.bounds);
    expect(open.bounds.every(({ low, high }) => low !== null && high !== null)).toBe(true);
  });

  it('follow a count to the share that it is of its size', () => {
    const counts = sizes.map((n, g) => (g === 4 ? 'c' : Math.round((n * (g + 2)) / 15)));
    const roles = { label: ['label'], count: 'y', size: 'n' };
    const result = ran(plan({ roles }, { limits: { y: { suppressed: [1, 4] } } }), table(head, rowsWith(counts)));
    const fits = [1, 4].map((end) =>
      coefficientsIn(plan({ roles }), table(head, rowsWith(counts.map((c) => (c === 'c' ? end : c))))),
    );
    expectExact(result.bounds, result.fit.coefficients, fits);
  });

  it('on the log scale move the log, and have no end below where a value can be 0', () => {
    const parts = { outcomeScale: 'log' };
    const at = [0, 5];
    const fits = choices(endsAt(at, [2, 8])).map((chosen) =>
      coefficientsIn(plan(parts), table(head, rowsWith(chosen))),
    );
    const result = ran(plan(parts, { limits: { y: { suppressed: [2, 8] } } }), table(head, rowsWith(hidden(...at))));
    expectExact(result.bounds, result.fit.coefficients, fits);
    const open = ran(plan(parts, { limits: { y: { suppressed: [0, 8] } } }), table(head, rowsWith(hidden(...at))));
    expect(open.bounds[0]?.low).toBeNull();
    expect(open.bounds[0]?.high).toBeCloseTo(result.bounds[0]?.high as number, 11);
  });
});

describe('bounds where weights depend on the outcome', () => {
  const at = [2, 7];
  const pair = [1, 14] as const;

  it('hold the weights at the chosen fit, say so, and are fitted again at both extremes', () => {
    const kinds = [
      between,
      { variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }] }, estimate: { method: 'full' } },
      { variance: { parts: [{ kind: 'size-power', exponent: 'estimate' }] } },
      { ...between, inference: { kind: 'knapp-hartung' } },
      { ...between, estimate: { method: 'moments', rule: 'dersimonian-laird' } },
    ];
    for (const parts of kinds) {
      const result = ran(plan(parts, { limits: { y: { suppressed: pair } } }), table(head, rowsWith(hidden(...at))));
      const fits = choices(endsAt(at, pair)).map((chosen) =>
        coefficientsIn(plan(parts), table(head, rowsWith(chosen))),
      );
      for (const [j, bound] of result.bounds.entries()) {
        expect(bound.weightsHeld).toBe(true);
        const { refitted } = bound;
        const estimates = fits.map((one) => one[j]?.estimate as number);
        for (const end of [refitted?.low, refitted?.high]) {
          const nearest = Math.min(...estimates.map((estimate) => Math.abs(estimate - (end as number))));
          expect(nearest).toBeLessThan(1e-8);
        }
        expect(bound.low as number).toBeLessThan(bound.high as number);
      }
    }
  });

  it('are exact all the same under weights that are stated apart', () => {
    const parts = { ...between, target: 'cells' };
    const result = ran(plan(parts, { limits: { y: { suppressed: pair } } }), table(head, rowsWith(hidden(...at))));
    const fits = choices(endsAt(at, pair)).map((chosen) => coefficientsIn(plan(parts), table(head, rowsWith(chosen))));
    for (const [j, bound] of result.bounds.entries()) {
      const estimates = fits.map((one) => one[j]?.estimate as number);
      expect(bound.weightsHeld).toBe(false);
      expect(bound.low as number).toBeCloseTo(Math.min(...estimates), 10);
      expect(bound.high as number).toBeCloseTo(Math.max(...estimates), 10);
    }
  });

  it('stand among the changes tried, with their intervals', () => {
    const result = ran(plan(between, { limits: { y: { suppressed: pair } } }), table(head, rowsWith(hidden(...at))));
    const found = result.overturn.filter(({ change }) => change.kind === 'bound');
    expect(found.map(({ term, change }) => [term, change.what])).toEqual([
      ['x', 'y'],
      ['x', 'y'],
    ]);
    const { refitted } = result.bounds[1] as Bound;
    expect(found.map(({ estimate }) => estimate).sort((a, b) => a - b)).toEqual([refitted?.low, refitted?.high]);
  });
});

describe('bounds over covariates', () => {
  it('find fits at corners of the covariate values that no other corner exceeds', () => {
    const rounded = { limits: { x: { rounding: 1 } } };
    const result = ran(plan({}, rounded), table(head, rowsWith(y.slice(0, 7))));
    const ends = x.slice(0, 7).map((value): readonly [number, number] => [value - 0.5, value + 0.5]);
    const fits = choices(ends).map((chosen) =>
      coefficientsIn(plan(), table(head, rowsWith(y.slice(0, 7), { x: chosen }))),
    );
    for (const [j, bound] of result.bounds.entries()) {
      const estimates = fits.map((one) => one[j]?.estimate as number);
      expect(bound.weightsHeld).toBe(true);
      expect(bound.refitted?.low as number).toBeCloseTo(Math.min(...estimates), 10);
      expect(bound.refitted?.high as number).toBeCloseTo(Math.max(...estimates), 10);
      const side = sideOf(result.fit.coefficients[j] as Coefficient);
      expect(bound.survives.significance).toBe(
        side !== 0 && fits.every((one) => sideOf(one[j] as Coefficient) === side),
      );
    }
    expect(result.overturn.filter(({ change }) => change.kind === 'bound').map(({ change }) => change.what)).toEqual([
      'x',
      'x',
    ]);
  });

  it('of a covariate that is suppressed take its cell in between two ends', () => {
    const hiddenX = x.map((value, g) => (g === 4 ? 'c' : value));
    const result = ran(plan({}, { limits: { x: { suppressed: [3, 7] } } }), table(head, rowsWith(y, { x: hiddenX })));
    const fits = [3, 7].map((end) =>
      coefficientsIn(plan(), table(head, rowsWith(y, { x: x.map((v, g) => (g === 4 ? end : v)) }))),
    );
    expect(result.data.used).toBe(9);
    for (const [j, bound] of result.bounds.entries()) {
      const estimates = fits.map((one) => one[j]?.estimate as number);
      expect(bound.refitted?.low as number).toBeCloseTo(Math.min(...estimates), 10);
      expect(bound.refitted?.high as number).toBeCloseTo(Math.max(...estimates), 10);
    }
  });
});

describe('sizes known to within so many', () => {
  it('are moved the worst way and fitted again, and stand among the changes tried', () => {
    const parts = plan({}, { sizeWithin: 12 });
    const result = ran(parts, table(head, rowsWith(y)));
    const ends = sizes.slice(0, 10).map((n): readonly [number, number] => [n - 12, n + 12]);
    const fits = choices(ends).map(
      (chosen) => coefficientsIn(plan(), table(head, rowsWith(y, { n: chosen })))[1]?.estimate as number,
    );
    const found = result.overturn.filter(({ change }) => change.kind === 'bound');
    expect(found.map(({ change }) => change.what)).toEqual(['n', 'n']);
    const estimates = found.map(({ estimate }) => estimate).sort((a, b) => a - b);
    expect(estimates[0]).toBeCloseTo(Math.min(...fits), 9);
    expect(estimates[1]).toBeCloseTo(Math.max(...fits), 9);
    const own = coefficient(result, 'x');
    const { facts } = result.cautions.find(({ code }) => code === 'sizes-within') ?? { facts: {} };
    expect(facts).toMatchObject({ within: 12, shift: { term: 'x', from: own.estimate } });
  }, 60_000);

  it('change nothing where nothing follows sizes', () => {
    const result = ran(
      plan({ variance: { parts: [{ kind: 'constant' }] } }, { sizeWithin: 12 }),
      table(head, rowsWith(y)),
    );
    expect(result.overturn.filter(({ change }) => change.kind === 'bound')).toEqual([]);
  });
});

describe('laws of bounds', () => {
  const cell = fc.record({
    y: fc.double({ min: -50, max: 50, noNaN: true }),
    n: fc.integer({ min: 2, max: 400 }),
    x: fc.integer({ min: -20, max: 20 }),
    low: fc.double({ min: -50, max: 50, noNaN: true }),
    up: fc.double({ min: 0, max: 30, noNaN: true }),
    share: fc.double({ min: 0, max: 1, noNaN: true }),
    hidden: fc.boolean(),
  });
  const some = fc
    .array(cell, { minLength: 6, maxLength: 14 })
    .filter((cells) => new Set(cells.filter(({ hidden: h }) => !h).map(({ x: value }) => value)).size > 2)
    .filter((cells) => cells.some(({ hidden: h }) => h));
  const kinds = fc.constantFrom('per-size', 'constant');

  it('any admissible values give coefficients inside them, to nine digits', { timeout: 120_000 }, () => {
    fc.assert(
      fc.property(some, kinds, (cells, kind) => {
        const text = (value: number) => value.toFixed(4);
        const written = (of: (one: (typeof cells)[number]) => string | number) =>
          table(
            'label,y,n,x',
            cells.map((one, g) => [`c${g}`, of(one), one.n, one.x]),
          );
        const ends = ({ low, up }: (typeof cells)[number]) => `${text(low)} to ${text(low + up)}`;
        const parts = plan({ variance: { parts: [{ kind }] } });
        const tokens = Object.fromEntries(cells.filter((one) => one.hidden).map((one) => [ends(one), 'interval']));
        const limited = { ...parts, data: { file: 'cells.csv', read: { statuses: tokens } } };
        const { bounds } = boundsIn(
          limited,
          written((one) => (one.hidden ? ends(one) : text(one.y))),
        );
        const inside = coefficientsIn(
          parts,
          written((one) => text(one.hidden ? one.low + one.share * one.up : one.y)),
        );
        for (const [j, { low, high }] of bounds.entries()) {
          const { estimate } = inside[j] as Coefficient;
          const slack = 1e-9 * (1 + Math.abs(estimate));
          expect(low as number).toBeLessThanOrEqual(estimate + slack);
          expect(high as number).toBeGreaterThanOrEqual(estimate - slack);
        }
      }),
      { numRuns: 60, seed: 11 },
    );
  });
});
