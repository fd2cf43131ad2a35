import { declarationsFor, withoutMarks } from '@core/table/declarations';
import { intervalEnds } from '@core/table/interval';
import { groupMarks, plainNumberIn, readNumber } from '@core/table/number-text';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const point = { decimal: '.', group: null } as const;
const german = { decimal: ',', group: '.' } as const;

describe('a number', () => {
  it.each<[string, number]>([
    ['12', 12],
    ['+12.5', 12.5],
    ['-.5', -0.5],
    ['\u22123.', -3],
    [' \u00a012.5\t', 12.5],
    ['1e3', 1000],
    ['1.5E-2', 0.015],
    ['2e\u22123', 0.002],
    ['007', 7],
  ])('%j is read with a decimal point', (text, value) => {
    expect(readNumber(text, point)?.[0]).toBe(value);
  });

  it.each([
    '',
    ' ',
    '.',
    '-',
    '1.2.3',
    '1,2',
    '1e',
    'e5',
    '0x10',
    'NaN',
    'Infinity',
    '12 %',
    '(12)',
    '€12',
    '1e999',
    '1_000',
    '\u0661',
    '1\u200b2',
    '\ufeff12',
    '- 5',
    '--5',
  ])('%j is none', (text) => {
    expect(readNumber(text, point)).toBeNull();
  });

  it.each<[string, number | null]>([
    ['1.204,5', 1204.5],
    ['1.204.310', 1204310],
    ['999', 999],
    ['1204,5', 1204.5],
    ['1.2045', null],
    ['12.04', null],
    ['1204.310', null],
    ['0.204', null],
    ['1,204.5', null],
    ['.204', null],
  ])('%j in groups of exactly three by points is %j', (text, value) => {
    expect(readNumber(text, german)?.[0] ?? null).toBe(value);
  });

  it('keeps more digits than a double holds', () => {
    const [high, low] = readNumber('0.1', point) ?? [0, 0];
    expect(high).toBe(0.1);
    // 0.1 less the double nearest to it
    expect(low).toBe(-5.551115123125783e-18);
  });

  it('written with any marks reads as the same number without them', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: -(10 ** 12), max: 10 ** 12 }),
        fc.integer({ min: 0, max: 999 }),
        fc.constantFrom<'.' | ','>('.', ','),
        fc.constantFrom(...groupMarks),
        (whole, fraction, decimal, group) => {
          fc.pre(group !== decimal);
          const digits = String(Math.abs(whole));
          const grouped = digits.replace(/\B(?=(\d{3})+$)/g, group);
          const sign = whole < 0 ? '-' : '';
          expect(plainNumberIn({ decimal, group })(`${sign}${grouped}${decimal}${fraction}`)).toBe(
            `${sign}${digits}.${fraction}`,
          );
        },
      ),
    );
  });
});

describe('marks', () => {
  const declared = declarationsFor('y', {
    encoding: null,
    delimiter: null,
    decimal: null,
    group: null,
    statuses: { p: 'provisional', c: 'suppressed-confidential', '-': 'true-zero' },
    missing: {},
    footnotes: ['*', '**', '%', '(', ')', '1'],
  });
  const bare = (text: string) => withoutMarks(text, declared, (rest) => plainNumberIn(point)(rest) !== null);

  it.each([
    ['12.5*', '12.5', null],
    ['12.5 **', '12.5', null],
    ['* 12.5 %', '12.5', null],
    ['(12.5)', '12.5', null],
    ['12.5 p*', '12.5', 'provisional'],
    ['12.5p', '12.5', 'provisional'],
    ['12.5 1', '12.5', null],
    ['121', '121', null],
    ['-5', '-5', null],
  ])('%j is the number %j with the status %j', (text, number, status) => {
    expect(bare(text)).toEqual({ text: number, status });
  });

  it.each(['*', '**', 'p', 'abc*', '', '12..5*', 'c 12.5'])('%j is no number', (text) => {
    expect(bare(text)).toBeNull();
  });

  it('of any length end', () => {
    expect(bare('*'.repeat(20_000))).toBeNull();
  });
});

describe('an interval', () => {
  const read = (text: string) => readNumber(text, point);
  it.each<[string, readonly [number | null, number | null]]>([
    ['<5', [null, 5]],
    ['\u2264 5', [null, 5]],
    ['>=100', [100, null]],
    ['1-9', [1, 9]],
    ['1\u20139', [1, 9]],
    ['-3 to -1', [-3, -1]],
    ['0.5..1.5', [0.5, 1.5]],
    ['[low]', [null, null]],
  ])('%j has the ends %j', (text, ends) => {
    expect(intervalEnds(text, read)).toEqual(ends);
  });
});
