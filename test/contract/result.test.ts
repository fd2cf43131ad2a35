import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import { validateResult } from '@core/protocol/validate-result';
import { describe, expect, it } from 'vitest';

const file = join(import.meta.dirname, 'files/valid/minimal-per-size.normal.json');
const plan = JSON.parse(readFileSync(file, 'utf8')) as Plan;

const coefficient = {
  ...{ term: 'intercept', estimate: 2.5, low: null, high: null, se: 0.5 },
  ...{ reference: { kind: 't', freedom: 3 } as const, ratio: 5, p: 0.01 },
};

/** The smallest result there can be: no cell figures, every list empty that may be. Made up for this test. */
const result: Result = {
  format: 'steelyard-result/1',
  plan,
  data: { rows: 4, used: 4, omitted: [], files: [{ name: 'a.csv', sha256: '00' }], unmatched: [] },
  fit: {
    estimate: plan.estimate,
    inference: plan.inference,
    coefficients: [coefficient],
    covariance: [[0.25]],
    carriedBy: [],
    variance: [{ name: 'phi', estimate: 1, se: null, low: null, high: null, atBoundary: false, fixed: false }],
    ...{ residualSd: 1, weightedRss: 3, residualFreedom: 3, logLikelihood: null, restrictedLogLikelihood: null },
    ...{ aic: null, aicc: null, bic: null },
    rSquared: { weighted: 0, adjusted: null, raw: 0.9, centred: true },
    ...{ chiSquare: null, deviance: null, knappHartungQ: null, tau2Bias: null, wild: null },
    ...{ digits: 12, condition: 1, converged: true, startsTried: 1, errorFreedom: null, samplingShare: null },
  },
  ...{ robustBeside: null, individualLevel: null, cells: [], effectiveCells: null, beside: [], square: [] },
  ...{ breakEven: [], intraclass: null, evidence: [], betweenRules: [], questions: [], beam: [], exponentScan: [] },
  ...{ exponentSupport: null, bounds: [], commonCorrelation: [], whatItTakes: null, bootstrapTau2: null },
  ...{ overturn: [], selfChecks: [], cautions: [], made: { version: '0.1.0' } },
};

function problemsOf(value: unknown): unknown {
  const found = validateResult(value);
  return found.ok ? [] : found.problems;
}

describe('a stored result', () => {
  it('is taken as it is, null where a quantity is undefined', () => {
    expect(validateResult(JSON.parse(JSON.stringify(result)))).toEqual({ ok: true, value: result });
  });

  it('holds the details of a test, nested and under any name', () => {
    const detail = { by: [['a', 'b']], neighbours: null, constructor: { z: 1, deep: [true, 'x'] } };
    const evidence = [
      {
        ...{ test: 'dependence', statistic: 1, freedom1: null, freedom2: null, p: 0.5 },
        ...{ reading: 'does-not-contradict', smallestDeparture: null, detail },
      },
    ];
    expect(problemsOf({ ...result, evidence })).toEqual([]);
  });

  it('lacks no key, undefined quantities included', () => {
    const { effectiveCells: _, ...rest } = result;
    expect(problemsOf(rest)).toEqual([{ code: 'missing-key', at: '', facts: { key: 'effectiveCells' } }]);
  });

  it.each([Number.NaN, Number.POSITIVE_INFINITY])('holds no %d: it would be written as null', (estimate) => {
    const fit = { ...result.fit, coefficients: [{ ...coefficient, estimate }] };
    expect(problemsOf({ ...result, fit })).toEqual([
      { code: 'wrong-type', at: '/fit/coefficients/0/estimate', facts: { found: 'null', expected: 'number' } },
    ]);
  });

  it('holds one kind of answer a question', () => {
    const question = { kind: 'joint', terms: ['intercept'], name: null, family: null };
    const answer = { statistic: 4, scale: null, freedom1: 1, freedom2: 3, p: 0.1 };
    expect(problemsOf({ ...result, questions: [{ question, answer, pHolm: null }] })).toEqual([]);
    expect(problemsOf({ ...result, questions: [{ question, answer: { ...answer, se: 1 }, pHolm: null }] })).toEqual([
      { code: 'unknown-key', at: '/questions/0/answer/se', facts: { found: 'se', nearest: 'p' } },
    ]);
  });

  it('has a plan that is one, in its normal form', () => {
    const { matters: _, ...written } = plan;
    expect(problemsOf({ ...result, plan: written })).toMatchObject([{ code: 'wrong-format', at: '/plan' }]);
    const roles = { ...plan.roles, size: null };
    expect(problemsOf({ ...result, plan: { ...plan, roles } })).toEqual([
      { code: 'role-needed', at: '/plan/variance/parts/0', facts: { role: 'size', part: 'per-size' } },
    ]);
  });

  it('of another format is refused as that alone', () => {
    expect(problemsOf({ format: 'steelyard-result/2' })).toEqual([
      { code: 'wrong-format', at: '/format', facts: { found: 'steelyard-result/2', expected: 'steelyard-result/1' } },
    ]);
    expect(problemsOf([])).toEqual([{ code: 'wrong-type', at: '', facts: { found: 'array', expected: 'object' } }]);
  });
});
