import { type CautionCode, type CautionFacts, cautionCodes } from '@core/protocol/cautions';
import type { Caution, Detail } from '@core/protocol/result';
import { cautionSentence } from '@core/words/cautions';
import { describe, expect, it } from 'vitest';
import { resultOfCase } from '../report/results';

const shift = { term: 'income', from: 0.83, to: 0.71, inErrors: 0.6 };
const test = { test: 'koenker', statistic: 9.21, freedom1: 2, freedom2: null, p: 0.01, by: null };

/** Facts of every code; a code without them does not compile. */
const facts: { readonly [C in CautionCode]: CautionFacts[C] } = {
  'self-check-failed': { check: 'rows-reversed', figure: 0.01 },
  'few-digits': { digits: 4.2, condition: 1e9 },
  overturned: {
    term: 'income',
    kind: 'cell',
    what: 'North',
    estimate: 0.1,
    low: -0.2,
    high: 0.4,
    crosses: 'zero',
    crossing: 1,
    tried: 20,
    shift,
  },
  'scale-contradicted': { statistic: 21.9526, freedom: 8, p: 0.005, phi: 2.744 },
  'structure-rejected': { tests: [test], shift },
  'dependence-found': { tests: [{ ...test, test: 'dependence', by: ['region'] }] },
  'weighting-changes-answer': { statistic: 4.1, freedom1: 2, freedom2: 30, p: 0.027, shift: null },
  'weights-concentrated': { effectiveCells: 12.3, cells: 60, heaviest: 'North', heaviestShare: 0.2, shift },
  'variance-at-boundary': { name: 'tau2', rules: [{ rule: 'paule-mandel', tau2: 0.4 }], shift: null },
  'robust-differs': { terms: [{ term: 'income', ratio: 1.8 }] },
  'no-residual-freedom': { cells: 3, coefficients: 3 },
  'leave-one-out-undefined': { residualFreedom: 1 },
  'leverage-one': { labels: ['North'] },
  'freedom-below-four': { terms: [{ term: 'income', freedom: 2.6 }] },
  'few-clusters': { by: ['region'], clusters: 7 },
  'two-ways-below-zero': { terms: ['income'], by: ['region'], alsoBy: ['year'] },
  'clusters-cannot-judge': { terms: ['region: South'], by: ['region'] },
  'one-block': { cells: 12 },
  'correction-undefined': { parameters: ['phi', 'tau2'] },
  'matrix-estimated': { freedom: 40, cells: 12, inverted: true, noisy: true },
  'knapp-hartung-narrowed': { q: 0.67, betweenAtZero: true },
  'between-interval-empty': { rules: ['hanushek'] },
  'parameters-hardly-separate': { first: 'phi', second: 'tau2', correlation: -0.997 },
  'errors-estimated': { median: 12, low: 5, high: 40, noisy: true },
  'errors-from-outcome': { cause: 'log' },
  'halves-added': { to: 'extreme-cells', cells: 2, labels: ['Elm', 'Oak'] },
  'log-of-means': {},
  'variation-above-one': { column: 'cv', cells: 2, largest: 5.1 },
  'cells-suppressed': { cells: 2, labels: ['North', 'South'], bounded: 1 },
  'limits-not-followed': { columns: ['se'], failed: false },
  'bounds-undo': {
    terms: [{ term: 'income', low: -0.1, high: 0.9, sign: false }],
    cells: 4,
    shift: { term: 'income', from: 0.5, to: -0.1, inErrors: 3 },
  },
  'term-constant-within-groups': { term: 'income', column: 'region', groups: 9, cells: 40 },
  'term-carried-by-few': { term: 'region: South', column: null, count: 3 },
  'residuals-not-normal': { statistic: 0.91, p: 0.004 },
  'dependence-not-tested': { cells: 40 },
  'structures-tried': { tried: 4, ranges: [{ term: 'income', low: 0.61, high: 0.94 }] },
  'errors-taken-as-exact': { cells: 40 },
  'cells-omitted': { rows: 45, used: 40, omitted: 5, reasons: { missing: 4, blank: 1 } },
  'values-marked': { column: 'income', status: 'provisional', cells: 3 },
  'join-unmatched': { file: 'prices.csv', ours: 2, theirs: 0 },
  'sizes-within': { within: 3, shift: null },
  'labels-look-alike': { labels: ['North', 'North '], rows: [3, 9] },
};

const say = (code: CautionCode, own: object = facts[code]): string =>
  cautionSentence({ code, group: 'for-record', facts: own as Detail });

describe('a caution', () => {
  it.each(cautionCodes)('%s is said in whole sentences, without a hole', (code) => {
    const text = say(code);
    expect(text).toMatch(/^[A-Zτφωa-z].*\.$/);
    expect(text).not.toMatch(/NaN|\bundefined \d|null|\[object| {2}|\.\./);
    expect(text.split(/[.:] /).length).toBeGreaterThan(code === 'values-marked' || code === 'sizes-within' ? 0 : 1);
  });

  it('tells finding, consequence and what to do', () => {
    // PRACTICE A: chi-square 21.9526485212 on 8, p .0050043; phi 21.9526485212 / 8
    expect(say('scale-contradicted', { statistic: 21.9526485212, freedom: 8, p: 0.0050043, phi: 2.74408 })).toBe(
      'The given errors do not account for the scatter: chi-square 21.95 on 8, p = 0.005. Were the scale free it would be 2.74, and every standard error 1.66 times what is printed. Set the scale free, or add a between part.',
    );
    expect(say('structure-rejected')).toBe(
      'A test rejects the variance structure used: Koenker’s score test (9.21 on 2, p = 0.010). Standard errors may be wrong. Under the structures beside it, the coefficient of income moves from 0.83 to 0.71 (0.60 of its standard errors). Compare the structures, use robust errors, or state another structure.',
    );
    expect(say('cells-omitted')).toBe(
      'Of 45 rows, 40 are used and 5 left out: 4 with a missing value and 1 left blank. The data section names them.',
    );
  });

  it('has the unit of the outcome where the plan is at hand', () => {
    const { plan } = resultOfCase('bcg-latitude', 'restricted');
    const caution: Caution = {
      code: 'overturned',
      group: 'changes-answer',
      facts: facts.overturned as unknown as Detail,
    };
    const outcome = plan.roles.outcome as string;
    expect(cautionSentence(caution, { ...plan, units: { [outcome]: 'kg per plot' } })).toContain(
      'gives 0.10 kg per plot for income',
    );
    expect(cautionSentence(caution)).toContain('gives 0.10 for income, interval −0.20 to 0.40');
  });

  it('of an unknown code is a fault, not an empty sentence', () => {
    expect(() => cautionSentence({ code: 'no-such', group: 'for-record', facts: {} })).toThrow('no-such');
  });
});
