import type { Bound, Coefficient, Result } from '@core/protocol/result';
import { boundSentence, boundsLead, boundsText, vertexNote } from '@core/words/bounds';
import { drawsSentence, takesSentences, togetherSentence } from '@core/words/takes';
import { describe, expect, it } from 'vitest';
import { planWith } from '../table/support';

const plan = planWith({ units: { y: 'kg' } });
const own: Coefficient = {
  term: 'x',
  estimate: 0.83,
  low: 0.4,
  high: 1.26,
  se: 0.21,
  reference: { kind: 't', freedom: 58 },
  ratio: 3.95,
  p: 0.0002,
};
const over = { cells: 7, brought: 2, outside: 1, vertices: 128, all: true };
const bound: Bound = {
  term: 'x',
  low: 0.41,
  high: 1.12,
  weightsHeld: false,
  refitted: null,
  survives: { sign: true, significance: false },
  over,
};
const result = (parts: Partial<Result>) =>
  ({
    plan,
    data: { used: 60 },
    fit: { coefficients: [own], inference: { kind: 'model', level: 0.95 } },
    bounds: [bound],
    ...parts,
  }) as Result;

describe('sentences of bounds', () => {
  it('say what is uncertain, how the range was had, and what survives', () => {
    expect(boundsLead(result({}))).toBe(
      'Seven cells have values known to within limits only; the fit leaves 2 of them out for that, and they are taken in here. One further cell lacks something else as well, and cannot come in. The weights do not depend on y, so that each coefficient is linear in it and its range exact.',
    );
    expect(boundSentence(bound, own, result({}))).toBe(
      'Over all that they can be, x lies between 0.41 and 1.12 kg. The sign survives; that it is told from zero does not.',
    );
    expect(vertexNote(result({}))).toContain('each of 128 combinations');
  });

  it('name an open end, and refits where weights are held', () => {
    expect([boundsText(null, 2, 1), boundsText(1, null, 1), boundsText(null, null, 1)]).toEqual([
      '2.0 or less',
      '1.0 or more',
      'without bounds',
    ]);
    const held: Bound = {
      ...bound,
      high: null,
      weightsHeld: true,
      refitted: { low: 0.44, high: null },
      survives: { sign: true, significance: false },
    };
    expect(boundSentence(held, own, result({}))).toContain(
      'x is 0.41 kg or more; fitted again at the extremes, 0.44 or more.',
    );
    expect(vertexNote(result({ bounds: [held] }))).toContain('open where it pulls');
  });
});

describe('sentences of what it would take', () => {
  it('name cells and persons, and say where persons cannot help', () => {
    const takes = {
      term: 'x',
      samplingShare: 0.98,
      floor: 0.03,
      halfWidth: { se: 0.1, cells: 236, persons: 4.26 },
      matters: { se: 0.03, cells: 700, persons: null, difference: 0.1 },
    };
    expect(takesSentences(takes, result({}))).toBe(
      'An interval half as wide for x takes 236 cells like these 60, or 4.3 times the persons in each: sampling is 98\u202f% of its error variance. However many persons a cell has, its standard error stays above 0.030. To find a difference of 0.100 kg with 80 % chance takes 700 cells like these 60; more persons in each cannot do it.',
    );
    expect(
      takesSentences({ term: 'x', samplingShare: null, floor: null, halfWidth: null, matters: null }, result({})),
    ).toContain('no standard error');
  });

  it('tell errors under a common correlation, and draws with their floor', () => {
    const rows = [0, 0.5].map((rho) => ({ rho, term: 'x', se: rho === 0 ? 0.21 : 0.16 }));
    expect(togetherSentence(rows, 'x')).toContain('would fall from 0.210 to 0.160');
    expect(togetherSentence([], 'x')).toBeNull();
    const drawn = {
      zero: ['tau2'],
      likelihood: 'restricted',
      statistic: 21,
      replications: 999,
      seed: 1,
      count: 0,
      p: 0.001,
      floor: 0.001,
    } as const;
    expect(drawsSentence({ ...drawn, zero: ['tau2'] })).toContain(
      'none had a likelihood ratio as large as 21.0: p = 0.001, the smallest p value that so many draws can give (0.001)',
    );
    expect(drawsSentence({ ...drawn, zero: ['tau2'], statistic: 0, p: 1 })).toContain(
      'at its boundary in the fit itself',
    );
  });
});
