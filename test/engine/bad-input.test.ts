import type { Result } from '@core/protocol/result';
import { sentence } from '@core/words/problems';
import { describe, expect, it } from 'vitest';
import { answered, type Columns, type Files, refusedOrWhole, runOn, type Said } from './hostile';

/** The list of bad input, one by one: an answer with its caution, or a refusal that says why. */

const count = (length: number) => Array.from({ length }, (_, g) => g);
const wobble = (g: number) => Math.sin(12.9898 * (g + 1)) * 0.7;
const round = (x: number) => Number(x.toFixed(4));

/** Four regions by years, a column for every role. */
function table(cells: number, change: Partial<Record<'x' | 'y' | 'n' | 'se', (g: number) => number>> = {}) {
  const {
    x = (g) => round(g + 2 * wobble(3 * g)),
    y = (g) => round(g + 3 * wobble(g)),
    n = (g) => 5 + ((7 * g) % 40),
  } = change;
  return {
    region: count(cells).map((g) => `r${g % 4}`),
    year: count(cells).map((g) => 2000 + Math.floor(g / 4)),
    x: count(cells).map(x),
    z: count(cells).map((g) => 1 + (g % 3)),
    y: count(cells).map(y),
    n: count(cells).map(n),
    se: count(cells).map(change.se ?? ((g) => round(0.8 + wobble(5 * g) / 2))),
    kind: count(cells).map((g) => 'ABC'[g % 3] as string),
  } satisfies Columns;
}

const base: Said = {
  roles: { label: ['region', 'year'], outcome: 'y', size: 'n', error: 'se' },
  terms: [{ column: 'x' }],
};

function run(columns: Columns, parts: readonly Said[], more: Said = {}, files: Files = {}) {
  return runOn(columns, { ...base, variance: { parts }, ...more }, files);
}

const given = { kind: 'given', scale: 'fixed' };
const between = { kind: 'between' };
const perSize = { kind: 'per-size' };
const byRegion = { kind: 'exchangeable', by: ['region'] };
const inYears = { kind: 'serial', by: ['region'], order: 'year' };
const sharedByRegion = { kind: 'shared', by: ['region'] };
const restricted = { estimate: { method: 'restricted' } };

