import { fitStructure } from '@core/estimate/fit';
import type { Fitted } from '@core/estimate/fitted';
import { type Identification, identificationOf } from '@core/estimate/identified';
import { designOf } from '@core/model/design';
import { learnTerms } from '@core/model/learn-terms';
import { structureOf } from '@core/model/structure-of';
import { seeded } from '@core/numbers/random';
import type { Outcome } from '@core/protocol/outcome';
import type { Correlation, Estimate, Part } from '@core/protocol/plan';
import type { Cells } from '@core/table/cells';
import { describe, expect, it } from 'vitest';
import { panelCells } from '../model/every-structure';
import { smallCells } from '../model/small';
import { open } from './fitting';

const none = { correlation: null };
const sizes: Part = { kind: 'per-size', ...none };
const between: Part = { kind: 'between', ...none };
const within = (...by: string[]): Correlation => ({ kind: 'exchangeable', by });

interface Asked {
  readonly cells: Cells;
  readonly parts: Part[];
  readonly method: 'full' | 'restricted' | 'least-squares';
  readonly fixed?: Record<string, number>;
}

function madeOf({ cells, parts, fixed = {} }: Omit<Asked, 'method'>) {
  const known = open(learnTerms({ terms: [{ column: 'x' }], intercept: true, cells }));
  const design = open(designOf(known, cells));
  return { design, structure: open(structureOf({ variance: { parts, fixed }, cells })) };
}

function fitOf(asked: Asked): Outcome<Fitted> {
  const estimate: Estimate = { method: asked.method };
  return fitStructure({ ...madeOf(asked), response: asked.cells.outcome, estimate });
}

const judged = (cells: Cells, ...parts: Part[]): Outcome<Identification> => identificationOf(madeOf({ cells, parts }));
const problemsOf = <T>(outcome: Outcome<T>) =>
  outcome.ok ? [] : outcome.problems.map(({ code, facts }) => ({ code, facts }));
const parameterOf = (fitted: Fitted, name: string) =>
  fitted.theta[fitted.structure.parameters.findIndex((parameter) => parameter.name === name)] as number;

/** A table of cells with columns y, n, se, x, k and what is added. */
function table(rows: number, line: (g: number, random: ReturnType<typeof seeded>) => string, more = ''): Cells {
  const random = seeded(11);
  const lines = Array.from({ length: rows }, (_, g) => line(g, random));
  return smallCells(`y,n,se,x,k${more}\n${lines.join('\n')}\n`);
}

describe('a class with one cell', () => {
  const cells = table(12, (g, { normal }) => `${3 + g + normal()},${10 + g},1,${g},${g === 0 ? 'alone' : 'many'}`);
  const parts: Part[] = [{ kind: 'per-class', column: 'k', perSize: false, ...none }];

  it('is refused by its parameter under full likelihood, which grows without bound as the line goes through the cell', () => {
    const [problem] = problemsOf(fitOf({ cells, parts, method: 'full' }));
    expect(problem).toMatchObject({ code: 'no-convergence', facts: { parameter: 'phi: alone' } });
  });

  it('has its variance under restricted likelihood, or is refused by its parameter', () => {
    const outcome = fitOf({ cells, parts, method: 'restricted' });
    if (outcome.ok) expect(parameterOf(outcome.value, 'phi: alone')).toBeGreaterThan(0);
    else expect(problemsOf(outcome)).toMatchObject([{ code: 'no-convergence', facts: { parameter: 'phi: alone' } }]);
  });

  it('can stand with its variance set', () => {
    const fitted = open(fitOf({ cells, parts, method: 'full', fixed: { 'phi: alone': 2 } }));
    expect(parameterOf(fitted, 'phi: alone')).toBe(2);
    expect(parameterOf(fitted, 'phi: many')).toBeGreaterThan(0);
  });
});

describe('parts that say the same', () => {
  const cells = table(14, (g, { normal }) => `${3 + g + normal()},${10 + 3 * g},1,${g},k${g % 3}`);
  const alone = table(14, (g, { normal }) => `${3 + g + normal()},${10 + 3 * g},1,${g},k${g}`);

  it('are refused by both names: a shock of its own for every cell, beside between', () => {
    expect(problemsOf(judged(alone, sizes, between, { kind: 'shared', by: ['k'] }))).toEqual([
      { code: 'not-identified', facts: { parts: ['between', 'shared'] } },
    ]);
    expect(judged(alone, sizes, { kind: 'shared', by: ['k'] }).ok).toBe(true);
  });

  it('are refused: a correlation among groups of one cell says nothing', () => {
    expect(problemsOf(judged(alone, { kind: 'per-size', correlation: within('k') }))).toEqual([
      { code: 'not-identified', facts: { parts: ['per-size'] } },
    ]);
  });

  it('are refused: exchangeable errors and a shock shared by the same groups', () => {
    const outcome = judged(cells, { kind: 'constant', correlation: within('k') }, { kind: 'shared', by: ['k'] });
    expect(problemsOf(outcome)).toEqual([{ code: 'not-identified', facts: { parts: ['constant', 'shared'] } }]);
  });

  it('are refused: a shock shared by all cells, which the intercept takes up', () => {
    const all = table(14, (g, { normal }) => `${3 + g + normal()},${10 + 3 * g},1,${g},k`);
    expect(problemsOf(judged(all, sizes, { kind: 'shared', by: ['k'] }))).toEqual([
      { code: 'not-identified', facts: { parts: ['shared'] } },
    ]);
  });

  it('are named with their correlation where they nearly do', () => {
    const even = table(40, (g, { normal }) => `${3 + g + normal()},${1000 + (g % 2)},1,${g},k${g % 4}`);
    const identification = open(judged(even, sizes, between));
    expect(identification.hardlySeparate).toMatchObject({ first: 'phi', second: 'tau2' });
    expect(identification.hardlySeparate?.correlation).toBeLessThan(-0.99);
  });
});

