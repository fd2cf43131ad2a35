import { betweenRulesOf } from '@core/inference/between-rules';
import { checkLeverageOf } from '@core/inference/check-leverage';
import { checkQuestions } from '@core/inference/check-questions';
import { inferenceOf } from '@core/inference/inferred';
import { cellsOfLeverageOne } from '@core/inference/robust';
import type { Inference, Plan, Question } from '@core/protocol/plan';
import { describe, expect, it } from 'vitest';
import { fitOf, partsOf, planFor, withTable } from './whole-fit';

const given: Plan['variance']['parts'] = [{ kind: 'given', scale: 'fixed', freedom: null, correlation: null }];
const between: Plan['variance']['parts'] = [...given, { kind: 'between', correlation: null }];
const perSize: Plan['variance']['parts'] = [{ kind: 'per-size', correlation: null }];
const model: Inference = { kind: 'model', level: 0.95 };
const robust = (correction: 'HC0' | 'HC3'): Inference => ({ kind: 'robust', level: 0.95, correction });

const small = {
  y: [3, 5, 4, 8, 7, 9],
  x: [1, 2, 3, 4, 5, 6],
  soil: ['clay', 'sand', 'clay', 'sand', 'loam', 'clay'],
  n: [10, 20, 15, 40, 25, 30],
  s: [1, 0.5, 0.8, 0.4, 0.6, 0.5],
};

function partsFor(table: Record<string, (number | string)[]>, said: Partial<Parameters<typeof planFor>[0]>) {
  const plan = planFor({ outcome: 'y', size: 'n', error: 's', terms: [{ column: 'x' }], parts: perSize, ...said });
  return partsOf(fitOf(plan, withTable(table)(plan)));
}

/** Every number that a result would hold. */
function numbersIn(value: unknown): number[] {
  if (typeof value === 'number') return [value];
  if (typeof value !== 'object' || value === null) return [];
  return Object.values(value).flatMap(numbersIn);
}

const ask: Question[] = [
  { kind: 'joint', terms: ['x'], name: null, family: 'f' },
  { kind: 'combination', of: { x: 2 }, equals: 1, name: null, family: 'f' },
  { kind: 'expect', where: { x: 3 }, size: 20, error: 1, name: null, family: null },
];

describe('as many cells as coefficients', () => {
  const two = { y: [3, 5], x: [1, 2], n: [10, 20], s: [1, 0.5] };

  it('leave a free scale, its errors and its likelihoods null', () => {
    const { fit, robustBeside, questions } = partsFor(two, { questions: ask });
    expect(fit.coefficients[1]).toMatchObject({
      term: 'x',
      se: null,
      low: null,
      high: null,
      reference: null,
      ratio: null,
      p: null,
    });
    expect(fit.coefficients[1]?.estimate).toBeCloseTo(2, 12);
    expect(fit.covariance).toEqual([
      [null, null],
      [null, null],
    ]);
    expect(fit).toMatchObject({
      residualSd: null,
      residualFreedom: 0,
      logLikelihood: null,
      aic: null,
      chiSquare: null,
    });
    expect(fit.variance).toEqual([
      { name: 'phi', estimate: null, se: null, low: null, high: null, atBoundary: false, fixed: false },
    ]);
    expect(robustBeside).toEqual([
      { term: 'intercept', se: null, ratioToModel: null },
      { term: 'x', se: null, ratioToModel: null },
    ]);
    expect(questions[0]).toMatchObject({ answer: { statistic: null, p: null }, pHolm: null });
    expect(numbersIn(partsFor(two, { questions: ask })).every(Number.isFinite)).toBe(true);
  });

  it('keep known errors, with a chi-square on nothing', () => {
    const { fit } = partsFor(two, { parts: given, questions: ask });
    expect(fit.coefficients[1]?.se).toBeCloseTo(Math.sqrt(1.25), 12);
    expect(fit.coefficients[1]?.reference).toEqual({ kind: 'normal', freedom: null });
    expect(fit.chiSquare).toMatchObject({ freedom: 0, p: null });
  });

  it('have null robust errors rather than a refusal, although every leverage is 1', () => {
    const { fit } = partsFor(two, { parts: given, inference: robust('HC3') });
    expect(fit.coefficients.map(({ se }) => se)).toEqual([null, null]);
  });
});

