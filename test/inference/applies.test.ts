import { checkModel } from '@core/inference/check-model';
import { clustersOfBlocks } from '@core/inference/clusters';
import { inferenceFor } from '@core/inference/inference-for';
import { curvedParameter } from '@core/protocol/check-method';
import type { Inference, Plan, Variance } from '@core/protocol/plan';
import { describe, expect, it } from 'vitest';
import { fitOf, partsOf, planFor, withTable } from './whole-fit';

type Parts = Variance['parts'];

const table = {
  y: [3, 5, 4, 8, 7, 9, 6, 4, 8, 10, 5, 7],
  x: [1, 2, 3, 4, 5, 6, 2, 1, 5, 7, 3, 4],
  n: [10, 20, 15, 40, 25, 30, 12, 18, 22, 35, 14, 16],
  s: [1, 0.5, 0.8, 0.4, 0.6, 0.5, 0.9, 0.7, 0.6, 0.4, 0.8, 0.8],
  g: ['a', 'a', 'b', 'b', 'c', 'c', 'd', 'd', 'e', 'e', 'f', 'f'],
  h: ['p', 'q', 'p', 'q', 'p', 'q', 'p', 'q', 'p', 'q', 'p', 'q'],
  one: Array.from({ length: 12 }, () => 'o'),
};
const perSize: Parts[number] = { kind: 'per-size', correlation: null };
const shared = (by: string): Parts[number] => ({ kind: 'shared', by: [by] });
const exchangeable = { kind: 'exchangeable', by: ['g'] } as { kind: 'exchangeable'; by: string[] };

const clustered: Inference = { kind: 'clustered', level: 0.9, correction: 'CR2', by: ['g'], alsoBy: null };
const wild: Inference = { kind: 'wild', level: 0.9, by: ['g'], replications: 99, seed: 1 };
const kenwardRoger: Inference = { kind: 'kenward-roger', level: 0.9 };
const robust: Inference = { kind: 'robust', level: 0.9, correction: 'HC3' };
const model: Inference = { kind: 'model', level: 0.9 };

function cells() {
  const plan = planFor({ outcome: 'y', size: 'n', error: 's', terms: [{ column: 'x' }], parts: [perSize] });
  return withTable(table)(plan);
}

describe('the inference of a rival', () => {
  const given: Parts[number] = { kind: 'given', scale: 'fixed', freedom: null, correlation: null };
  const between: Parts[number] = { kind: 'between', correlation: null };
  const sizePower: Parts[number] = { kind: 'size-power', exponent: 'estimate', correlation: null };
  const knappHartung: Inference = { kind: 'knapp-hartung', level: 0.9, floor: false };
  it.each<[string, Parts, Plan['estimate']['method'], Inference, boolean]>([
    ['clusters that hold its blocks', [perSize, shared('g')], 'restricted', clustered, true],
    ['clusters that cut its blocks', [perSize, shared('h')], 'restricted', clustered, false],
    ['the bootstrap by clusters that cut its blocks', [perSize, shared('h')], 'restricted', wild, false],
    ['the bootstrap of independent cells', [perSize], 'least-squares', wild, true],
    ['HC of independent cells', [perSize, between], 'restricted', robust, true],
    ['HC of correlated cells', [perSize, shared('g')], 'restricted', robust, false],
    ['Kenward-Roger of a linear structure', [perSize, shared('h')], 'restricted', kenwardRoger, true],
    ['Kenward-Roger of an exponent', [sizePower], 'restricted', kenwardRoger, false],
    ['Kenward-Roger under full likelihood', [perSize, between], 'full', kenwardRoger, false],
    ['Knapp-Hartung of given errors with a between part', [given, between], 'restricted', knappHartung, true],
    ['Knapp-Hartung of sizes', [perSize, between], 'restricted', knappHartung, false],
  ])('%s', (_, parts, method, own, applies) => {
    const estimate = { method } as Plan['estimate'];
    const found = inferenceFor({ variance: { parts, fixed: {} }, estimate }, own, cells());
    expect(found).toEqual(applies ? own : model);
  });
});

