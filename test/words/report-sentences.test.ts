import type { Result } from '@core/protocol/result';
import { beamSentence } from '@core/words/beams';
import { coefficientLines } from '@core/words/coefficients';
import { modelEquation, varianceEquation } from '@core/words/equations';
import { chiSquareSentence } from '@core/words/goodness';
import { listWithin, numberWord, rangeText, sizeText, smallPercent } from '@core/words/numbers';
import { breakEvenSentence, priceSentence, reverseOf } from '@core/words/prices';
import { answerSentence } from '@core/words/questions';
import { readingSentences } from '@core/words/readings';
import { scanSentence } from '@core/words/scans';
import { independenceSentence, varianceSentence } from '@core/words/statement';
import { structureFromKinds, structureName } from '@core/words/structures';
import { answerFor, standingSentence } from '@core/words/summary';
import { typeset } from '@core/words/typeset';
import { stepOf } from '@core/words/units';
import { describe, expect, it } from 'vitest';
import { resultOfCase } from '../report/results';

const known = resultOfCase('physics-known-se', 'scale-fixed', { units: { y: 'microbarn', x: 'inverse GeV' } });
const free = resultOfCase('physics-known-se', 'scale-free');
const latitude = resultOfCase('bcg-latitude', 'restricted', { beside: ['constant', 'given'] });
const zero = resultOfCase('branches-tau-zero', 'restricted-kh');

const own = (result: Result, term: string) =>
  result.fit.coefficients.find((one) => one.term === term) as Result['fit']['coefficients'][number];

