import type { Inference, Plan, Question } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import { reportOf } from '@core/report/report-of';
import { inferenceSentences, wildTable } from '@core/words/inference';
import { answerSentence } from '@core/words/questions';
import { describe, expect, it } from 'vitest';
import { resultOfCase } from './results';
import { faultsOf, proseOf, tableOf, textsOf } from './walk';

const joint: Question = { kind: 'joint', terms: ['value', 'capital'], name: 'both', family: 'all' };
const combination: Question = {
  kind: 'combination',
  of: { value: 1, capital: -1 },
  equals: 0,
  name: 'apart',
  family: 'all',
};

function investment(inference: Inference, change: Partial<Plan> = {}): Result {
  return resultOfCase('investment-clustered', 'constant', {
    inference,
    questions: [joint, combination],
    beside: [],
    ...change,
  });
}

const clustered = (correction: 'CR0' | 'CR1' | 'CR2' | 'CR3', alsoBy: string[] | null = null): Inference => ({
  kind: 'clustered',
  level: 0.95,
  correction,
  by: ['firm'],
  alsoBy,
});
const wild = (replications: number): Inference => ({ kind: 'wild', level: 0.95, by: ['firm'], replications, seed: 7 });

const told = (result: Result): string => inferenceSentences(result).join(' ');
const report = (result: Result) => reportOf({ result, edition: null });

describe('the report of clustered errors', () => {
  it.each(['CR0', 'CR1', 'CR2', 'CR3'] as const)('has no hole and names the correction, %s', (correction) => {
    const result = investment(clustered(correction));
    const document = report(result);
    expect(faultsOf(document)).toEqual([]);
    expect(textsOf(document).join(' ')).toContain(`(${correction})`);
    expect(proseOf(document)).toContain('go together in any way');
    expect(told(result)).toContain(
      correction === 'CR2' ? 'Satterthwaite’s freedom' : 't on 10, one less than there are clusters',
    );
  });

  it('two ways says how the ways are joined, and on what the errors are referred', () => {
    const result = investment(clustered('CR1', ['year']));
    expect(told(result)).toContain('of the same firm, or of the same year, go together');
    expect(told(result)).toContain('less that of both at once, referred to t on 10');
    expect(faultsOf(report(result))).toEqual([]);
  });

  it('two ways with a variance below 0 gives the reason beside the table and as a caution', () => {
    const result = investment(clustered('CR0', ['year']));
    const coefficients = result.fit.coefficients.map((one, j) =>
      j === 1 ? { ...one, se: null, low: null, high: null, reference: null, ratio: null, p: null } : one,
    );
    const below: Result = { ...result, fit: { ...result.fit, coefficients } };
    expect(told(below)).toContain('For value that comes out below 0');
    expect(faultsOf(report(below))).toEqual([]);
  });

  it('joint questions under CR2 print the scaled F; on fewer than 4 degrees of freedom its p is withheld', () => {
    const result = investment(clustered('CR2'));
    const own = result.questions[0];
    if (!own) throw new Error('no question');
    expect(answerSentence(result, own)).toMatch(/F = .* on 2 and .*, scaled by 0\./);
    const few = answerSentence(result, { ...own, answer: { ...own.answer, freedom2: 3.2 } as typeof own.answer });
    expect(few).toContain('p withheld');
    expect(few).not.toMatch(/p [=<]/);
  });
});

describe('the report of a wild bootstrap', () => {
  it('prints every count with its p and the least p possible, and says what was drawn', () => {
    const result = investment(wild(9999));
    const document = report(result);
    expect(faultsOf(document)).toEqual([]);
    expect(told(result)).toContain('all 2048 vectors');
    expect(tableOf(document, /^The wild bootstrap/)).toHaveLength(3);
    expect(wildTable(result)?.rows[1]?.[2]?.value).toBe(10);
    expect(textsOf(document).join(' ')).toContain('by the bootstrap');
  });

  it('says how many vectors were drawn with which seed where they are not all', () => {
    expect(told(investment(wild(99)))).toContain('99 vectors drawn with seed 7');
  });
});

describe('the report of Kenward and Roger', () => {
  it('prints each freedom and the scaled F, without a hole', () => {
    const result = resultOfCase('library-cells-kenward-roger', 'between-per-size-restricted-kr', {
      questions: [{ kind: 'joint', terms: ['area'], name: null, family: null }],
    });
    expect(faultsOf(report(result))).toEqual([]);
    expect(told(result)).toContain('37.0 to 47.1');
    const [own] = result.questions;
    if (own) expect(answerSentence(result, own)).toMatch(/F = 42\.1 on 2 and 37\.2, scaled by 1\.000?/);
  });
});

describe('errors by the stated structure alone', () => {
  it('need no more words', () => {
    expect(told(investment({ kind: 'model', level: 0.95 }))).toBe('');
  });
});
