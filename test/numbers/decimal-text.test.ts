import { parseDecimal } from '@core/numbers/double-double';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { exactly, exactPair, minus, within, written } from './exact';

fc.configureGlobal({ seed: 8 });

const digits = (most: number) =>
  fc.array(fc.integer({ min: 0, max: 9 }), { minLength: 1, maxLength: most }).map((list) => list.join(''));

const sign = fc.constantFrom('', '+', '-', '\u2212');
const plain = fc.record({ sign, whole: digits(20), fraction: digits(20) });

describe('a decimal number', () => {
  it('is read to the nearest double and the nearest double to the rest, at any length and size', () => {
    fc.assert(
      fc.property(plain, fc.integer({ min: -250, max: 250 }), ({ sign: mark, whole, fraction }, power) => {
        const text = `${mark}${whole}.${fraction}e${power}`;
        const found = parseDecimal(text);
        if (!found) throw new Error(`${text} was not read`);
        expect(found[0]).toBe(Number(text.replace('\u2212', '-')));
        if (Math.abs(found[0]) < 1e-270) return;
        const rest = minus(written(text), exactly(found[0]));
        if (rest.above !== 0n) expect(within(exactly(found[1]), rest, 53)).toBe(true);
        else expect(found[1]).toBe(0);
      }),
      { numRuns: 500 },
    );
  });

  it('of few digits, where a shorter way is taken, is read to 2^-106 too', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 999_999_999_999_999 }),
        fc.integer({ min: -22, max: 22 }),
        (whole, power) => {
          const text = `${whole}e${power}`;
          const found = parseDecimal(text) ?? [Number.NaN, 0];
          expect(found[0]).toBe(Number(text));
          expect(within(exactPair(found), written(text), 106)).toBe(true);
        },
      ),
      { numRuns: 500 },
    );
  });

  it('that a double holds exactly has no rest', () => {
    for (const text of ['0', '1', '-12.5', '1e22', '0.001953125', '123456789012345', '9007199254740993e0'])
      expect(parseDecimal(text)?.[1]).toBe(text === '9007199254740993e0' ? 1 : 0);
  });

  it('may carry any of the signs, digits on one side of the point only, and an exponent', () => {
    expect(parseDecimal('\u22121.5')).toEqual([-1.5, 0]);
    expect(parseDecimal('+.5')).toEqual([0.5, 0]);
    expect(parseDecimal('5.')).toEqual([5, 0]);
    expect(parseDecimal('2.5E+3')).toEqual([2500, 0]);
    expect(parseDecimal('25e\u22121')).toEqual([2.5, 0]);
    expect(parseDecimal('0.1')).toEqual([0.1, -5.551115123125783e-18]);
    expect(parseDecimal('-0.1')).toEqual([-0.1, 5.551115123125783e-18]);
  });

  it('is refused in any other form', () => {
    for (const text of [
      '',
      '.',
      '-',
      'e5',
      '1e',
      '1.2.3',
      ' 1',
      '1 ',
      '1,5',
      '0x10',
      'NaN',
      'Infinity',
      '١',
      '1_0',
      '--1',
    ])
      expect(parseDecimal(text)).toBeNull();
  });

  it('is refused beyond the range of a double, whatever the length of its exponent', () => {
    for (const text of ['1.8e308', '-1e309', '1e999999999999', `1${'0'.repeat(400)}`])
      expect(parseDecimal(text)).toBeNull();
    expect(parseDecimal('1.7976931348623157e308')?.[0]).toBe(1.7976931348623157e308);
  });

  it('below the range of a double is zero, near it subnormal', () => {
    expect(parseDecimal('1e-400')).toEqual([0, 0]);
    expect(parseDecimal('1e-99999999999')).toEqual([0, 0]);
    expect(parseDecimal('0e999999999')).toEqual([0, 0]);
    expect(parseDecimal('4e-320')?.[0]).toBe(4e-320);
  });
});
