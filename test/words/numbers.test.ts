import {
  count,
  decimalsBy,
  estimateText,
  exact,
  interval,
  levelText,
  list,
  listSome,
  number,
  p,
  percent,
  pIs,
  plural,
} from '@core/words/numbers';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const narrow = '\u202f';

describe('numbers are printed', () => {
  it.each([
    [0, '0'],
    [1, '1.000'],
    [-1234.5678, '−1235'],
    [9999.4, '9999'],
    [12345.678, `12${narrow}346`],
    [-1234567, `−1${narrow}234${narrow}567`],
    [0.00012346, '0.0001235'],
    [0.00001234, '1.234 × 10⁻⁵'],
    [-2.5e-11, '−2.500 × 10⁻¹¹'],
    [1.5e21, '1.500 × 10²¹'],
    [0.99996, '1.000'],
    [9.99996, '10.00'],
  ])('%d to four significant digits as %s', (value, text) => {
    expect(number(value)).toBe(text);
  });

  it('to decimals that are asked for, with whole digits in groups of three from 10,000 up', () => {
    expect(number(12345.678, { decimals: 1 })).toBe(`12${narrow}345.7`);
    expect(number(1234.5, { decimals: 2 })).toBe('1234.50');
    expect(number(0.00001, { decimals: 2 })).toBe('0.00');
  });

  it('a zero after rounding without a sign', () => {
    expect(number(-0.001, { decimals: 2 })).toBe('0.00');
    expect(number(-0)).toBe('0');
  });

  it('an undefined quantity as a dash', () => {
    expect([number(null), p(null), percent(null), count(null), interval(null, null)]).toEqual(Array(5).fill('–'));
  });

  it('so that reading the text back differs by less than half a unit of its last digit', () => {
    const value = fc.double({ min: -1e14, max: 1e14, noNaN: true }).filter((x) => Math.abs(x) > 1e-4);
    fc.assert(
      fc.property(value, fc.integer({ min: 1, max: 10 }), (x, digits) => {
        const back = Number(number(x, { digits }).replaceAll(narrow, '').replace('−', '-'));
        expect(Math.abs(back - x)).toBeLessThanOrEqual(Math.abs(x) * 0.5001 * 10 ** (1 - digits));
      }),
      { seed: 8 },
    );
  });

  it('exactly where they are quoted', () => {
    expect([exact(0.9), exact(-9), exact(1e21), exact(5e-7), exact(12345.25)]).toEqual([
      '0.9',
      '−9',
      '1 × 10²¹',
      '5 × 10⁻⁷',
      `12${narrow}345.25`,
    ]);
  });
});

describe('p values are never 0.000 or 1.000 unless they are', () => {
  it.each([
    [0, '< 0.001'],
    [0.0009999, '< 0.001'],
    [0.001, '0.001'],
    [0.0496, '0.050'],
    [0.25, '0.250'],
    [0.99951, '> 0.999'],
    [1, '1.000'],
  ])('%d as %s', (value, text) => {
    expect(p(value)).toBe(text);
  });

  it('inside a sentence', () => {
    expect([pIs(0.25), pIs(1e-9)]).toEqual(['p = 0.250', 'p < 0.001']);
  });
});

describe('percentages', () => {
  it.each([
    [0.354, `35${narrow}%`],
    [0.0123, `1.2${narrow}%`],
    [0.08, `8.0${narrow}%`],
    [-0.11, `−11${narrow}%`],
    [1.9, `190${narrow}%`],
    [0, `0${narrow}%`],
    [1, `100${narrow}%`],
    [0.9999, `> 99${narrow}%`],
    [0.0001, `< 0.1${narrow}%`],
    [-0.0001, `> −0.1${narrow}%`],
  ])('%d as %s', (value, text) => {
    expect(percent(value)).toBe(text);
  });

  it('of a level as it was stated', () => {
    expect([0.95, 0.9, 0.995, 0.07].map(levelText)).toEqual(
      ['95', '90', '99.5', '7'].map((text) => `${text}${narrow}%`),
    );
  });
});

describe('an estimate and its interval have the same decimals', () => {
  it('those of two significant digits of the standard error', () => {
    expect([decimalsBy(0.0932), decimalsBy(12.3), decimalsBy(0.0996), decimalsBy(0.00000012)]).toEqual([3, 0, 2, 8]);
    expect(estimateText({ estimate: 0.8312, low: 0.4, high: 1.1804, se: 0.19 })).toBe('0.83 (0.40 to 1.18)');
    expect(estimateText({ estimate: -0.5, low: -1.234, high: 0.001, se: 0.31 })).toBe('−0.50 (−1.23 to 0.00)');
  });

  it('four significant digits where the error is undefined or zero, and no interval where there is none', () => {
    expect(estimateText({ estimate: 0.8312345, low: null, high: null, se: null })).toBe('0.8312');
    expect(estimateText({ estimate: 0, low: null, high: null, se: 0 })).toBe('0.00');
  });

  it('an end that is not there is a dash', () => {
    expect(interval(0.4, null, { decimals: 1 })).toBe('0.4 to –');
  });
});

describe('names strung together', () => {
  it('with commas and one word before the last', () => {
    expect([list([]), list(['a']), list(['a', 'b']), list(['a', 'b', 'c']), list(['a', 'b'], 'or')]).toEqual([
      '',
      'a',
      'a and b',
      'a, b and c',
      'a or b',
    ]);
  });

  it('a long list is cut, and says by how many', () => {
    expect(listSome(['a', 'b', 'c', 'd'], 2)).toBe('a, b and 2 more');
    expect(listSome(['a', 'b'], 2)).toBe('a and b');
  });

  it('things are counted in their number', () => {
    expect([plural(1, 'cell'), plural(0, 'cell'), plural(12345, 'entry', 'entries')]).toEqual([
      '1 cell',
      '0 cells',
      `12${narrow}345 entries`,
    ]);
  });
});
