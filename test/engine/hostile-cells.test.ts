import { describe, expect, it } from 'vitest';
import { answered, refusedOrWhole, runOn, type Said, type Structured, searchRefusals, structures } from './hostile';

/** Columns x, y, n, se of one table. */
interface Table {
  readonly name: string;
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly n: readonly number[];
  readonly se: readonly number[];
  /** True where every method has its own way to fail. */
  readonly everyMethod?: boolean;
}

const count = (length: number) => Array.from({ length }, (_, g) => g);
const wobble = (g: number) => Math.sin(12.9898 * (g + 1)) * 0.7;

/** Nine cells around a line, in other units or with other errors. */
function nine(name: string, change: { y?: number; x?: number; se?: (g: number) => number }): Table {
  const { y: unit = 1, x: step = 1, se = (g) => unit * (1 + g / 9) } = change;
  return {
    name,
    x: count(9).map((g) => step * g),
    y: count(9).map((g) => unit * (g + wobble(g))),
    n: count(9).map((g) => 5 + g),
    se: count(9).map(se),
  };
}

const tables: readonly Table[] = [
  { name: 'as many cells as terms', x: [1, 2], y: [1, 3], n: [10, 20], se: [0.1, 0.2], everyMethod: true },
  { name: 'one residual', x: [1, 2, 4], y: [1, 3, 2], n: [10, 20, 5], se: [0.1, 0.2, 0.3], everyMethod: true },
  {
    name: 'two residuals',
    x: [1, 2, 4, 5],
    y: [1, 3, 2, 4],
    n: [10, 20, 5, 7],
    se: [0.1, 0.2, 0.3, 0.2],
    everyMethod: true,
  },
  {
    name: 'a perfect line',
    everyMethod: true,
    x: count(8),
    y: count(8).map((g) => 2 + 3 * g),
    n: count(8).map((g) => g + 1),
    se: count(8).map(() => 0.5),
  },
  {
    name: 'a line to the eleventh digit',
    x: count(8),
    y: count(8).map((g) => 2 + 3 * g + 1e-11 * wobble(g)),
    n: count(8).map((g) => g + 1),
    se: count(8).map((g) => 0.5 + g / 10),
  },
  {
    name: 'equal outcomes',
    everyMethod: true,
    x: count(8),
    y: count(8).map(() => 4),
    n: count(8).map((g) => g + 1),
    se: count(8).map(() => 0.5),
  },
  {
    name: 'outcomes of 0',
    x: count(8),
    y: count(8).map(() => 0),
    n: count(8).map((g) => g + 1),
    se: count(8).map(() => 0.5),
  },
  {
    name: 'a line but for one cell',
    x: count(9),
    y: count(9).map((g) => (g === 8 ? 9 : g)),
    n: count(9).map((g) => 5 + g),
    se: count(9).map((g) => 0.4 + g / 30),
  },
  {
    name: 'equal sizes',
    x: count(9),
    y: count(9).map((g) => g + wobble(g)),
    n: count(9).map(() => 30),
    se: count(9).map(() => 0.5),
  },
  {
    name: 'sizes over twelve orders',
    x: count(13),
    y: count(13).map((g) => g + wobble(g)),
    n: count(13).map((g) => 10 ** g),
    se: count(13).map((g) => 10 ** (-g / 2)),
  },
  nine('outcomes near 1e-60', { y: 1e-60 }),
  nine('outcomes near 1e60', { y: 1e60 }),
  nine('outcomes near 1e-145', { y: 1e-145 }),
  nine('outcomes near 1e145', { y: 1e145 }),
  nine('errors near 1e-150', { se: (g) => 1e-150 * (1 + g / 9) }),
  nine('errors near 1e150', { se: (g) => 1e150 * (1 + g / 9) }),
  nine('a covariate near 1e-300', { x: 1e-300 }),
  nine('a covariate near 1e300', { x: 1e300 }),
  nine('errors far too large', { se: (g) => 50 + g }),
  nine('errors far too small', { se: (g) => 1e-6 * (1 + g / 9) }),
  nine('one error far too small', { se: (g) => (g === 4 ? 1e-9 : 0.5) }),
  {
    name: 'a covariate far from zero',
    x: count(9).map((g) => 1e8 + g),
    y: count(9).map((g) => g + wobble(g)),
    n: count(9).map((g) => 5 + 3 * g),
    se: count(9).map(() => 0.4),
  },
  {
    name: 'outcomes far from zero',
    x: count(9),
    y: count(9).map((g) => 1e12 + g + wobble(g)),
    n: count(9).map((g) => 5 + 3 * g),
    se: count(9).map((g) => 0.4 + g / 20),
  },
  {
    name: 'one cell alone at a covariate',
    everyMethod: true,
    x: [0, 0, 0, 0, 0, 1],
    y: [1, 2, 1.5, 1.7, 1.2, 9],
    n: [5, 6, 7, 8, 9, 4],
    se: [0.3, 0.2, 0.4, 0.3, 0.2, 0.5],
  },
  {
    name: 'one outlier',
    everyMethod: true,
    x: count(12),
    y: count(12).map((g) => (g === 5 ? 1e6 : g + wobble(g))),
    n: count(12).map((g) => 5 + g),
    se: count(12).map((g) => 0.4 + g / 30),
  },
];