describe('a perfect fit', () => {
  it('has errors of 0, no ratio and no likelihood under a free scale', () => {
    const { fit, robustBeside, questions } = partsFor({ ...small, y: [3, 5, 7, 9, 11, 13] }, { questions: ask });
    expect(fit.coefficients[1]).toMatchObject({ estimate: 2, se: 0, low: 2, high: 2, ratio: null, p: null });
    expect(fit).toMatchObject({ weightedRss: 0, residualSd: 0, logLikelihood: null, aic: null });
    expect(robustBeside?.[1]).toEqual({ term: 'x', se: 0, ratioToModel: null });
    expect(numbersIn({ fit, questions }).every(Number.isFinite)).toBe(true);
  });
});

describe('outcomes that are all alike', () => {
  it('have no R squared', () => {
    const { fit } = partsFor({ ...small, y: [4, 4, 4, 4, 4, 4] }, { terms: [] });
    expect(fit.rSquared).toEqual({ weighted: null, adjusted: null, raw: null, centred: true });
  });
});

describe('outcomes and errors of extreme size', () => {
  it('give finite numbers or null, and the same ratios', () => {
    const usual = partsFor(small, { parts: between, estimate: { method: 'restricted' }, questions: ask });
    // The information of a variance goes with the inverse fourth power of the unit: 1e-77 is as far as doubles reach.
    for (const size of [1e-60, 1e60]) {
      const table = { ...small, y: small.y.map((y) => y * size), s: small.s.map((s) => s * size) };
      const { fit, betweenRules } = partsFor(table, { parts: between, estimate: { method: 'restricted' } });
      expect(numbersIn({ fit, betweenRules }).every(Number.isFinite)).toBe(true);
      expect(fit.coefficients[1]?.ratio).toBeCloseTo(usual.fit.coefficients[1]?.ratio as number, 7);
      expect((fit.variance[0]?.high as number) / size / size).toBeCloseTo(usual.fit.variance[0]?.high as number, 6);
    }
    for (const size of [1e-140, 1e140]) {
      const table = { ...small, y: small.y.map((y) => y * size), s: small.s.map((s) => s * size) };
      for (const inference of [model, robust('HC3')]) {
        const { fit, questions } = partsFor(table, { parts: given, inference, questions: ask.slice(0, 1) });
        expect(numbersIn({ fit, questions }).every(Number.isFinite)).toBe(true);
        const wanted = partsFor(small, { parts: given, inference }).fit.coefficients[1]?.ratio as number;
        expect(fit.coefficients[1]?.ratio).toBeCloseTo(wanted, 9);
      }
    }
  });
});

describe('a cell that alone carries a level', () => {
  const terms: Plan['terms'] = [{ column: 'soil', as: 'category', baseline: null }];
  const plan = planFor({ outcome: 'y', error: 's', terms, parts: given, inference: robust('HC3') });
  const labelled = { ...plan, roles: { ...plan.roles, label: ['soil', 'x'] } };
  const fit = fitOf(labelled, withTable(small)(labelled));

  it('is found by its leverage of 1', () => {
    expect(cellsOfLeverageOne(fit.fitted.leverages)).toEqual([4]);
  });

  it('is named in the refusal of HC3, before the fit and at it', () => {
    const refusal = {
      code: 'leverage-one',
      at: '/inference/correction',
      facts: { labels: ['loam · 5'], correction: 'HC3' },
    };
    const { cells, fitted, design } = fit;
    expect(inferenceOf({ fitted, cells, plan: labelled })).toEqual({ ok: false, problems: [refusal] });
    expect(checkLeverageOf({ plan: labelled, design, labels: cells.labels })).toEqual([refusal]);
  });

  it('does not stand in the way of HC0, and leaves the errors beside null', () => {
    const parts = partsOf({ ...fit, plan: { ...labelled, inference: robust('HC0') } });
    expect(parts.fit.coefficients.every(({ se }) => se !== null)).toBe(true);
    expect(parts.robustBeside?.every(({ se, ratioToModel }) => se === null && ratioToModel === null)).toBe(true);
  });
});