describe('Omega is linear in its parameters', () => {
  it.each<[string, Parts, Record<string, number>, string | undefined]>([
    ['with variances alone', [perSize, shared('g'), { kind: 'between', correlation: null }], {}, undefined],
    ['with an exchangeable correlation', [{ kind: 'per-size', correlation: exchangeable }], {}, undefined],
    [
      'not with a serial one',
      [perSize, { kind: 'between', correlation: { kind: 'serial', by: ['g'], order: 'x' } }],
      {},
      'rho: between',
    ],
    [
      'with a serial one that is set',
      [perSize, { kind: 'between', correlation: { kind: 'serial', by: ['g'], order: 'x' } }],
      { 'rho: between': 0.4 },
      undefined,
    ],
    ['with classes', [{ kind: 'per-class', column: 'h', perSize: false, correlation: null }], {}, undefined],
    [
      'not with classes that go together',
      [{ kind: 'per-class', column: 'h', perSize: false, correlation: exchangeable }],
      {},
      'phi: ',
    ],
    [
      'not with a log-linear part',
      [{ kind: 'log-linear', terms: [{ column: 'x' }], correlation: null }],
      {},
      'gamma: intercept',
    ],
  ])('%s', (_, parts, fixed, curved) => {
    expect(curvedParameter({ parts, fixed })?.name).toBe(curved);
  });
});

describe('clusters that cut what a plan ties together', () => {
  const refusalsOf = (said: Partial<Parameters<typeof planFor>[0]>, matrices: Record<string, number[]> = {}) => {
    const plan = planFor({
      outcome: 'y',
      size: 'n',
      error: 's',
      terms: [{ column: 'x' }],
      parts: [perSize],
      estimate: { method: 'restricted' },
      inference: clustered,
      ...said,
    });
    const own = withTable(table)(plan);
    const given = new Map(Object.entries(matrices).map(([file, entries]) => [file, Float64Array.from(entries)]));
    const checked = checkModel({ plan, cells: { ...own, matrices: given } });
    return checked.ok ? [] : checked.problems;
  };
  const matrix = (tied: readonly [number, number]) =>
    Array.from({ length: 144 }, (_, e) => {
      const [i, j] = [Math.floor(e / 12), e % 12];
      if (i === j) return 1 + i / 10;
      return (i === tied[0] && j === tied[1]) || (i === tied[1] && j === tied[0]) ? 0.2 : 0;
    });

  it('are refused for a shared part, a correlation, the structure of a target and a matrix, each by its name', () => {
    expect(refusalsOf({ parts: [perSize, shared('g')] })).toEqual([]);
    const facts = { by: ['g'], part: 'shared', partBy: ['h'], group: { h: 'p' } };
    expect(refusalsOf({ parts: [perSize, shared('h')] })).toEqual([
      { code: 'cluster-cuts-block', facts, at: '/inference/by' },
    ]);
    const target: Variance = { parts: [perSize, shared('h')], fixed: {} };
    expect(refusalsOf({ target })).toEqual([{ code: 'cluster-cuts-block', facts, at: '/inference/by' }]);
    const part: Parts[number] = { kind: 'matrix', file: 'm.csv', scale: 'free', freedom: null };
    const estimate: Plan['estimate'] = { method: 'least-squares' };
    expect(refusalsOf({ parts: [part], estimate }, { 'm.csv': matrix([2, 3]) })).toEqual([]);
    expect(refusalsOf({ parts: [part], estimate }, { 'm.csv': matrix([1, 2]) })).toEqual([
      {
        code: 'cluster-cuts-block',
        facts: { by: ['g'], part: 'matrix', partBy: [], group: { label: '2' } },
        at: '/inference/by',
      },
    ]);
  });

  it('fewer than two of them, and one that decides a coefficient under CR3, are refused before the fit', () => {
    const few = { code: 'too-few-clusters', facts: { by: ['one'], clusters: 1 }, at: '/inference/by' };
    expect(refusalsOf({ inference: { ...clustered, by: ['one'] } as Inference })).toEqual([few]);
    const decided = refusalsOf({
      inference: { ...clustered, correction: 'CR3' } as Inference,
      terms: [{ column: 'x' }, { column: 'g', as: 'category', baseline: null }],
    });
    expect(decided.map(({ code, facts }) => [code, facts])).toEqual([
      ['cluster-decides', { by: ['g'], group: { g: 'a' }, correction: 'CR3' }],
    ]);
  });
});

