import { beamOf } from '@core/evidence/beam';
import { carriedByOf } from '@core/evidence/carried-by';
import type { CautionPieces } from '@core/evidence/caution-sources';
import { cautionsOf } from '@core/evidence/cautions';
import { cellResultsOf } from '@core/evidence/cell-results';
import { judgeOf } from '@core/evidence/judge';
import { pricesOf } from '@core/evidence/price';
import { cautionCodes } from '@core/protocol/cautions';
import type { Plan, Variance } from '@core/protocol/plan';
import type { BetweenRule, Evidence, Omitted } from '@core/protocol/result';
import { describe, expect, it } from 'vitest';
import { type FittedCase, fittedCase, fittedTable, rivalsOf } from './sensitivity-case';

/** The pieces that this room makes, and a fit result without anything to say. */
function piecesOf({ fitted, cells, plan }: Omit<FittedCase, 'of'>): CautionPieces {
  const coefficients = [...(judgeOf(cells, plan)(fitted, null) ?? [])];
  const rivals = rivalsOf({ fitted, cells, plan });
  return {
    data: cells.data,
    fit: {
      estimate: plan.estimate,
      inference: plan.inference,
      coefficients,
      covariance: [],
      carriedBy: carriedByOf({ fitted, cells }),
      variance: [],
      residualSd: null,
      weightedRss: 1,
      residualFreedom: fitted.residualFreedom,
      logLikelihood: null,
      restrictedLogLikelihood: null,
      aic: null,
      aicc: null,
      bic: null,
      rSquared: { weighted: null, adjusted: null, raw: null, centred: true },
      chiSquare: null,
      deviance: null,
      knappHartungQ: null,
      tau2Bias: null,
      wild: null,
      digits: fitted.digits,
      condition: fitted.condition,
      converged: true,
      startsTried: 1,
      errorFreedom: null,
      samplingShare: null,
    },
    robustBeside: null,
    ...cellResultsOf({ fitted, cells }),
    beside: pricesOf({ fitted, rivals }),
    evidence: [],
    betweenRules: [],
    beam: beamOf({ fitted, labels: cells.labels, judge: judgeOf(cells, plan) }),
    overturn: [],
    selfChecks: [],
  };
}

function said(known: Omit<FittedCase, 'of'>, change: (pieces: CautionPieces) => Partial<CautionPieces> = () => ({})) {
  const pieces = piecesOf(known);
  return cautionsOf({ ...known, pieces: { ...pieces, ...change(pieces) } });
}

const codesOf = (cautions: ReturnType<typeof said>) => cautions.map(({ code }) => code);

const test = (name: Evidence['test'], p: number, detail: Evidence['detail'] = {}): Evidence => ({
  test: name,
  statistic: 9,
  freedom1: 1,
  freedom2: null,
  p,
  reading: p < 0.05 ? 'rejects' : 'does-not-contradict',
  smallestDeparture: null,
  detail,
});

const library = fittedCase('library-influence', 'per-size');
const physics = fittedCase('physics-known-se', 'scale-fixed');

