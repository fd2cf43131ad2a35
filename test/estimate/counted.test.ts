import { countedLogLikelihood, devianceOf } from '@core/estimate/counted-likelihood';
import { climbMeans } from '@core/estimate/mean-ascent';
import type { Design } from '@core/model/design';
import { heightOf, type MeanDependent, meansAt, predictorOf } from '@core/model/mean-dependent';
import { fromDoubles } from '@core/numbers/decimals';
import type { Result } from '@core/protocol/result';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { answered, type Columns, refusedOrWhole, runOn, type Said } from '../engine/hostile';

const shares = { roles: { label: ['cell'], count: 'c', size: 'n' }, terms: [{ column: 'x' }] };
const rates = { roles: { label: ['cell'], count: 'c', exposure: 'e', per: 100 }, terms: [{ column: 'x' }] };
const binomial = (scale: 'fixed' | 'free', more: object[] = []): Said => ({
  variance: { parts: [{ kind: 'binomial', scale }, ...more] },
});
const counts = (scale: 'fixed' | 'free', more: object[] = []): Said => ({
  variance: { parts: [{ kind: 'counts', scale }, ...more] },
});
const full = { estimate: { method: 'full' } };

/** Random cells with a share that x moves. */
const tables = fc
  .array(
    fc.record({
      x: fc.integer({ min: -20, max: 20 }),
      n: fc.integer({ min: 5, max: 400 }),
      u: fc.integer({ min: 1, max: 99 }),
    }),
    {
      minLength: 6,
      maxLength: 14,
    },
  )
  .filter((rows) => new Set(rows.map(({ x }) => x)).size > 3)
  .map((rows): Columns => {
    const share = ({ x, u }: { x: number; u: number }) =>
      Math.min(0.98, Math.max(0.02, 0.5 + 0.012 * x + (u - 50) / 900));
    return {
      cell: rows.map((_, g) => `cell ${g}`),
      x: rows.map(({ x }) => x / 10),
      n: rows.map(({ n }) => n),
      e: rows.map(({ n }) => n * 1.5),
      c: rows.map((row) => Math.round(row.n * share(row))),
    };
  });
const some = { seed: 11, numRuns: 25, endOnFailure: true };

function estimates({ fit }: Result): number[] {
  return fit.coefficients.map(({ estimate }) => estimate);
}

function columnOf(columns: Columns, name: string): number[] {
  return (columns[name] ?? []).map(Number);
}

/** X' u, scaled by its own spread: 0 at a maximum of the likelihood. */
function scoreOf(
  columns: Columns,
  b: readonly number[],
  of: { counts: boolean; scale: 'identity' | 'log' | 'logit' },
): number {
  const [x, n, e, c] = ['x', 'n', 'e', 'c'].map((name) => columnOf(columns, name)) as [
    number[],
    number[],
    number[],
    number[],
  ];
  const sums = [0, 0];
  const spread = [0, 0];
  for (const [g, at] of x.entries()) {
    const eta = (b[0] as number) + (b[1] as number) * at;
    const mu = of.scale === 'identity' ? eta : of.scale === 'log' ? Math.exp(eta) : 1 / (1 + Math.exp(-eta));
    const slope = of.scale === 'identity' ? 1 : of.scale === 'log' ? mu : mu * (1 - mu);
    const w = of.counts ? (e[g] as number) / 100 : (n[g] as number);
    const v = of.counts ? mu : mu * (1 - mu);
    const u = (((c[g] as number) - w * mu) * slope) / v;
    const s = (w * slope * slope) / v;
    for (const [j, column] of [1, at].entries()) {
      sums[j] = (sums[j] as number) + column * u;
      spread[j] = (spread[j] as number) + column * column * s;
    }
  }
  return Math.max(...sums.map((sum, j) => Math.abs(sum) / Math.sqrt(spread[j] as number)));
}