describe('questions that the model cannot answer', () => {
  const terms: Plan['terms'] = [
    { column: 'x', transform: 'inverse' },
    { column: 'soil', as: 'category', baseline: 'clay' },
  ];
  const found = (questions: Question[]) => {
    const plan = planFor({ outcome: 'y', size: 'n', terms, parts: perSize, questions });
    const { design, known } = fitOf(plan, withTable(small)(plan));
    return checkQuestions({ plan, design, known });
  };

  it('name the unknown coefficient and the nearest one, at its escaped place', () => {
    expect(found([{ kind: 'combination', of: { '1/y': -2, '1/x': 1 }, equals: 0, name: null, family: null }])).toEqual([
      { code: 'unknown-coefficient', at: '/questions/0/of/1~1y', facts: { found: '1/y', nearest: '1/x' } },
    ]);
  });

  it('name every unknown coefficient of a joint question, whose terms count as names', () => {
    expect(found([{ kind: 'joint', terms: ['soil', 'soil: Loam', 'soils'], name: null, family: null }])).toEqual([
      {
        code: 'unknown-coefficient',
        at: '/questions/0/terms/1',
        facts: { found: 'soil: Loam', nearest: 'soil: loam' },
      },
      { code: 'unknown-coefficient', at: '/questions/0/terms/2', facts: { found: 'soils', nearest: 'soil' } },
    ]);
  });

  it('name a level that no cell has and a value that a transform cannot take, inside averages too', () => {
    const where = { x: 2, soil: 'peat' };
    const problems = found([
      { kind: 'expect', where: { x: 0, soil: 'clay' }, size: null, error: null, name: null, family: null },
      {
        kind: 'average',
        of: [{ where: { x: 1, soil: 'sand' }, share: 1 }],
        minus: [{ where, share: 1 }],
        name: null,
        family: null,
      },
    ]);
    expect(problems.map(({ code, at }) => [code, at])).toEqual([
      ['out-of-range', '/questions/0/where/x'],
      ['unknown-kind', '/questions/1/minus/0/where/soil'],
    ]);
  });

  it('are answered once the names are right, a term standing for all its columns', () => {
    const plan = planFor({
      outcome: 'y',
      size: 'n',
      terms,
      parts: perSize,
      questions: [
        { kind: 'joint', terms: ['soil'], name: null, family: null },
        { kind: 'joint', terms: ['soil: loam', 'soil: sand', 'soil'], name: null, family: null },
      ],
    });
    const { questions } = partsOf(fitOf(plan, withTable(small)(plan)));
    expect(questions[0]?.answer).toMatchObject({ freedom1: 2, freedom2: 2 });
    expect(questions[1]?.answer).toEqual(questions[0]?.answer);
  });
});

