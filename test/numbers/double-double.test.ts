import {
  add,
  divide,
  fromNumber,
  multiply,
  negate,
  type Pair,
  squareRoot,
  subtract,
  toNumber,
  twoProduct,
  twoSum,
} from '@core/numbers/double-double';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { exactly, exactPair, over, plus, same, times, within } from './exact';

fc.configureGlobal({ seed: 8 });

/** Doubles of any size between 1e-120 and 1e120, of either sign. */
const number = fc
  .tuple(fc.double({ min: 1, max: 10, noNaN: true }), fc.integer({ min: -120, max: 120 }), fc.boolean())
  .map(([digits, power, negative]) => (negative ? -digits : digits) * Number(`1e${power}`));

/** Pairs whose halves do not overlap. */
const pair = fc
  .tuple(number, fc.double({ min: -0.5, max: 0.5, noNaN: true }))
  .map(([high, share]): Pair => twoSum(high, high * share * 2 ** -53));

describe('twoSum and twoProduct', () => {
  it('lose nothing', () => {
    fc.assert(
      fc.property(number, number, (a, b) => {
        expect(same(exactPair(twoSum(a, b)), plus(exactly(a), exactly(b)))).toBe(true);
        expect(same(exactPair(twoProduct(a, b)), times(exactly(a), exactly(b)))).toBe(true);
      }),
    );
  });

  it('lose nothing at the top of the range of doubles', () => {
    for (const [a, b] of [
      [1.7976931348623157e308, 0.999999],
      [1.3e308, 1 / 3],
      [1e-5, 1.7e308],
      [1.1e154, 1.2e154],
    ] as const)
      expect(same(exactPair(twoProduct(a, b)), times(exactly(a), exactly(b)))).toBe(true);
  });

  it('have no rest where the result is beyond the range', () => {
    expect(twoProduct(1e200, 1e200)).toEqual([Infinity, 0]);
    expect(multiply([1e200, 1e180], [1e200, 0])).toEqual([Infinity, 0]);
    expect(add([1.7e308, 0], [1.7e308, 0])).toEqual([Infinity, 0]);
  });
});

describe('double-double arithmetic', () => {
  it('adds and subtracts to 2^-104 of the result, also where nearly everything cancels', () => {
    fc.assert(
      fc.property(pair, pair, fc.boolean(), (a, b, close) => {
        const other: Pair = close ? [a[0] * (1 + 2 ** -50), b[0] === 0 ? 0 : a[1] / 3] : b;
        const second = twoSum(other[0], other[1]);
        expect(within(exactPair(add(a, second)), plus(exactPair(a), exactPair(second)), 104)).toBe(true);
        const less = plus(exactPair(a), exactPair(negate(second)));
        expect(within(exactPair(subtract(a, second)), less, 104)).toBe(true);
      }),
    );
  });

  it('multiplies to 2^-102 of the result', () => {
    fc.assert(
      fc.property(pair, pair, (a, b) => {
        expect(within(exactPair(multiply(a, b)), times(exactPair(a), exactPair(b)), 102)).toBe(true);
      }),
    );
  });

  it('divides to 2^-102 of the result', () => {
    fc.assert(
      fc.property(pair, pair, (a, b) => {
        expect(within(exactPair(divide(a, b)), over(exactPair(a), exactPair(b)), 102)).toBe(true);
      }),
    );
  });

  it('takes roots whose square is the number to 2^-101', () => {
    fc.assert(
      fc.property(pair, (a) => {
        const positive = a[0] < 0 ? negate(a) : a;
        const root = exactPair(squareRoot(positive));
        expect(within(times(root, root), exactPair(positive), 101)).toBe(true);
      }),
    );
  });

  it('keeps the high half the nearest double of the whole', () => {
    fc.assert(
      fc.property(pair, pair, (a, b) => {
        for (const found of [add(a, b), multiply(a, b), divide(a, b)]) expect(toNumber(found)).toBe(found[0]);
      }),
    );
  });

  it('says of zero, of infinity and of roots below zero what doubles say', () => {
    expect(divide(fromNumber(1), fromNumber(0))).toEqual([Infinity, 0]);
    expect(divide(fromNumber(0), fromNumber(5))).toEqual([0, 0]);
    expect(divide(fromNumber(1), fromNumber(Infinity))).toEqual([0, 0]);
    expect(squareRoot(fromNumber(0))).toEqual([0, 0]);
    expect(squareRoot(fromNumber(-1))[0]).toBeNaN();
  });

  it('gives a third and the root of two to 31 digits', () => {
    expect(divide(fromNumber(1), fromNumber(3))).toEqual([0.3333333333333333, 1.850371707708594e-17]);
    expect(squareRoot(fromNumber(2))).toEqual([Math.SQRT2, -9.667293313452912e-17]);
  });
});