describe('fits of counts', () => {
  it.each([
    ['binomial on identity', { ...shares, ...binomial('fixed') }, { counts: false, scale: 'identity' }],
    [
      'binomial on logit',
      { ...shares, ...full, outcomeScale: 'logit', ...binomial('fixed') },
      { counts: false, scale: 'logit' },
    ],
    [
      'binomial on log',
      { ...shares, ...full, outcomeScale: 'log', ...binomial('fixed') },
      { counts: false, scale: 'log' },
    ],
    ['counts on identity', { ...rates, ...counts('fixed') }, { counts: true, scale: 'identity' }],
    ['counts on log', { ...rates, outcomeScale: 'log', ...counts('fixed') }, { counts: true, scale: 'log' }],
  ] as const)('%s: the score of the likelihood is zero at every answer, and refusals name cells', (_, said, of) => {
    let fitted = 0;
    fc.assert(
      fc.property(tables, (columns) => {
        const run = runOn(columns, { ...said });
        if (!run.ok) {
          expect(run.problems.map(({ code }) => code)).toEqual(['fitted-outside']);
          return;
        }
        fitted++;
        expect(scoreOf(columns, estimates(answered(run)), of)).toBeLessThan(1e-9);
      }),
      some,
    );
    expect(fitted).toBeGreaterThan(15);
  });

  it('a free factor is Pearson over G - k, and changes errors by its root and nothing else', () => {
    fc.assert(
      fc.property(tables, (columns) => {
        const said = { ...shares, ...full, outcomeScale: 'logit' };
        const fixed = answered(runOn(columns, { ...said, ...binomial('fixed') }));
        const free = answered(runOn(columns, { ...said, ...binomial('free') }));
        const phi = free.fit.variance[0]?.estimate as number;
        const { statistic, freedom } = fixed.fit.chiSquare as { statistic: number; freedom: number };
        expect(phi / (statistic / freedom)).toBeCloseTo(1, 10);
        expect(estimates(free)).toEqual(estimates(fixed));
        for (const [j, one] of free.fit.coefficients.entries())
          expect((one.se as number) / (fixed.fit.coefficients[j]?.se as number) / Math.sqrt(phi)).toBeCloseTo(1, 10);
        expect([fixed.fit.coefficients[0]?.reference?.kind, free.fit.coefficients[0]?.reference?.kind]).toEqual([
          'normal',
          't',
        ]);
        expect([free.fit.logLikelihood, free.fit.aic, free.fit.bic]).toEqual([null, null, null]);
      }),
      { ...some, numRuns: 8 },
    );
  });

  it('beside a between variance of 0 the fixed point is that of the part alone', () => {
    const columns: Columns = {
      cell: ['a', 'b', 'c', 'd', 'e', 'f', 'g'],
      x: [0, 1, 2, 3, 4, 5, 6],
      n: [40, 90, 25, 60, 33, 80, 51],
      c: [10, 27, 9, 24, 15, 40, 28],
    };
    const alone = answered(runOn(columns, { ...shares, ...binomial('fixed') }));
    const both = answered(runOn(columns, { ...shares, ...binomial('fixed', [{ kind: 'between' }]) }));
    expect(both.fit.variance[0]?.atBoundary).toBe(true);
    for (const [j, b] of estimates(both).entries()) expect(b).toBeCloseTo(estimates(alone)[j] as number, 9);
    expect([both.fit.logLikelihood, both.fit.aic, both.fit.deviance]).toEqual([null, null, null]);
    expect(both.betweenRules).toEqual([]);
  });

  it('beside a between variance the means and the variances agree with each other', () => {
    const columns: Columns = {
      cell: Array.from({ length: 12 }, (_, g) => `cell ${g}`),
      x: [0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11],
      n: [400, 900, 250, 600, 330, 800, 510, 640, 220, 470, 380, 290],
      c: [100, 370, 60, 240, 90, 480, 200, 410, 60, 260, 270, 120],
    };
    const { fit, cells } = answered(runOn(columns, { ...shares, ...binomial('fixed', [{ kind: 'between' }]) }));
    const tau2 = fit.variance[0]?.estimate as number;
    expect(tau2).toBeGreaterThan(0.001);
    for (const { fitted, variance, size } of cells)
      expect(variance / ((fitted * (1 - fitted)) / (size as number) + tau2)).toBeCloseTo(1, 9);
  });

  it('percent is the share times 100 on the identity scale, its error too', () => {
    const n = [40, 90, 25, 60, 33, 80, 51];
    const c = [10, 27, 9, 24, 15, 40, 28];
    const base = { cell: n.map((_, g) => `${g}`), x: n.map((_, g) => g), n };
    const share = answered(runOn({ ...base, c }, { ...shares, ...binomial('fixed') }));
    const percent = answered(
      runOn(
        { ...base, p: c.map((count, g) => (100 * count) / (n[g] as number)) },
        {
          terms: shares.terms,
          roles: { label: ['cell'], outcome: 'p', outcomeUnit: 'percent', size: 'n' },
          ...binomial('fixed'),
        },
      ),
    );
    for (const [j, one] of percent.fit.coefficients.entries()) {
      expect(one.estimate / 100).toBeCloseTo(share.fit.coefficients[j]?.estimate as number, 12);
      expect((one.se as number) / 100).toBeCloseTo(share.fit.coefficients[j]?.se as number, 12);
    }
    expect(percent.fit.chiSquare?.statistic).toBeCloseTo(share.fit.chiSquare?.statistic as number, 9);
  });

  it('two-step takes the means of unweighted least squares', () => {
    const n = [40, 90, 25, 60, 33, 80, 51];
    const c = [10, 27, 9, 24, 15, 40, 28];
    const columns = { cell: n.map((_, g) => `${g}`), x: n.map((_, g) => g), n, c };
    const { cells } = answered(runOn(columns, { ...shares, ...binomial('fixed'), estimate: { method: 'two-step' } }));
    const plain = answered(runOn(columns, { ...shares, variance: { parts: [{ kind: 'constant' }] } }));
    for (const [g, { variance }] of cells.entries()) {
      const mu = plain.cells[g]?.fitted as number;
      expect(variance).toBeCloseTo((mu * (1 - mu)) / (n[g] as number), 12);
    }
  });
});