describe('a new cell', () => {
  const observed = (said: Partial<Parameters<typeof planFor>[0]>, asked: Partial<{ size: number; error: number }>) => {
    const question: Question = {
      kind: 'expect',
      where: { x: 3 },
      size: null,
      error: null,
      name: null,
      family: null,
      ...asked,
    };
    const { questions, fit } = partsFor(small, { ...said, questions: [question] });
    const answer = questions[0]?.answer;
    if (!answer || !('fitted' in answer)) throw new Error('no expectation');
    const added =
      answer.newCellObserved && (answer.newCellObserved.se as number) ** 2 - (answer.fitted.se as number) ** 2;
    return { added, phi: fit.variance.find(({ name }) => name === 'phi')?.estimate as number };
  };

  it('has the sampling variance of its part, or none where the question leaves out what the part needs', () => {
    const sized = observed({}, { size: 50 });
    expect(sized.added).toBeCloseTo(sized.phi / 50, 12);
    expect(observed({}, { error: 2 }).added).toBeNull();
    const alike = observed({ parts: [{ kind: 'constant', correlation: null }] }, {});
    expect(alike.added).toBeCloseTo(alike.phi, 12);
    expect(observed({ parts: given }, { error: 2 }).added).toBeCloseTo(4, 12);
    expect(observed({ parts: given }, { size: 50 }).added).toBeNull();
    const power = observed({ parts: [{ kind: 'size-power', exponent: 0.5, correlation: null }] }, { size: 50 });
    expect(power.added).toBeCloseTo(power.phi / Math.sqrt(50), 12);
    const proxied = observed({ parts: [{ kind: 'proxy', column: 'x', exponent: 2, correlation: null }] }, {});
    expect(proxied.added).toBeCloseTo(proxied.phi * 9, 12);
  });
});

describe('parameters that the user fixed', () => {
  it('are shown as fixed, with a normal reference where nothing else was estimated', () => {
    const { fit } = partsFor(small, { parts: between, fixed: { tau2: 0.3 } });
    expect(fit.variance).toEqual([
      { name: 'tau2', estimate: 0.3, se: null, low: null, high: null, atBoundary: false, fixed: true },
    ]);
    expect(fit.coefficients[0]?.reference).toEqual({ kind: 'normal', freedom: null });
    expect(fit.chiSquare?.freedom).toBe(4);
  });

  it('leave no table of rules for tau^2', () => {
    const plan = planFor({ outcome: 'y', error: 's', terms: [{ column: 'x' }], parts: between, fixed: { tau2: 0.3 } });
    expect(betweenRulesOf(fitOf(plan, withTable(small)(plan)).fitted, 0.95)).toEqual([]);
  });
});

describe('given errors that are estimates', () => {
  const freedom: Plan['variance']['parts'] = [
    { kind: 'given', scale: 'fixed', freedom: { column: 'n' }, correlation: null },
  ];

  it('report the middle and both ends of their freedoms', () => {
    expect(partsFor(small, { parts: freedom }).fit.errorFreedom).toEqual({ median: 22.5, low: 10, high: 40 });
  });

  it('test jointly on the smallest freedom of the coefficients concerned', () => {
    const { fit, questions } = partsFor(small, {
      parts: freedom,
      questions: [{ kind: 'joint', terms: ['intercept', 'x'], name: null, family: null }],
    });
    const freedoms = fit.coefficients.map(({ reference }) => reference?.freedom as number);
    expect(questions[0]?.answer).toMatchObject({ freedom1: 2, freedom2: Math.min(...freedoms) });
  });

  it('are referred to t with G - k beside a between part', () => {
    const parts: Plan['variance']['parts'] = [...freedom, { kind: 'between', correlation: null }];
    const { fit } = partsFor(small, { parts, estimate: { method: 'restricted' }, inference: model });
    expect(fit.coefficients[0]?.reference).toEqual({ kind: 't', freedom: 4 });
  });
});

describe('the share of sampling', () => {
  it('is that of a cell of median size, and null without a between part', () => {
    const said = { parts: [...perSize, ...between.slice(1)], fixed: { phi: 45, tau2: 3 } };
    // Median size 22.5: 45 / 22.5 = 2 beside 3.
    expect(partsFor(small, said).fit.samplingShare).toBeCloseTo(0.4, 12);
    expect(partsFor(small, {}).fit.samplingShare).toBeNull();
    // Squared errors 0.16, 0.25, 0.25, 0.36, 0.64, 1: the middle is 0.305.
    expect(partsFor(small, { parts: between, fixed: { tau2: 0.305 } }).fit.samplingShare).toBeCloseTo(0.5, 12);
  });
});
