import {
  type Decimals,
  differenceOf,
  fromDoubles,
  fromPairs,
  logOf,
  pairAt,
  powerOf,
  productOf,
  quotientOf,
  reciprocalOf,
  rootOf,
  scaledBy,
  sumOf,
  takeRows,
} from '@core/numbers/decimals';
import { parseDecimal } from '@core/numbers/double-double';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { exactPair, type Fraction, times, within, written } from './exact';

fc.configureGlobal({ seed: 8 });

const text = fc
  .tuple(fc.integer({ min: 1, max: 999_999 }), fc.integer({ min: 0, max: 6 }), fc.boolean())
  .map(([digits, places, negative]) => `${negative ? '-' : ''}${digits}e-${places}`);

function column(...texts: readonly string[]): Decimals {
  return fromPairs(texts.map(parseDecimal));
}

describe('a column of decimals', () => {
  it('raised to a whole power keeps 98 bits of the exact power of the decimal', () => {
    fc.assert(
      fc.property(text, fc.integer({ min: 1, max: 10 }), (value, exponent) => {
        let exact: Fraction = { above: 1n, below: 1n };
        for (let n = 0; n < exponent; n++) exact = times(exact, written(value));
        expect(within(exactPair(pairAt(powerOf(column(value), exponent), 0)), exact, 98)).toBe(true);
      }),
    );
  });

  it('times its reciprocal is 1 to 30 digits', () => {
    fc.assert(
      fc.property(text, (value) => {
        const found = pairAt(productOf(column(value), reciprocalOf(column(value))), 0);
        expect(Math.abs(found[0] - 1 + found[1])).toBeLessThan(1e-30);
      }),
    );
  });

  it('adds, subtracts, divides and scales as decimals do', () => {
    const [a, b] = [column('0.1', '0.7'), column('0.2', '0.1')];
    const exact = (value: string) => pairAt(column(value), 0);
    expect(pairAt(sumOf(a, b), 0)[0]).toBe(0.3);
    expect(pairAt(sumOf(a, b), 0)[1]).toBeCloseTo(exact('0.3')[1], 32);
    expect(pairAt(differenceOf(a, b), 1)[0]).toBe(0.6);
    expect(pairAt(quotientOf(a, b), 1)[0]).toBe(7);
    expect(Math.abs(pairAt(quotientOf(a, b), 1)[1])).toBeLessThan(1e-30);
    expect(pairAt(scaledBy(a, 10), 0)[0]).toBe(1);
    expect(Math.abs(pairAt(scaledBy(a, 10), 0)[1])).toBeLessThan(1e-31);
    expect(pairAt(scaledBy(a, parseDecimal('0.1') ?? [0, 0]), 0)[0]).toBe(0.01);
  });

  it('has roots and logarithms to 30 digits (mpmath: root of 2, ln 2, ln 0.1)', () => {
    expect(pairAt(rootOf(column('2')), 0)).toEqual([Math.SQRT2, -9.667293313452912e-17]);
    expect(pairAt(powerOf(column('2'), 0.5), 0)).toEqual([Math.SQRT2, -9.667293313452912e-17]);
    const ln2 = pairAt(logOf(column('2')), 0);
    expect(ln2[0]).toBe(Math.LN2);
    expect(ln2[1]).toBeCloseTo(2.3190468138462996e-17, 31);
    const ln01 = parseDecimal('-2.3025850929940456840179914546844') ?? [0, 0];
    const found = pairAt(logOf(column('0.1')), 0);
    expect(found[0]).toBe(ln01[0]);
    expect(found[1]).toBeCloseTo(ln01[1], 30);
  });

  it('raised to a negative power is the reciprocal, to the power 0 is 1, to another power a double', () => {
    expect(pairAt(powerOf(column('4'), -2), 0)).toEqual([0.0625, 0]);
    expect(pairAt(powerOf(column('4'), 0), 0)).toEqual([1, 0]);
    expect(pairAt(powerOf(column('32'), 0.2), 0)).toEqual([2, 0]);
  });

  it('keeps what is missing missing', () => {
    const gap = fromPairs([null, [1, 0]]);
    const whole = fromDoubles([1, 1]);
    for (const found of [sumOf(gap, whole), productOf(whole, gap), powerOf(gap, 0), logOf(gap), scaledBy(gap, 0)]) {
      expect(pairAt(found, 0)).toEqual([Number.NaN, 0]);
      expect(found.high[1]).not.toBeNaN();
    }
  });

  it('leaves missing what cannot be formed', () => {
    const missing = [Number.NaN, 0];
    expect(pairAt(reciprocalOf(fromDoubles([0])), 0)).toEqual(missing);
    expect(pairAt(rootOf(fromDoubles([-1])), 0)).toEqual(missing);
    expect(pairAt(logOf(fromDoubles([0])), 0)).toEqual(missing);
    expect(pairAt(powerOf(fromDoubles([1e200]), 2), 0)).toEqual(missing);
    expect(pairAt(powerOf(fromDoubles([-8]), 1 / 3), 0)).toEqual(missing);
  });

  it('gives its rows in the order asked for', () => {
    expect([...takeRows(fromDoubles([5, 6, 7]), [2, 0]).high]).toEqual([7, 5]);
  });

  it('is never joined with a column of another length', () => {
    expect(() => sumOf(fromDoubles([1]), fromDoubles([1, 2]))).toThrow(RangeError);
  });
});