describe('likelihoods that have no maximum inside', () => {
  const levels = {
    cell: ['a', 'b', 'c', 'd', 'e', 'f'],
    k: ['p', 'p', 'q', 'q', 'r', 'r'],
    n: [20, 30, 25, 40, 10, 12],
    e: [20, 30, 25, 40, 10, 12],
  };
  const terms = [{ column: 'k', as: 'category' }];

  it('a level without any count is refused by the names of its cells and coefficient', () => {
    const columns = { ...levels, c: [4, 9, 8, 12, 0, 0] };
    const said = { ...rates, terms, outcomeScale: 'log', ...counts('free') };
    const run = runOn(columns, said);
    expect(run.ok ? [] : run.problems).toMatchObject([
      { code: 'separated', facts: { labels: ['e', 'f'], coefficients: ['k: r'] } },
    ]);
  });

  it('so is a level of all, under logit, and a slope that parts none from all', () => {
    const all = { ...levels, c: [4, 9, 8, 12, 10, 12] };
    const logit = { ...shares, ...full, outcomeScale: 'logit', ...binomial('fixed') };
    const run = runOn(all, { ...logit, terms });
    expect(run.ok ? [] : run.problems).toMatchObject([
      { code: 'separated', facts: { labels: ['e', 'f'], coefficients: ['k: r'] } },
    ]);
    const parted = { cell: ['a', 'b', 'c', 'd'], x: [1, 2, 3, 4], n: [5, 6, 7, 8], c: [0, 0, 7, 8] };
    const slope = runOn(parted, logit);
    expect(slope.ok ? [] : slope.problems).toMatchObject([
      { code: 'separated', facts: { labels: ['a', 'b', 'c', 'd'], coefficients: ['intercept', 'x'] } },
    ]);
  });

  it('halves added make the same levels estimable, with a caution that says so', () => {
    const columns = { ...levels, c: [4, 9, 8, 12, 0, 0] };
    const said = { ...shares, terms, outcomeScale: 'logit', ...binomial('fixed') };
    const { cautions } = answered(runOn(columns, said));
    expect(cautions.find(({ code }) => code === 'halves-added')?.facts).toMatchObject({
      to: 'extreme-cells',
      cells: 2,
      labels: ['e', 'f'],
    });
    expect(cautions.map(({ code }) => code)).toContain('errors-from-outcome');
    expect(refusedOrWhole(runOn(columns, { ...said, addedHalf: 'no' }))).toEqual(['transform-undefined']);
    const every = answered(runOn(columns, { ...said, addedHalf: 'all-cells' }));
    expect(every.cautions.find(({ code }) => code === 'halves-added')?.facts).toMatchObject({
      to: 'all-cells',
      cells: 6,
    });
  });

  it('a mean that runs into the end of its range on the identity scale is refused with its cell', () => {
    const columns = {
      cell: ['a', 'b', 'c', 'd', 'e'],
      x: [0, 1, 2, 3, 4],
      n: [500, 400, 300, 200, 100],
      c: [0, 40, 90, 110, 80],
    };
    const run = runOn(columns, { ...shares, ...binomial('free') });
    expect(run.ok ? [] : run.problems).toMatchObject([
      { code: 'fitted-outside', at: '/variance', facts: { part: 'binomial', labels: ['a'] } },
    ]);
    const all = runOn({ ...columns, e: columns.n, c: [0, 0, 0, 0, 0] }, { ...rates, ...counts('free') });
    expect(all.ok ? [] : all.problems.map(({ code }) => code)).toEqual(['fitted-outside']);
  });

  it('an extreme cell that the slope alone explains is no separation, however far its logit lies', () => {
    const columns = {
      cell: ['a', 'b', 'c', 'd', 'far'],
      x: [1, 2, 3, 4, 200],
      n: [50, 60, 70, 80, 10],
      c: [10, 20, 33, 50, 10],
    };
    const { fit, cells } = answered(
      runOn(columns, { ...shares, ...full, outcomeScale: 'logit', ...binomial('fixed') }),
    );
    expect(fit.coefficients[1]?.estimate).toBeGreaterThan(0.3);
    expect(cells[4]?.fitted).toBeGreaterThan(1 - 1e-12);
  });

  it('parts beside, another target and another method are refused by name under a link', () => {
    const keys = (said: Said): unknown => {
      const run = runOn({ ...levels, x: [1, 2, 3, 4, 5, 6], c: [4, 9, 8, 12, 3, 2] }, said);
      return run.ok ? null : run.problems.map(({ code, facts }) => [code, 'keys' in facts ? facts.keys : facts]);
    };
    const logit = { ...shares, ...full, outcomeScale: 'logit' };
    expect(keys({ ...logit, ...binomial('fixed', [{ kind: 'between' }]) })).toEqual([
      ['not-together', ['variance', 'outcomeScale', 'estimate']],
    ]);
    expect(keys({ ...rates, outcomeScale: 'log', ...counts('fixed', [{ kind: 'between' }]) })).toEqual([
      ['not-together', ['outcomeScale', 'variance']],
    ]);
    expect(keys({ ...logit, ...binomial('fixed'), target: 'persons' })).toEqual([
      ['not-together', ['target', 'estimate']],
    ]);
  });

  it('sizes over twelve orders of magnitude get an answer', () => {
    const columns = {
      cell: ['a', 'b', 'c', 'd', 'e', 'f'],
      x: [0, 1, 2, 3, 4, 5],
      n: [10, 1e4, 1e12, 20, 1e6, 300],
      e: [10, 1e4, 1e12, 20, 1e6, 300],
      c: [3, 3100, 330000000000, 8, 390000, 140],
    };
    for (const said of [
      { ...shares, ...binomial('free') },
      { ...shares, ...full, outcomeScale: 'logit', ...binomial('fixed') },
      { ...rates, ...counts('free') },
      { ...rates, outcomeScale: 'log', ...counts('fixed') },
    ])
      answered(runOn(columns, said));
  });

  it('as many cells as coefficients: fitted exactly, errors of a fixed scale alone defined', () => {
    const columns = { cell: ['a', 'b'], x: [0, 1], n: [10, 20], c: [3, 9] };
    const fixed = answered(runOn(columns, { ...shares, ...full, outcomeScale: 'logit', ...binomial('fixed') }));
    expect(fixed.fit.coefficients[0]?.se).toBeCloseTo(Math.sqrt(1 / 3 + 1 / 7), 10);
    const free = answered(runOn(columns, { ...shares, ...binomial('free') }));
    expect(free.fit.coefficients[0]?.se).toBeNull();
  });
});