describe('cells that the terms reproduce exactly', () => {
  const cells = table(12, (g) => `${3 + 2 * g},${10 + g},1,${g},k${g % 3}`);
  const structures: Part[][] = [
    [{ kind: 'per-class', column: 'k', perSize: true, ...none }],
    [{ kind: 'log-linear', terms: [{ column: 'n', transform: 'log' }], ...none }],
    [{ kind: 'per-size', correlation: within('k') }],
    [sizes, between, { kind: 'shared', by: ['k'] }],
  ];

  it.each(structures.map((parts) => ({ name: parts.map(({ kind }) => kind).join(' + '), parts })))(
    'leave nothing to estimate $name from, and are refused',
    ({ parts }) => {
      for (const method of ['full', 'restricted'] as const)
        expect(problemsOf(fitOf({ cells, parts, method }))).toEqual([
          { code: 'nothing-left-over', facts: { cells: 12, coefficients: 2 } },
        ]);
    },
  );
});

describe('columns of a log variance that are hard to tell from the constant', () => {
  const parts: Part[] = [{ kind: 'log-linear', terms: [{ column: 'k' }], ...none }];
  const made = (base: number) => {
    const random = seeded(5);
    const lines = Array.from({ length: 60 }, (_, g) => {
      const spread = Math.exp(0.2 * (g % 13) - 1);
      return `${3 + g / 10 + spread * random.normal()},10,1,${g},${base + (g % 13)}`;
    });
    return smallCells(`y,n,se,x,k\n${lines.join('\n')}\n`);
  };

  it.each([2000, 1e6, 1e9])('have the slope and the likelihood of their own deviations (from %d on)', (base) => {
    const near = open(fitOf({ cells: made(0), parts, method: 'restricted' }));
    const far = open(fitOf({ cells: made(base), parts, method: 'restricted' }));
    const [slope, moved] = [parameterOf(near, 'gamma: k'), parameterOf(far, 'gamma: k')];
    expect(Math.abs(moved / slope - 1)).toBeLessThan(1e-15 * base + 1e-12);
    for (const [j, b] of near.coefficients.entries())
      expect(Math.abs((far.coefficients[j] as number) / b - 1)).toBeLessThan(1e-15 * base + 1e-11);
  });
});

describe('sizes over twelve orders of magnitude', () => {
  const cells = table(60, (g, { normal, uniform }) => {
    const size = Math.round(10 ** (12 * uniform()));
    return `${3 + g / 10 + normal() * Math.sqrt(0.5 + 20 / size)},${size},1,${g},k${g % 3}`;
  });

  it.each<[string, Part[]]>([
    ['per-size + between', [sizes, between]],
    ['size-power, estimated', [{ kind: 'size-power', exponent: 'estimate', ...none }]],
    ['log-linear in log n', [{ kind: 'log-linear', terms: [{ column: 'n', transform: 'log' }], ...none }]],
    ['per-size + shared + between', [sizes, { kind: 'shared', by: ['k'] }, between]],
  ])('are fitted by %s, whatever unit they are counted in', (_, parts) => {
    const fitted = open(fitOf({ cells, parts, method: 'restricted' }));
    expect([...fitted.theta, ...fitted.coefficients, ...fitted.errors].every(Number.isFinite)).toBe(true);
    const unit = 1000;
    const scaled = { ...cells, effectiveSize: (cells.effectiveSize as Float64Array).map((n) => n * unit) };
    const again = open(fitOf({ cells: scaled, parts, method: 'restricted' }));
    for (const [j, error] of fitted.errors.entries())
      expect(Math.abs((again.errors[j] as number) / error - 1)).toBeLessThan(1e-9);
  });
});

describe('many parameters at once', () => {
  const parts: Part[] = [
    { kind: 'per-class', column: 'kind', perSize: true, ...none },
    { kind: 'between', correlation: { kind: 'serial', by: ['region'], order: 'time' } },
    { kind: 'shared', by: ['time'] },
    { kind: 'shared', by: ['kind'] },
  ];

  it('are found, or refused by the name of one of them, in a few thousand looks at the likelihood', () => {
    const cells = panelCells(30, 4);
    let looks = 0;
    const { design, structure } = madeOf({ cells, parts });
    const counted = {
      ...structure,
      variancesAt: (theta: Float64Array) => {
        looks++;
        return structure.variancesAt(theta);
      },
    };
    const outcome = fitStructure({
      ...{ design, structure: counted, response: cells.outcome },
      estimate: { method: 'restricted' },
    });
    if (outcome.ok) expect(outcome.value.theta.every(Number.isFinite)).toBe(true);
    else expect(problemsOf(outcome)).toMatchObject([{ code: 'no-convergence' }]);
    expect(looks).toBeLessThan(5000);
  });
});