describe('a caution', () => {
  it('is one of the listed codes, grouped, and ordered by group and then by shift', () => {
    const known = { ...library, plan: { ...library.plan, beside: ['constant'] } satisfies Plan };
    const cautions = said(known, ({ data }) => ({
      selfChecks: [{ check: 'rows-reversed', passed: false, figure: 1 }],
      data: { ...data, omitted: [omitted('blank')] },
      evidence: [test('dumouchel-duncan', 0.01), test('koenker', 0.001)],
    }));
    const codes = codesOf(cautions);
    expect(new Set(codes.slice(0, 4))).toEqual(
      new Set(['self-check-failed', 'weights-concentrated', 'structure-rejected', 'weighting-changes-answer']),
    );
    expect(codes[0]).toBe('self-check-failed');
    const shifts = cautions.slice(1, 4).map(({ facts }) => (facts['shift'] as { inErrors: number }).inErrors);
    expect(shifts).toEqual([...shifts].sort((a, b) => b - a));
    expect(codes.slice(4)).toEqual(['dependence-not-tested', 'structures-tried', 'cells-omitted']);
    expect(cautions.map(({ group }) => group)).toEqual([
      ...new Array(4).fill('changes-answer'),
      'limits-claim',
      ...new Array(2).fill('for-record'),
    ]);
    for (const code of codes) expect(cautionCodes).toContain(code);
  });

  it('carries its consequence as the largest move of a coefficient, with its size in errors', () => {
    const known = { ...library, plan: { ...library.plan, beside: ['constant'] } satisfies Plan };
    const found = said(known, () => ({ evidence: [test('dumouchel-duncan', 0.01)] }));
    const { coefficients } = piecesOf(known).fit;
    const [rival] = piecesOf(known).beside;
    const moves = coefficients.map(({ term, estimate, se }, j) => {
      const to = rival?.coefficients[j]?.estimate as number;
      return { term, from: estimate, to, inErrors: Math.abs(to - estimate) / (se as number) };
    });
    const largest = moves.slice(1).reduce((a, b) => (b.inErrors > a.inErrors ? b : a));
    const facts = found.find(({ code }) => code === 'weighting-changes-answer')?.facts;
    expect(facts).toMatchObject({ p: 0.01, shift: largest });
  });

  it('of concentrated weights comes below half the cells, and names the heaviest', () => {
    const [first] = said(library).filter(({ code }) => code === 'weights-concentrated');
    // library-influence: 22.9390350782729 effective cells of 60.
    expect(first?.facts).toMatchObject({ cells: 60, shift: { term: expect.any(String) } });
    expect(first?.facts['effectiveCells']).toBeCloseTo(22.9390350782729, 10);
    expect(codesOf(said(physics))).not.toContain('weights-concentrated');
  });

  it('of given errors tells whether they are taken as exact, or carry a freedom and are noisy', () => {
    expect(codesOf(said(physics))).toContain('errors-taken-as-exact');
    const carry = (median: number) =>
      said(physics, ({ fit }) => ({ fit: { ...fit, errorFreedom: { median, low: 4, high: 60 } } })).find(
        ({ code }) => code === 'errors-estimated',
      );
    expect(carry(23)).toMatchObject({ group: 'limits-claim', facts: { median: 23, noisy: true } });
    expect(carry(40)).toMatchObject({ group: 'for-record', facts: { noisy: false } });
    expect(codesOf(said(library))).not.toContain('errors-taken-as-exact');
  });

  it.each([
    ['cv', { roles: { ...physics.plan.roles, errorKind: 'cv' as const } }],
    ['share', { roles: { ...physics.plan.roles, outcomeUnit: 'percent' as const } }],
    ['log', { outcomeScale: 'log' as const }],
  ])('of errors made from the outcome itself tells that it is by %s', (cause, change) => {
    const cautions = said({ ...physics, plan: { ...physics.plan, ...change } });
    expect(cautions.find(({ code }) => code === 'errors-from-outcome')?.facts).toEqual({ cause });
    expect(codesOf(cautions).includes('log-of-means')).toBe(cause === 'log');
  });

  it('of a fixed scale tells the scale that the chi-square asks for', () => {
    // Worked example A: chi-square 21.9526485212 on 8, p .0050043.
    const chiSquare = { statistic: 21.9526485212, freedom: 8, p: 0.0050043 };
    const cautions = said(physics, ({ fit }) => ({
      fit: { ...fit, chiSquare },
      evidence: [test('heterogeneity', 0.005)],
    }));
    expect(cautions[0]).toMatchObject({ code: 'scale-contradicted', facts: { phi: 21.9526485212 / 8 } });
    expect(codesOf(cautions)).not.toContain('structure-rejected');
  });

  it('of the structure counts only tests that speak against it', () => {
    const tau2 = { name: 'tau2', estimate: 1, se: 1, low: 0, high: 2, atBoundary: false, fixed: false };
    const evidence = [test('heterogeneity', 0.001), test('boundary-likelihood-ratio', 0.001, { zero: ['tau2'] })];
    const codes = (variance: (typeof tau2)[]) =>
      codesOf(said(library, ({ fit }) => ({ fit: { ...fit, variance }, evidence })));
    expect(codes([tau2])).not.toContain('structure-rejected');
    expect(codes([])).toContain('structure-rejected');
  });

  it('of dependence tells by which columns, and that it was not tested where it was not', () => {
    const tested = said(library, () => ({ evidence: [test('dependence', 0.01, { by: ['district'] })] }));
    expect(tested.find(({ code }) => code === 'dependence-found')?.facts).toMatchObject({
      tests: [{ test: 'dependence', p: 0.01, by: ['district'] }],
    });
    expect(codesOf(tested)).not.toContain('dependence-not-tested');
    expect(codesOf(said(library))).toContain('dependence-not-tested');
  });

  it('of a boundary lists the rules that find more, and what they would make of the coefficients', () => {
    const tau2 = { name: 'tau2', estimate: 0, se: null, low: 0, high: 2, atBoundary: true, fixed: false };
    const rule: BetweenRule = {
      rule: 'hanushek',
      tau2: 0.4,
      profileLow: null,
      profileHigh: null,
      qLow: 0,
      qHigh: 3,
      coefficients: [],
    };
    const cautions = said(library, ({ fit }) => ({
      fit: { ...fit, variance: [tau2], knappHartungQ: 0.67 },
      betweenRules: [rule, { ...rule, rule: 'paule-mandel', tau2: 0, qLow: null, qHigh: null }],
    }));
    expect(cautions.find(({ code }) => code === 'variance-at-boundary')?.facts).toMatchObject({
      name: 'tau2',
      rules: [{ rule: 'hanushek', tau2: 0.4 }],
    });
    expect(cautions.find(({ code }) => code === 'knapp-hartung-narrowed')?.facts).toEqual({
      q: 0.67,
      betweenAtZero: true,
    });
    expect(cautions.find(({ code }) => code === 'between-interval-empty')?.facts).toEqual({ rules: ['paule-mandel'] });
  });

  it('of changes that cross tells the largest, and of how many', () => {
    const change = {
      term: 'income',
      change: { kind: 'cell' as const, what: 'D07' },
      estimate: 0.01,
      low: -0.1,
      high: 0.1,
    };
    const cautions = said(library, () => ({
      overturn: [
        { ...change, crosses: null },
        { ...change, crosses: 'zero' },
        { ...change, crosses: 'matters' },
      ],
    }));
    expect(cautions.find(({ code }) => code === 'overturned')?.facts).toMatchObject({
      term: 'income',
      kind: 'cell',
      what: 'D07',
      crosses: 'zero',
      crossing: 2,
      tried: 3,
      shift: { term: 'income', to: 0.01 },
    });
  });

  it('of the fit tells lost digits, own-fit cells, thin freedom and robust errors that differ', () => {
    const cautions = said(library, ({ fit, cells }) => ({
      fit: {
        ...fit,
        digits: 5,
        coefficients: fit.coefficients.map((one, j) =>
          j === 2 ? { ...one, reference: { kind: 't', freedom: 3.2 } } : one,
        ),
      },
      cells: cells.map((cell, g) => (g === 3 ? { ...cell, leverage: 1 } : cell)),
      robustBeside: [
        { term: 'income', se: 1, ratioToModel: 1.6 },
        { term: 'opening', se: 1, ratioToModel: 1.2 },
      ],
      evidence: [test('shapiro-wilk', 0.02)],
    }));
    const facts = (code: string) => cautions.find((one) => one.code === code)?.facts;
    expect(facts('few-digits')).toMatchObject({ digits: 5 });
    expect(facts('leverage-one')).toEqual({ labels: ['D04'] });
    expect(facts('freedom-below-four')).toEqual({ terms: [{ term: 'area: hill', freedom: 3.2 }] });
    expect(facts('robust-differs')).toEqual({ terms: [{ term: 'income', ratio: 1.6 }] });
    expect(facts('residuals-not-normal')).toMatchObject({ p: 0.02 });
  });

  it('of missing freedom tells as many cells as terms, or nothing left without one', () => {
    const saturated = fittedTable('run,x,y,se\na,0,1,1\nb,1,2,1', physics.plan);
    expect(codesOf(said(saturated))).toContain('no-residual-freedom');
    const free: Variance = { parts: [{ kind: 'given', scale: 'free', freedom: null, correlation: null }], fixed: {} };
    const one = fittedTable('run,x,y,se\na,0,1,1\nb,1,2,1\nc,2,5,1', { ...physics.plan, variance: free });
    expect(codesOf(said(one))).toContain('leave-one-out-undefined');
  });

  it('of the data counts what was left out and why, and suppressed cells by name', () => {
    const cautions = said(library, ({ data }) => ({
      data: {
        ...data,
        rows: 63,
        omitted: [
          omitted('suppressed-confidential', 'D61'),
          omitted('suppressed-unknown', 'D62'),
          omitted('blank', 'D63'),
        ],
        unmatched: [
          { file: 'prices.csv', side: 'ours', key: { region: 'x' } },
          { file: 'prices.csv', side: 'theirs', key: { region: 'y' } },
          { file: 'prices.csv', side: 'theirs', key: { region: 'z' } },
        ],
      },
    }));
    const facts = (code: string) => cautions.find((one) => one.code === code)?.facts;
    expect(facts('cells-suppressed')).toEqual({ cells: 2, labels: ['D61', 'D62'], bounded: 0 });
    expect(facts('cells-omitted')).toMatchObject({
      omitted: 3,
      reasons: { 'suppressed-confidential': 1, 'suppressed-unknown': 1, blank: 1 },
    });
    expect(facts('join-unmatched')).toEqual({ file: 'prices.csv', ours: 1, theirs: 2 });
  });

  it('of values that their source marks counts them by column', () => {
    const { cells } = library;
    const numbers: typeof cells.numbers = (column) => {
      const own = cells.numbers(column);
      return column === 'income' ? { ...own, status: own.status.map((one, g) => (g < 2 ? 'provisional' : one)) } : own;
    };
    const cautions = said({ ...library, cells: { ...cells, numbers } });
    expect(cautions.find(({ code }) => code === 'values-marked')?.facts).toEqual({
      column: 'income',
      status: 'provisional',
      cells: 2,
    });
  });

  it('of a term tells that it is constant within groups, and that few carry it, once a term', () => {
    const plan: Plan = {
      ...physics.plan,
      roles: { ...physics.plan.roles, label: ['district', 'year'] },
      terms: [{ column: 'law' }, { column: 'kind', as: 'category', baseline: null }],
    };
    const rows = ['a', 'b', 'c', 'd', 'e', 'f', 'g'].flatMap((district, d) =>
      [1, 2, 3].map(
        (year) => `${district},${year},${d < 2 ? 1 : 0},${['u', 'v', 'w'][(d + year) % 3]},${d + year * 0.5},1`,
      ),
    );
    const cautions = said(fittedTable(['district,year,law,kind,y,se', ...rows].join('\n'), plan));
    const facts = (code: string) => cautions.filter((one) => one.code === code).map((one) => one.facts);
    expect(facts('term-constant-within-groups')).toEqual([{ term: 'law', column: 'district', groups: 7, cells: 21 }]);
    expect(facts('term-carried-by-few')).toEqual([{ term: 'law', column: 'district', count: 2 }]);
  });

  it('of structures tried gives the range of every coefficient over them', () => {
    const known = { ...library, plan: { ...library.plan, beside: ['constant'] } satisfies Plan };
    const tried = said(known).find(({ code }) => code === 'structures-tried')?.facts;
    const [constant] = piecesOf(known).beside;
    const income = [library.fitted.coefficients[1], constant?.coefficients[1]?.estimate] as number[];
    expect(tried).toMatchObject({ tried: 2 });
    const ranges = tried?.['ranges'];
    expect(Array.isArray(ranges) && ranges[1]).toEqual({
      term: 'income',
      low: Math.min(...income),
      high: Math.max(...income),
    });
    expect(codesOf(said(library))).not.toContain('structures-tried');
  });
});

function omitted(code: Omitted['reason']['code'], label = 'D61'): Omitted {
  return { row: 61, label, reason: { code, column: 'n', text: '' } };
}