describe('likelihood and deviance of counts', () => {
  const design: Design = { names: ['intercept', 'x'], columns: [], termOf: [-1, 0], intercept: true };
  const small = (change: Partial<MeanDependent>): MeanDependent => ({
    kind: 'binomial',
    scale: 'logit',
    observed: Float64Array.of(0.5, 0, 1),
    amounts: Float64Array.of(4, 3, 2),
    whole: 1,
    asCounted: true,
    labels: ['a', 'b', 'c'],
    ...change,
  });

  it('are the logarithms of the probabilities, counted out by hand', () => {
    const at = meansAt(small({}), Float64Array.of(0, Math.log(1 / 3), Math.log(2)));
    expect(countedLogLikelihood(small({}), at)).toBeCloseTo(
      Math.log(6 / 16) + 3 * Math.log(3 / 4) + 2 * Math.log(2 / 3),
      13,
    );
    expect(devianceOf(small({}), at)).toBeCloseTo(-6 * Math.log(3 / 4) - 4 * Math.log(2 / 3), 13);
    const counts = small({
      kind: 'counts',
      scale: 'log',
      observed: Float64Array.of(2, 0, 3.5),
      amounts: Float64Array.of(1, 3, 2),
    });
    const means = meansAt(counts, Float64Array.of(Math.log(1.5), Math.log(0.2), Math.log(3)));
    const byHand = 2 * Math.log(1.5) - 1.5 - Math.log(2) - 0.6 + 7 * Math.log(6) - 6 - Math.log(5040);
    expect(countedLogLikelihood(counts, means)).toBeCloseTo(byHand, 12);
  });

  it('keep their digits where counts are large', () => {
    const part = small({ observed: Float64Array.of(0.3), amounts: Float64Array.of(1e12), labels: ['a'] });
    const at = meansAt(part, predictorOf(part, Float64Array.of(0.3 + 1e-6)));
    // 2 n [ p ln(p/mu) + (1-p) ln((1-p)/(1-mu)) ] to second order: n d^2 / (p (1-p)), third order below 1e-5 of it.
    expect(devianceOf(part, at) / (1 / 0.21)).toBeCloseTo(1, 4);
  });

  it('have no value where counts are no counts', () => {
    const at = meansAt(small({}), Float64Array.of(0, 0, 0));
    expect(countedLogLikelihood(small({ asCounted: false }), at)).toBeNull();
    expect(countedLogLikelihood(small({ observed: Float64Array.of(0.3, 0, 1) }), at)).toBeNull();
  });

  it('are highest where the climb ends: no nearby point is higher, on 200 random problems', () => {
    fc.assert(
      fc.property(
        tables,
        fc.constantFrom('identity', 'logit') as fc.Arbitrary<'identity' | 'logit'>,
        (columns, scale) => {
          const x = Float64Array.from(columnOf(columns, 'x'));
          const n = Float64Array.from(columnOf(columns, 'n'));
          const part = small({
            scale,
            observed: Float64Array.from(columnOf(columns, 'c'), (c, g) => c / (n[g] as number)),
            amounts: n,
          });
          const whole = { ...design, columns: [fromDoubles(new Float64Array(n.length).fill(1)), fromDoubles(x)] };
          const start = new Float64Array(n.length).fill(scale === 'identity' ? 0.5 : 0);
          const summit = climbMeans({ part, design: whole }, start);
          if (summit.ended !== 'there') return;
          const top = heightOf(part, summit.predictor, summit.means);
          for (const [a, b] of [
            [1e-4, 0],
            [-1e-4, 0],
            [0, 1e-4],
            [0, -1e-4],
            [1e-4, 1e-4],
          ] as const) {
            const near = summit.predictor.map((eta, g) => eta + a + b * (x[g] as number));
            const height = heightOf(part, near, meansAt(part, near));
            expect(height <= top || Number.isNaN(height)).toBe(true);
          }
        },
      ),
      { seed: 3, numRuns: 200 },
    );
  });
});