describe('sentences of the report', () => {
  it('read a coefficient: name, estimate in its unit, interval, then error, reference, ratio, p', () => {
    // Weisberg (PRACTICE A): slope 530.8354309336, error 28.7046548574 with the scale fixed, 47.5500302816 with it free
    expect(coefficientLines(known)[1]).toBe(
      'x: 531 microbarn, per one inverse GeV (95\u202f% interval 475 to 587); error 29, normal, ratio 18.5, p < 0.001',
    );
    expect(coefficientLines(free)[1]).toBe(
      'x: 531 per unit of x (95\u202f% interval 421 to 640); error 48, t on 8, ratio 11.2, p < 0.001',
    );
  });

  it('answer in units, with what one step of the column is', () => {
    expect(answerFor(known, own(known, 'x'))).toBe(
      'One more inverse GeV (x) goes with a difference of 531 microbarn (95\u202f% interval 475 to 587).',
    );
    expect(
      answerFor({ ...known, plan: { ...known.plan, units: { y: 'kg per plot', x: 'thousand' } } }, own(known, 'x')),
    ).toBe('One more thousand of x goes with a difference of 531 kg per plot (95\u202f% interval 475 to 587).');
  });

  it.each([
    [100, 'The smallest difference that matters was set at 100: the whole interval lies beyond it.'],
    [
      900,
      'The smallest difference that matters was set at 900: the interval holds no difference of that size, in either direction.',
    ],
    [
      500,
      'The interval excludes zero. The smallest difference that matters was set at 500: the interval reaches beyond it above, and holds smaller differences too.',
    ],
  ])('hold the interval against a smallest difference that matters of %i', (x, said) => {
    expect(standingSentence({ ...known, plan: { ...known.plan, matters: { x } } }, own(known, 'x'))).toBe(said);
  });

  it('state the variance as one sentence and one equation', () => {
    expect(varianceSentence(known)).toBe(
      'The error variance of each mean is the square of its supplied standard error.',
    );
    expect(varianceEquation(known).text).toBe('Var(u) = s²');
    // van Houwelingen, Arends & Stijnen 2002 (PRACTICE B): restricted tau^2 .07634796
    expect(varianceSentence(latitude)).toMatch(
      /^The error variance of each mean is the square of its supplied standard error, plus 0\.076 \(95\u202f% interval 0\.006 to 0\.443\) for what sets cells apart/,
    );
    expect(varianceEquation(latitude).text).toBe('Var(u) = τ² + s²,   τ² = 0.07635');
    expect(varianceSentence(zero)).toContain('plus 0 (at its boundary; up to 0.17 by the 95\u202f% interval)');
  });

  it('judge a fixed scale by the outside chi-square', () => {
    // PRACTICE A: chi-square 21.9526485212 on 8, p .0050043; root of 21.9526 / 8 = 1.6565
    expect(chiSquareSentence(known.fit)).toBe(
      'The stated variances are judged by the whitened residuals: chi-square 21.95 on 8, p = 0.005; the cells scatter more than the stated variances allow. Were their scale free, it would be 2.74 and every model-based error 1.66 times as large.',
    );
  });

  it('price a weighting by the outside efficiencies, in both directions', () => {
    // PRACTICE D: unweighted .744 of the precision, claimed over actual 1.45; 1/s^2 .620 and .485; best error .007195
    const term = own(
      latitude,
      latitude.plan.terms.length > 0 ? (latitude.fit.coefficients[1]?.term as string) : '',
    ).term;
    const said = latitude.beside.map((rival, i) =>
      priceSentence({
        rival,
        price: rival.price[1] as Result['beside'][number]['price'][number],
        ownSe: own(latitude, term).se as number,
        reverse: reverseOf(latitude.square, { rival: i + 1, term }),
      }),
    );
    // 1 / .744 - 1 = 34 %, .007195 / root .744 = .00834; 1 / .620 - 1 = 61 %, .007195 / root .620 = .00914
    expect(said[0]).toContain(
      'equal weights give latitude a standard error of 0.00834 instead of 0.00720, a variance 34\u202f% larger.',
    );
    expect(said[0]).toContain('Their usual formula reports 0.01211 on these data.');
    expect(said[1]).toContain(
      'weights by the given errors give latitude a standard error of 0.00914 instead of 0.00720, a variance 61\u202f% larger.',
    );
    expect(said[1]).toMatch(
      / If “given × φ” held instead, our weighting would have a variance \d+\u202f% larger than its own\.$/,
    );
  });

  it('say where weighting breaks even, and what the data suggest', () => {
    // PRACTICE 15: sizes 5, 10, 20, 50, 100, 400: share .02563
    const share = 0.02563;
    const of = (low: number, high: number) =>
      breakEvenSentence({ term: 'income', share, intraclass: { estimate: 0.08, low, high } });
    expect(of(0.01, 0.19)).toBe(
      'Equal weights and weights by size are equally precise for income when 2.6\u202f% of the variance of one person’s answer lies between cells. These data suggest 8.0\u202f% (1.0\u202f% to 19\u202f%), so they do not settle which of the two is. Weights from the right structure are at least as precise as either.',
    );
    expect(of(0.05, 0.19)).toContain('of the two, equal weights are the more precise');
    expect(of(0.001, 0.02)).toContain('of the two, weights by size are the more precise');
    expect(breakEvenSentence({ term: 'income', share: null, intraclass: null })).toContain('coincide');
  });

  it('never let a test that does not reject stand alone', () => {
    const quiet = latitude.evidence.filter(({ reading }) => reading === 'does-not-contradict');
    expect(quiet.length).toBeGreaterThan(2);
    for (const one of quiet) {
      const said = readingSentences(one, latitude, 'latitude');
      expect(said).toContain('does not contradict');
      expect(said).not.toMatch(/confirm|prove|accept/);
      if (one.smallestDeparture !== null)
        expect(said).toMatch(
          / With 13 cells it would have had an 80 % chance of noticing a departure only if .* at least /,
        );
    }
    for (const one of latitude.evidence.filter(({ reading }) => reading === 'not-applicable'))
      expect(readingSentences(one, latitude, null)).toMatch(/ says nothing here: .+\.$/);
  });

  it('say that independence was not tested where it was not', () => {
    expect(independenceSentence(known)).toBe('Cells are taken as independent; that was not tested.');
  });

  it('tell who carries a coefficient, and what is left without them', () => {
    const beam = latitude.beam[1] as Result['beam'][number];
    const said = beamSentence(beam, own(latitude, beam.term), latitude.plan);
    expect(said).toMatch(/^Three of 13 cells carry half the total pull on latitude: row 8, row 4 and row 6\./);
    expect(said).toMatch(/refitting without the three gives −0\.0260 \(−0\.0512 to −0\.0008\) instead of −0\.0291\.$/);
  });

  it('tell the supported exponents, and that an end is cut', () => {
    const support = {
      best: 0,
      low: 0,
      high: 0.61,
      edge: 'low' as const,
      ranges: [{ term: 'x', low: 500, high: 620, excludesZero: true }],
    };
    expect(scanSentence(support, known.fit.coefficients, ['x'])).toBe(
      'If error variance falls as size to the power d, the data support d from 0.00 to 0.61 (best 0.00), cut at 0. Over that range the coefficient of x runs from 500 to 620 and its interval excludes zero throughout. (An end of it is equal weights.)',
    );
  });

  it('answer a joint question by what is and is not rejected', () => {
    const question = { kind: 'joint' as const, terms: ['x'], name: null, family: null };
    const of = (p: number) =>
      answerSentence(known, {
        question,
        answer: { statistic: 342, scale: null, freedom1: 1, freedom2: null, p },
        pHolm: null,
      });
    expect(of(0.0001)).toBe('The data reject that all of them are zero (chi-square = 342 on 1, p < 0.001).');
    expect(of(0.3)).toBe('The data do not contradict that all of them are zero (chi-square = 342 on 1, p = 0.300).');
  });
});