/** The one refusal of a run: its code, its facts and its sentence, which names no thing that is not there. */
function refused(outcome: ReturnType<typeof run>, of?: string) {
  expect(outcome.ok, of).toBe(false);
  const [first] = outcome.ok ? [] : outcome.problems;
  if (!first) throw new Error('answered');
  expect(sentence(first)).not.toMatch(/undefined|NaN|\[object/);
  return first;
}

const codesOf = ({ cautions }: Result) => cautions.map(({ code }) => code);

/** A square of covariances on the labels of a table, as its file. */
function square(columns: ReturnType<typeof table>, entry: (i: number, j: number) => number): string {
  const labels = columns.region.map((region, g) => `${region} · ${columns.year[g]}`);
  return [['', ...labels], ...labels.map((label, i) => [label, ...labels.map((_, j) => entry(i, j))])]
    .map((row) => row.join(','))
    .join('\n');
}

describe('a likelihood without a maximum', () => {
  it('of an exponent that runs away is refused, and the exponent is named', () => {
    // One cell of size 1 among equals, and an outcome that a line fits but for that cell.
    const columns = table(12, {
      n: (g) => (g === 5 ? 1 : 1000),
      y: (g) => (g === 5 ? 30 : round(g + 0.3 * wobble(g))),
    });
    const outcome = run(columns, [{ kind: 'size-power', exponent: 'estimate' }]);
    if (outcome.ok) answered(outcome);
    else expect(refused(outcome)).toMatchObject({ code: 'no-convergence', facts: { parameter: 'delta' } });
  });

  it('of a class that the line fits exactly is refused, and the class is named', () => {
    const columns = table(12, { y: (g) => (g % 3 === 0 ? g : round(g + wobble(g))), x: (g) => g });
    const problem = refused(run(columns, [{ kind: 'per-class', column: 'kind' }]));
    expect(problem).toMatchObject({ code: 'no-convergence', facts: { parameter: 'phi: A' } });
  });

  it('of a log-linear coefficient that runs away is refused, and the coefficient is named', () => {
    const columns = table(12, { y: (g) => (g % 3 === 0 ? g : round(g + wobble(g))), x: (g) => g });
    const parts = [{ kind: 'log-linear', terms: [{ column: 'kind', as: 'category' }] }];
    expect(refused(run(columns, parts)).code).toBe('no-convergence');
  });

  it('of logits of cells that a term tells apart is refused, with the cells and the term', () => {
    const columns = {
      ...table(8),
      x: count(8),
      count: count(8).map((g) => (g < 4 ? 0 : 10)),
      n: count(8).map(() => 10),
    };
    const roles = { label: ['region', 'year'], count: 'count', size: 'n' };
    const parts = [{ kind: 'binomial', scale: 'fixed' }];
    const full = run(columns, parts, { roles, outcomeScale: 'logit', estimate: { method: 'full' } });
    expect(refused(full)).toMatchObject({ code: 'separated', facts: { coefficients: ['intercept', 'x'] } });
    answered(run(columns, parts, { roles, outcomeScale: 'logit' }));
  });
});

describe('a correlation that runs to 1', () => {
  // The same shock in all cells of a region, to the last digit that errors leave.
  const shock = [5, -4, 9, -7];
  const columns = table(24, { y: (g) => round((shock[g % 4] as number) + 0.02 * wobble(g)), se: () => 1 });

  it.each([
    ['exchangeable', byRegion],
    ['serial', inYears],
  ])('of an added part, %s, is refused under its name, and shared is what fits', (_, correlation) => {
    const problem = refused(run(columns, [given, { kind: 'between', correlation }], { terms: [] }));
    expect(problem).toMatchObject({ code: 'no-convergence', facts: { parameter: 'rho: between' } });
    expect(sentence(problem)).toContain('shared');
    const { fit } = answered(run(columns, [given, sharedByRegion], { terms: [] }));
    expect(fit.variance.map(({ name, atBoundary }) => [name, atBoundary])).toEqual([['omega2: region', false]]);
  });
});

describe('perfectly fitted data', () => {
  const line = table(12, { x: (g) => g, y: (g) => 2 + 3 * g });

  it.each([
    ['a shared part', [perSize, sharedByRegion]],
    ['correlated cells', [{ ...perSize, correlation: byRegion }]],
    ['neighbours', [{ ...perSize, correlation: inYears }]],
    ['classes', [{ kind: 'per-class', column: 'kind' }]],
    ['a log-linear part', [{ kind: 'log-linear', terms: [{ column: 'z' }] }]],
    ['a between part', [perSize, between]],
  ] as const)('leave nothing to estimate %s from: refused', (_, parts) => {
    for (const estimate of [{ method: 'restricted' }, { method: 'full' }])
      expect(refused(run(line, parts, { estimate })).code).toBe('nothing-left-over');
  });

  it.each([
    { kind: 'model' },
    { kind: 'robust', correction: 'HC3' },
    ...['CR0', 'CR1', 'CR2', 'CR3'].map((correction) => ({ kind: 'clustered', correction, by: ['region'] })),
    { kind: 'clustered', correction: 'CR1', by: ['region'], alsoBy: ['year'] },
    { kind: 'wild', by: ['region'], replications: 99 },
  ])('have errors of 0, or none, with %j', (inference) => {
    const { fit } = answered(run(line, [perSize], { inference }));
    for (const { se } of fit.coefficients) expect(se ?? 0).toBe(0);
    expect(fit.coefficients.map(({ estimate }) => estimate)).toEqual([2, 3]);
  });
});

describe('a class, or a block, with one cell', () => {
  const alone = { ...table(13), kind: count(13).map((g) => (g === 6 ? 'C' : 'AB'[g % 2])) as string[] };

  it('a class of one is answered, or its variance is named in the refusal', () => {
    for (const method of ['restricted', 'full']) {
      const outcome = run(alone, [{ kind: 'per-class', column: 'kind' }], { estimate: { method } });
      if (outcome.ok) answered(outcome);
      else expect(refused(outcome)).toMatchObject({ code: 'no-convergence', facts: { parameter: 'phi: C' } });
    }
  });

  it('a class of one that a term explains alone has nothing to tell: refused', () => {
    const terms = [{ column: 'x' }, { column: 'kind', as: 'category' }];
    const { code } = refused(run(alone, [{ kind: 'per-class', column: 'kind' }], { terms }));
    expect(['not-identified', 'no-convergence']).toContain(code);
  });

  it.each([
    ['shared', [perSize, { kind: 'shared', by: ['kind'] }]],
    ['exchangeable', [{ ...perSize, correlation: { kind: 'exchangeable', by: ['kind'] } }]],
    ['serial', [{ ...perSize, correlation: { kind: 'serial', by: ['kind'], order: 'x' } }]],
  ] as const)('a block of one is a cell on its own: %s is answered', (_, parts) => {
    const outcome = run(alone, parts);
    if (outcome.ok) answered(outcome);
    else expect(refused(outcome).code).toBe('no-convergence');
  });

  it('blocks of one cell each say nothing of a correlation: refused', () => {
    const own = { kind: 'exchangeable', by: ['region', 'year'] };
    expect(refused(run(table(12), [{ ...perSize, correlation: own }])).code).toBe('not-identified');
  });
});

describe('order values', () => {
  it('that repeat inside a block are refused with the two cells', () => {
    const columns = { ...table(12), z: count(12).map((g) => (g === 8 ? 2000 : 2000 + g)) };
    const serial = { kind: 'serial', by: ['region'], order: 'z' };
    const problem = refused(run(columns, [{ ...perSize, correlation: serial }]));
    expect(problem).toMatchObject({ code: 'order-repeats', facts: { labels: ['r0 · 2000', 'r0 · 2002'] } });
  });

  it('that differ by next to nothing, or by next to everything, are answered or refused by name', () => {
    for (const step of [1e-9, 1e-3, 1e9, 1e15]) {
      const columns = { ...table(16), z: count(16).map((g) => step * Math.floor(g / 4)) };
      const serial = { kind: 'serial', by: ['region'], order: 'z' };
      for (const code of refusedOrWhole(run(columns, [{ ...perSize, correlation: serial }])))
        expect(['no-convergence', 'not-identified'], `${step}`).toContain(code);
    }
  });
});

describe('sizes over twelve orders of magnitude', () => {
  const wide = table(16, { n: (g) => Math.round(10 ** ((g * 12) / 15)), se: (g) => 10 ** ((-g * 6) / 15) });

  it.each([
    [[perSize]],
    [[perSize, between]],
    [[perSize, sharedByRegion]],
    [[{ ...perSize, correlation: byRegion }]],
    [[{ ...perSize, correlation: inYears }]],
    [[given, between, sharedByRegion]],
    [[{ kind: 'size-power', exponent: 'estimate' }]],
    [[{ kind: 'per-class', column: 'kind', perSize: true }]],
    [[{ kind: 'log-linear', terms: [{ column: 'n', transform: 'log' }] }]],
  ])('are answered or refused by name under %j', (parts) => {
    for (const inference of [{ kind: 'model' }, { kind: 'clustered', by: ['region'] }])
      for (const code of refusedOrWhole(run(wide, parts, { inference, beside: ['constant', 'per-size'] })))
        expect(['no-convergence', 'not-identified']).toContain(code);
  });

  it('that leave columns nothing to be told apart by are refused, and the sentence says that it is the weights', () => {
    // x differs from a multiple of the intercept in cells of size 1 alone.
    const columns = table(12, {
      n: (g) => (g < 6 ? 1 : 1e12),
      x: (g) => (g === 2 ? 1e9 + 1 : 1e9),
      se: (g) => (g < 6 ? 1 : 1e-6),
    });
    for (const [parts, more] of [
      [[perSize], {}],
      [[perSize], { estimate: { method: 'full' } }],
      [[given], {}],
      [[given, between], { estimate: { method: 'moments', rule: 'dersimonian-laird' } }],
      [[{ kind: 'constant' }], { target: 'persons' }],
      [[{ kind: 'constant' }], { target: { parts: [perSize] } }],
      [[{ kind: 'constant' }], { beside: ['per-size'] }],
    ] as const) {
      const problem = refused(run(columns, parts, more), JSON.stringify([parts, more]));
      expect(problem).toMatchObject({ code: 'dependent-columns', facts: { coefficients: ['intercept', 'x'] } });
      expect(sentence(problem)).toContain('weigh nothing beside the others');
    }
    // A variance that every cell has leaves the small cells their say.
    for (const parts of [[{ kind: 'constant' }], [perSize, between]]) refusedOrWhole(run(columns, parts));
  });
});

describe('condition numbers to 1e15', () => {
  it.each([1e8, 1e12, 1e14])('a column far from zero by %d times its spread is answered, its condition told', (far) => {
    const outcome = run(table(12, { x: (g) => far + g }), [perSize]);
    expect(refusedOrWhole(outcome)).toEqual([]);
    if (!outcome.ok) return;
    const { fit, selfChecks, cautions } = outcome.value;
    expect(fit.condition).toBeGreaterThan(far / 100);
    // The slope of the same cells near zero, to the digits that are told.
    const near = answered(run(table(12, { x: (g) => g }), [perSize])).fit.coefficients[1];
    const slope = fit.coefficients[1];
    for (const figure of ['estimate', 'se'] as const)
      expect((slope?.[figure] as number) / (near?.[figure] as number)).toBeCloseTo(
        1,
        Math.floor(Math.min(fit.digits, 12)) - 1,
      );
    // Below 6 digits the check of digits says so, and a caution with it; all else holds.
    const failed = selfChecks.filter(({ passed }) => !passed).map(({ check }) => check);
    expect(failed).toEqual(fit.digits < 6 ? ['digits'] : []);
    if (fit.digits < 6) expect(cautions.map(({ code }) => code)).toContain('few-digits');
  });

  it('beyond, columns that say the same to rounding are refused by their names', () => {
    const columns = { ...table(12), z: count(12).map((g) => 1e16 + 2 * g) };
    const problem = refused(run(columns, [perSize], { terms: [{ column: 'z' }] }));
    expect(problem).toMatchObject({ code: 'dependent-columns', facts: { coefficients: ['intercept', 'z'] } });
  });

  it('under correlated cells are answered or refused by name', () => {
    const columns = table(16, { x: (g) => 1e12 + g });
    for (const parts of [[perSize, sharedByRegion], [{ ...perSize, correlation: inYears }]])
      for (const code of refusedOrWhole(run(columns, parts)))
        expect(['no-convergence', 'not-identified', 'dependent-columns']).toContain(code);
  });
});

describe('as many cells as terms, and one more', () => {
  const inferences = [
    { kind: 'model' },
    { kind: 'robust', correction: 'HC0' },
    ...['CR0', 'CR1', 'CR2', 'CR3'].map((correction) => ({ kind: 'clustered', correction, by: ['region'] })),
    { kind: 'wild', by: ['region'], replications: 19 },
  ];
  const structures: readonly (readonly Said[])[] = [
    [perSize],
    [given],
    [given, between],
    [perSize, sharedByRegion],
    [{ ...perSize, correlation: byRegion }],
    [{ kind: 'per-class', column: 'kind' }],
  ];

  it.each([2, 3])(
    '%i cells on a line are answered, or refused by name, with every structure and inference',
    (cells) => {
      for (const parts of structures)
        for (const inference of inferences)
          for (const code of refusedOrWhole(run(table(cells), parts, { inference })))
            expect([
              'nothing-left-over',
              'not-identified',
              'no-convergence',
              'leverage-one',
              'cluster-decides',
              'correlated-cells',
              'cluster-cuts-block',
              'one-level',
            ]).toContain(code);
    },
  );
});

describe('a given matrix', () => {
  const columns = table(12);
  const matrix = { kind: 'matrix', file: 's.csv', scale: 'fixed' };
  const together = (i: number, j: number) => columns.region[i] === columns.region[j];

  it.each([1e-6, 1e-9, 1e-12])('that is positive definite by a share of %d is answered', (share) => {
    const file = square(columns, (i, j) => (i === j ? 1 : together(i, j) ? 1 - share : 0));
    const { fit } = answered(run(columns, [matrix], {}, { 's.csv': file }));
    expect(fit.coefficients.every(({ se }) => (se as number) > 0)).toBe(true);
  });

  it('that is not, is refused with the cells, or with the smallest eigenvalue', () => {
    for (const rho of [1, 1.2, -0.9]) {
      const file = square(columns, (i, j) => (i === j ? 1 : together(i, j) ? rho : 0));
      const { code, facts } = refused(run(columns, [matrix], {}, { 's.csv': file }));
      expect(code).toBe('matrix-not-positive-definite');
      expect(facts).toSatisfy(
        (told: { labels: unknown; smallestEigenvalue: unknown }) =>
          told.labels !== null || told.smallestEigenvalue !== null,
      );
    }
  });

  it('without an inverse is answered where weights do not need one, and refused where something is estimated through it', () => {
    const file = square(columns, (i, j) => (together(i, j) ? 1 : 0));
    const target = 'persons';
    const moments = (rule: string) => ({ target, estimate: { method: 'moments', rule } });
    answered(run(columns, [matrix], { target }, { 's.csv': file }));
    answered(run(columns, [matrix, between], { target }, { 's.csv': file }));
    answered(run(columns, [matrix, between], moments('hanushek'), { 's.csv': file }));
    for (const [parts, more] of [
      [[matrix], {}],
      [[{ ...matrix, scale: 'free' }], { target }],
      [[matrix, between], moments('paule-mandel')],
      [[matrix, between], moments('dersimonian-laird')],
    ] as const)
      expect(refused(run(columns, parts, more, { 's.csv': file })).code).toBe('matrix-not-positive-definite');
  });

  it('of few degrees of freedom is answered by its diagonal, singular or not, and the report says so', () => {
    const file = square(columns, (i, j) => (together(i, j) ? 1 : 0));
    const result = answered(run(columns, [{ ...matrix, freedom: 5 }], {}, { 's.csv': file }));
    expect(result.fit.coefficients[1]?.reference).toEqual({ kind: 't', freedom: 5 });
    expect(codesOf(result).length).toBeGreaterThan(0);
  });
});

describe('a plan that asks for something undefined', () => {
  it('CR2 with one cluster is refused', () => {
    const columns = { ...table(12), region: count(12).map(() => 'one'), year: count(12) };
    for (const correction of ['CR0', 'CR1', 'CR2', 'CR3'])
      expect(
        refused(run(columns, [perSize], { inference: { kind: 'clustered', correction, by: ['region'] } })).code,
      ).toBe('too-few-clusters');
    expect(refused(run(columns, [perSize], { inference: { kind: 'wild', by: ['region'] } })).code).toBe(
      'too-few-clusters',
    );
  });

  it('Kenward and Roger’s inference without restricted likelihood is refused', () => {
    const inference = { kind: 'kenward-roger' };
    for (const method of ['full', 'two-step', 'least-squares'])
      expect(refused(run(table(12), [perSize, between], { inference, estimate: { method } })).code).toBe(
        'not-together',
      );
    expect(refused(run(table(12), [perSize], { inference })).code).toBe('not-together');
    answered(run(table(24), [perSize, between], { inference, ...restricted }));
  });

  it.each([
    [[{ kind: 'size-power', exponent: 'estimate' }], 'delta'],
    [[{ kind: 'proxy', column: 'z', exponent: 'estimate' }], 'delta'],
    [[{ kind: 'log-linear', terms: [{ column: 'z' }] }], 'gamma: intercept'],
    [[{ ...perSize, correlation: inYears }], 'rho: per-size'],
    [[{ kind: 'per-class', column: 'kind', correlation: byRegion }], 'phi: CLASS'],
  ] as const)('or with a structure that is not linear, %j, is refused with the parameter', (parts, parameter) => {
    const problem = refused(run(table(24), parts, { inference: { kind: 'kenward-roger' }, ...restricted }));
    expect(problem.code).toBe('not-linear');
    expect((problem.facts as { parameter: string }).parameter.split(':')[0]).toBe(parameter.split(':')[0]);
  });

  it('HC with correlated cells is refused with the part that correlates them', () => {
    const file = square(table(12), (i, j) => (i === j ? 1 : 0));
    for (const [parts, part] of [
      [[perSize, sharedByRegion], 'shared'],
      [[{ ...perSize, correlation: byRegion }], 'per-size'],
      [[given, { kind: 'between', correlation: inYears }], 'between'],
      [[{ kind: 'matrix', file: 's.csv', scale: 'fixed' }], 'matrix'],
    ] as const)
      expect(
        refused(run(table(12), parts, { inference: { kind: 'robust', correction: 'HC3' } }, { 's.csv': file })),
      ).toMatchObject({ code: 'correlated-cells', facts: { part } });
  });

  it('Knapp and Hartung’s inference without given errors and a between part is refused', () => {
    expect(refused(run(table(12), [perSize, between], { inference: { kind: 'knapp-hartung' } })).code).toBe(
      'not-together',
    );
  });

  it('clusters that cut a block of correlated cells are refused with the block', () => {
    const inference = { kind: 'clustered', by: ['year'] };
    expect(refused(run(table(12), [perSize, sharedByRegion], { inference }))).toMatchObject({
      code: 'cluster-cuts-block',
      facts: { by: ['year'], partBy: ['region'] },
    });
  });
});