const said: Said = {
  roles: { label: ['block', 'label'], outcome: 'y', size: 'n', error: 'se' },
  terms: [{ column: 'x' }],
  beside: ['constant', 'per-size', 'given'],
  matters: { x: 0.1 },
  questions: [
    { kind: 'joint', terms: ['intercept', 'x'], family: 'a' },
    { kind: 'combination', of: { x: 2 }, equals: 1, family: 'a' },
    { kind: 'expect', where: { x: 1 }, size: 10, error: 1 },
    { kind: 'average', of: [{ where: { x: 1 }, share: 1 }], minus: [{ where: { x: 0 }, share: 1 }] },
  ],
};

function run({ x, y, n, se }: Table, parts: Structured['parts'], more: Said = {}) {
  const columns = { label: x.map((_, g) => `cell ${g}`), block: x.map((_, g) => g % 3), x, y, n, se };
  return runOn(columns, { ...said, variance: { parts }, ...more });
}

const found = (name: string) => tables.find((table) => table.name === name) as Table;
const partsOf = (name: string) => (structures.find((one) => one.name === name) as Structured).parts;

describe('hostile cells', () => {
  for (const table of tables)
    it.each(structures)(
      `${table.name}, $name: an answer without a hole, or a refusal by name`,
      ({ parts, methods }) => {
        for (const estimate of methods)
          for (const code of refusedOrWhole(run(table, parts, estimate ? { estimate } : {})))
            expect(searchRefusals).toContain(code);
      },
    );

  it('refuse a method that has nothing to estimate in a structure', () => {
    const table = found('sizes over twelve orders');
    for (const [name, method] of [
      ['size-power estimated', { method: 'least-squares' }],
      ['per-size', { method: 'moments', rule: 'hanushek' }],
      ['per-size + between', { method: 'moments', rule: 'paule-mandel' }],
    ] as const)
      expect(refusedOrWhole(run(table, partsOf(name), { estimate: method }))).toEqual(['not-together']);
  });
});