describe('robust errors beside a structure that ties cells together', () => {
  it('are CR2 by the blocks, and null where all cells are one block', () => {
    const estimate: Plan['estimate'] = { method: 'restricted' };
    const said = { outcome: 'y', size: 'n', terms: [{ column: 'x' }], estimate };
    const plan = planFor({ ...said, parts: [perSize, shared('g')] });
    const beside = partsOf(fitOf(plan, withTable(table)(plan))).robustBeside;
    const own = planFor({ ...said, parts: [perSize, shared('g')], inference: clustered });
    const errors = partsOf(fitOf(own, withTable(table)(own))).fit.coefficients;
    for (const [j, { se }] of errors.entries()) expect(beside?.[j]?.se).toBeCloseTo(se as number, 12);
    const whole = { ...table, g: table.g.map(() => 'all') };
    const fixed = planFor({ ...said, parts: [perSize, shared('g')], fixed: { 'omega2: g': 0.5 }, estimate });
    for (const { se, ratioToModel } of partsOf(fitOf(fixed, withTable(whole)(fixed))).robustBeside ?? [])
      expect([se, ratioToModel]).toEqual([null, null]);
  });

  it('count blocks that share a cell as one', () => {
    const { clusterOf, count } = clustersOfBlocks(7, [Int32Array.of(0, 2), Int32Array.of(2, 5), Int32Array.of(3, 4)]);
    expect(count).toBe(4);
    expect(Array.from(clusterOf)).toEqual([0, 1, 0, 2, 2, 0, 3]);
  });
});

describe('the true value of a new cell', () => {
  it('adds tau2 and the omega2 of every shared part; its observed value adds what its class, size or terms give it', () => {
    const question = (
      where: Record<string, number | string>,
      size: number | null = null,
    ): Plan['questions'][number] => ({
      kind: 'expect',
      where,
      size,
      error: null,
      name: null,
      family: null,
    });
    const answersOf = (parts: Parts, fixed: Record<string, number>, questions: Plan['questions']) => {
      const plan = planFor({ outcome: 'y', size: 'n', terms: [{ column: 'x' }], parts, fixed, questions });
      const { questions: answers } = partsOf(fitOf(plan, withTable(table)(plan)));
      return answers.map(({ answer }) => answer) as unknown as {
        fitted: { se: number };
        newCellTrue: { se: number };
        newCellObserved: { se: number } | null;
      }[];
    };
    const added = (answer: { fitted: { se: number } }, of: { se: number } | null) =>
      of === null ? null : of.se ** 2 - answer.fitted.se ** 2;

    const fixed = { phi: 40, 'omega2: g': 0.5, 'omega2: h': 0.25, tau2: 0.125 };
    const [crossed] = answersOf([perSize, shared('g'), shared('h'), { kind: 'between', correlation: null }], fixed, [
      question({ x: 2 }, 20),
    ]);
    if (!crossed) throw new Error('no answer');
    expect(added(crossed, crossed.newCellTrue)).toBeCloseTo(0.875, 10);
    expect(added(crossed, crossed.newCellObserved)).toBeCloseTo(0.875 + 2, 10);

    const classes: Parts = [{ kind: 'per-class', column: 'h', perSize: true, correlation: null }];
    const byClass = answersOf(classes, { 'phi: p': 12, 'phi: q': 30 }, [
      question({ x: 2, h: 'q' }, 10),
      question({ x: 2, h: 'p' }, 10),
      question({ x: 2, h: 'r' }, 10),
      question({ x: 2 }, 10),
      question({ x: 2, h: 'p' }),
    ]);
    expect(byClass.map((one) => added(one, one.newCellObserved)?.toFixed(9) ?? null)).toEqual([
      '3.000000000',
      '1.200000000',
      null,
      null,
      null,
    ]);

    const logLinear: Parts = [{ kind: 'log-linear', terms: [{ column: 'x' }], correlation: null }];
    const [byTerms] = answersOf(logLinear, { 'gamma: intercept': 0.5, 'gamma: x': -0.25 }, [question({ x: 2 })]);
    if (!byTerms) throw new Error('no answer');
    expect(added(byTerms, byTerms.newCellObserved)).toBeCloseTo(1, 10);
  });
});
