import type { Inference } from '@core/protocol/plan';
import type { Evidence, Result } from '@core/protocol/result';
import { reportOf } from '@core/report/report-of';
import { changePhrase } from '@core/words/changes';
import { varianceEquation } from '@core/words/equations';
import { covarianceEquation } from '@core/words/linked-cells';
import { batterySentence, foundText, readingSentences } from '@core/words/readings';
import { independenceSentence } from '@core/words/statement';
import { parameterMeaning } from '@core/words/structures';
import { standingSentence } from '@core/words/summary';
import { testAccount } from '@core/words/test-accounts';
import { describe, expect, it } from 'vitest';
import { resultOfCase } from '../report/results';
import { faultsOf, proseOf } from '../report/walk';

const branches = resultOfCase('branch-panel-kenward-roger', 'kenward-roger', { beside: [] });
const libraries = resultOfCase('library-log-linear', 'log-linear-full', { beside: [] });
const firms = (inference: Inference): Result =>
  resultOfCase('investment-wild', 'constant-wild', { inference, beside: [], questions: [] });

const evidenceOf = ({ evidence }: Result, test: Evidence['test']): Evidence =>
  evidence.find((one) => one.test === test) as Evidence;

describe('words for cells that go together', () => {
  it('write the covariance of two cells as one sum of whole signs', () => {
    expect(covarianceEquation(branches)?.text).toBe('Cov(u_g, u_h) = ω² [same branch]');
    const parts = [{ kind: 'matrix', file: 'v.csv', scale: 'fixed', freedom: null }] as const;
    const plan = { ...branches.plan, variance: { parts: [...parts], fixed: {} } };
    expect(covarianceEquation({ plan })?.text).toBe('Cov(u_g, u_h) = S_gh');
  });

  it('do not call dependence untested where the structure states it', () => {
    const prose = proseOf(reportOf({ result: branches, edition: null }));
    expect(prose).toContain('whether cells go together in other ways than the structure states');
    expect(prose).not.toContain('whether cells move together');
  });

  it('name in the appendix what each likelihood ratio sets to 0', () => {
    const one = evidenceOf(branches, 'boundary-likelihood-ratio');
    expect(testAccount(one)).toBe('Is ω² (branch) above zero? By restricted likelihood.');
    const both = { ...one, detail: { ...one.detail, zero: ['tau2', 'omega2: branch'] } };
    expect(testAccount(both)).toContain('Is any of τ² and ω² (branch) above zero?');
  });

  it('count a single test that can contradict in whole sentences', () => {
    const only = evidenceOf(libraries, 'koenker');
    expect(batterySentence([only], libraries)).toBe(
      'One of 1 tests has a say under this structure. It could contradict it, or what it assumes, and does not; read at the 5 % level, it would do so by chance one time in twenty.',
    );
  });
});

describe('words for a log-linear variance', () => {
  it('write one gamma a column, a category’s level by level', () => {
    expect(varianceEquation(libraries).text).toContain(
      'exp(γ₀ + γ₁\u00a0log(n) + γ₂\u00a0area: hill + γ₃\u00a0area: town)',
    );
    expect(parameterMeaning('gamma: area: hill', libraries.plan.variance)).toBe('log-linear coefficient of area: hill');
  });

  it('say that a score on log size is nought by construction where its slope is estimated, and print rounding as 0', () => {
    const score = evidenceOf(libraries, 'size-score-studentised');
    expect(Math.abs(score.statistic ?? 1)).toBeLessThan(1e-12);
    expect(foundText(score)).toMatch(/^chi-square 0 on 1/);
    expect(readingSentences(score, libraries, 'income')).toContain('it is no evidence');
  });
});

describe('words for errors summed by groups', () => {
  const by: Inference = { kind: 'clustered', level: 0.95, correction: 'CR1', by: ['firm'], alsoBy: ['year'] };
  const wild: Inference = { kind: 'wild', level: 0.95, by: ['firm'], replications: 199, seed: 1 };

  it('say that the weights, and not the errors, take cells as independent', () => {
    const said = independenceSentence(firms(by));
    expect(said).toMatch(/^The weights take cells as independent/);
    expect(said).toMatch(
      /The errors do not: they let those of the same firm, or of the same year, go together in any way\.$/,
    );
  });

  it('do not call an error undefined because the bootstrap gives no interval', () => {
    const result = firms(wild);
    const value = result.fit.coefficients.find(({ term }) => term === 'value');
    expect(value && standingSentence(result, value)).toBe(
      'It has no interval: the wild bootstrap tells p values alone.',
    );
    expect(faultsOf(reportOf({ result, edition: null }))).toEqual([]);
  });
});

describe('words for values known to within limits', () => {
  it('speak of the column in the singular', () => {
    expect(changePhrase({ kind: 'bound', what: 'y' }, branches.plan)).toBe('y at its most extreme admissible values');
  });
});