describe('cells without residuals', () => {
  const answer = answered(run(found('as many cells as terms'), partsOf('per-size')));

  it('have coefficients and no errors, and the report is told why', () => {
    for (const { se, p, reference } of answer.fit.coefficients) expect([se, p, reference]).toEqual([null, null, null]);
    expect(answer.fit.coefficients[1]?.estimate).toBe(2);
    expect(answer.cautions.map(({ code }) => code)).toContain('no-residual-freedom');
  });

  it('have no price in units of the outcome, and none to pay: every weighting gives the same coefficients', () => {
    for (const { price, eigenvalues, actualCovariance } of answer.beside) {
      expect(price.map(({ actualSe, claimedSe }) => [actualSe, claimedSe])).toEqual([
        [null, null],
        [null, null],
      ]);
      for (const { cost } of price) expect(cost).toBeLessThan(1e-28);
      expect([...eigenvalues, ...actualCovariance.flat()].every((value) => value === null)).toBe(true);
    }
  });

  it('have errors where those are given', () => {
    const given = answered(run(found('as many cells as terms'), partsOf('given, fixed')));
    // The slope is y2 - y1: its variance is .01 + .04.
    expect(given.fit.coefficients[1]?.se).toBeCloseTo(Math.sqrt(0.05), 14);
  });
});

describe('a perfect fit', () => {
  const answer = answered(run(found('a perfect line'), partsOf('per-size')));

  it('has errors of 0, a cost that does not depend on the scale, and no likelihood', () => {
    expect(answer.fit.coefficients.map(({ estimate, se }) => [estimate, se])).toEqual([
      [2, 0],
      [3, 0],
    ]);
    expect(answer.fit.logLikelihood).toBeNull();
    const noisy = answered(run({ ...found('a perfect line'), y: [2, 5, 9, 11, 14, 16, 20, 23] }, partsOf('per-size')));
    for (const [i, { price, efficiency }] of answer.beside.entries()) {
      expect(efficiency).toBe(noisy.beside[i]?.efficiency);
      for (const [j, { cost }] of price.entries()) expect(cost).toBeCloseTo(noisy.beside[i]?.price[j]?.cost ?? 0, 12);
    }
  });

  it('leaves the tests of the structure nothing to say', () => {
    for (const { test, reading, p } of answer.evidence)
      if (test !== 'heterogeneity') expect([test, reading, p]).toEqual([test, 'not-applicable', null]);
  });
});

describe('an outcome in units 1e145 times larger or smaller', () => {
  const names = structures.map(({ name }) => name).filter((name) => !name.startsWith('size-power estimated'));
  it.each(names)('gives the same fit of %s in the other unit', (name) => {
    const [tiny, huge] = [1e-145, 1e145].map((unit) => {
      const { fit, evidence, cells } = answered(run(nine('', { y: unit }), partsOf(name)));
      const shown = (p: number | null) => p?.toPrecision(8);
      return {
        coefficients: fit.coefficients.map(({ estimate, se, ratio, p }) => [
          (estimate / unit).toPrecision(8),
          ((se as number) / unit).toPrecision(8),
          ratio?.toPrecision(7),
          shown(p),
        ]),
        parameters: fit.variance.map(({ name: parameter, estimate, atBoundary }) => [
          parameter,
          Math.sqrt(estimate as number)
            .toPrecision(4)
            .slice(0, 4),
          atBoundary,
        ]),
        tests: evidence.map(({ test, p }) => [test, shown(p)]),
        cells: cells.map(({ mse }) => mse !== null),
      };
    });
    expect(tiny).toEqual(huge);
  });
});

describe('what a double cannot square', () => {
  it('is refused at its cell, in the outcome and in the errors', () => {
    for (const [y, se] of [
      [1e200, 1],
      [1e-200, 1],
      [1, 1e-200],
      [1, 1e200],
    ] as const) {
      const table = nine('', { y, se: (g) => (g === 3 ? se : 1) });
      expect(refusedOrWhole(run(table, partsOf('given, fixed'), { beside: [] }))).toEqual(['transform-undefined']);
    }
  });

  it('leaves the errors of a coefficient as they are where its covariate alone cannot be squared', () => {
    const [, small] = answered(run(nine('', { x: 1e-300 }), partsOf('constant'))).fit.coefficients;
    const [, plain] = answered(run(nine('', {}), partsOf('constant'))).fit.coefficients;
    expect((small?.se as number) * 1e-300).toBeCloseTo(plain?.se as number, 12);
    expect(small?.p).toBeCloseTo(plain?.p as number, 12);
  });
});