describe('names', () => {
  const plan = {
    ...known.plan,
    intercept: true,
    terms: [{ column: 'age' }, { column: 'age', power: 2 }, { column: 'side', as: 'category' as const, baseline: 'N' }],
  };
  const with3: Result = { ...known, plan };

  it('of steps follow the kind of term, and are silent where a term cannot move alone', () => {
    expect(stepOf(known, 'intercept')).toEqual({ per: 'every column at 0 or at its baseline', more: null });
    expect(stepOf(with3, 'age')).toEqual({ per: 'per unit of age', more: null });
    expect(stepOf(with3, 'side: S')).toEqual({ per: 'S against N', more: 'side S against N' });
  });

  it('of structures are the same from the plan and from what the result calls them', () => {
    const power = { parts: [{ kind: 'size-power' as const, exponent: 0.5, correlation: null }], fixed: {} };
    expect(structureName(power)).toBe('size power 0.5');
    expect(structureFromKinds('size-power 0.5')).toBe('size power 0.5');
    expect(structureFromKinds('per-size + between')).toBe('per size + between');
    expect(structureName('given')).toBe(structureFromKinds('given'));
  });

  it('of many long terms do not make an equation of pages', () => {
    const terms = Array.from({ length: 61 }, (_, i) => (i === 0 ? 'intercept' : `${'long '.repeat(15)}${i}`));
    const { text } = modelEquation(known.plan, terms);
    expect(text.length).toBeLessThan(300);
    expect(text).toMatch(/ \+ \d+ more \+ u$/);
  });
});

describe('numbers in sentences', () => {
  it('keep ends of an interval apart from zero', () => {
    expect(rangeText(-0.05302, 0.00027, 3)).toBe('−0.0530 to 0.0003');
    expect(rangeText(0, 2.3456, 1)).toBe('0 to 2.3');
    expect(rangeText(null, null, 1)).toBe('–');
  });

  it('are whole for sizes, in words at the head, and never vanish as shares', () => {
    expect([8, 77.25, 11071].map(sizeText)).toEqual(['8', '77.25', '11\u202f071']);
    expect([0, 1, 12, 13].map(numberWord)).toEqual(['None', 'One', 'Twelve', '13']);
    expect([0.4, 0.0123, 0.0009].map(smallPercent)).toEqual(['40\u202f%', '1.2\u202f%', '0.090\u202f%']);
  });

  it('and names are cut by their length, one at least', () => {
    expect(listWithin(['aaaa', 'bbbb', 'cccc'], 8)).toBe('aaaa and 2 more');
    expect(listWithin(['a'.repeat(500)], 8)).toBe('a'.repeat(500));
  });

  it('are bound to their signs, so that no line parts them', () => {
    expect(typeset('t on 52, p < 0.001, F = 2.5 on 2')).toBe(
      't\u00a0on\u00a052, p\u00a0<\u00a00.001, F\u00a0=\u00a02.5 on\u00a02',
    );
    expect(typeset('Oxlith · 2024 and year = 2025')).toBe('Oxlith\u00a0·\u00a02024 and year\u00a0=\u00a02025');
  });
});
