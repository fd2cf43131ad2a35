import { dot, dotPair, lengthOf, mean, sum, sumOfSquares, sumPair } from '@core/numbers/sums';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { exactly, exactPair, type Fraction, plus, times, within } from './exact';

fc.configureGlobal({ seed: 8 });

const number = fc
  .tuple(fc.double({ min: -10, max: 10, noNaN: true }), fc.integer({ min: -15, max: 15 }))
  .map(([digits, power]) => digits * Number(`1e${power}`))
  .filter((value) => value === 0 || Math.abs(value) > 1e-100);

const list = fc.array(number, { maxLength: 40 });
const NONE: Fraction = { above: 0n, below: 1n };

function total(parts: readonly Fraction[]): Fraction {
  return parts.reduce(plus, NONE);
}

/** |found - truth| at most 2^-bits of the sum of sizes plus 2^-52 of the truth. */
function close(found: Fraction, parts: readonly Fraction[], bits: number): boolean {
  const truth = total(parts);
  const sizes = total(parts.map(({ above, below }) => ({ above: above < 0n ? -above : above, below })));
  const share = times(sizes, { above: 1n, below: 2n ** BigInt(bits) });
  const last = times(
    { above: truth.above < 0n ? -truth.above : truth.above, below: truth.below },
    { above: 1n, below: 2n ** 52n },
  );
  const off = plus(found, { above: -truth.above, below: truth.below });
  const bound = plus(share, last);
  return (off.above < 0n ? -off.above : off.above) * bound.below <= bound.above * off.below;
}

describe('a sum', () => {
  it('is the exact one rounded, but for a share of 2^-90 of the sizes added', () => {
    fc.assert(
      fc.property(list, (values) => {
        expect(close(exactly(sum(values)), values.map(exactly), 90)).toBe(true);
      }),
    );
  });

  it('of products is the exact one rounded, but for a share of 2^-90 of the sizes added', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(number, number), { maxLength: 40 }), (pairs) => {
        const parts = pairs.map(([a, b]) => times(exactly(a), exactly(b)));
        const [left, right] = [pairs.map(([a]) => a), pairs.map(([, b]) => b)];
        expect(close(exactly(dot(left, right)), parts, 90)).toBe(true);
      }),
    );
  });

  it('in double-double keeps 2^-98 of the sizes added', () => {
    fc.assert(
      fc.property(list, (values) => {
        const squares = values.map((value) => times(exactly(value), exactly(value)));
        expect(within(exactPair(dotPair(values, values)), total(squares), 98)).toBe(true);
        const sizes = values.map(Math.abs);
        expect(within(exactPair(sumPair(sizes)), total(sizes.map(exactly)), 98)).toBe(true);
      }),
    );
  });

  it('survives what cancels', () => {
    expect(sum([1e16, 1, -1e16])).toBe(1);
    expect(dot([1e8, 1, 1e8], [1e8, 1, -1e8])).toBe(1);
    expect(mean([1e16, 3, -1e16])).toBe(1);
    expect(sumPair([1, 1e-20])).toEqual([1, 1e-20]);
    expect(sumPair([1, 2], [1e-20, 1e-20])).toEqual([3, 2e-20]);
  });

  it('of nothing is 0, while nothing has no mean', () => {
    expect(sum([])).toBe(0);
    expect(dot([], [])).toBe(0);
    expect(() => mean([])).toThrow(RangeError);
  });

  it('of lists that differ in length is a bug', () => {
    expect(() => dot([1], [1, 2])).toThrow(RangeError);
    expect(() => dotPair([1], [])).toThrow(RangeError);
  });

  it('beyond the range of a double is infinite, never not a number', () => {
    expect(sum([1e308, 1e308])).toBe(Infinity);
    expect(sumOfSquares([1e200])).toBe(Infinity);
  });
});

describe('a length', () => {
  it('neither overflows nor underflows', () => {
    expect(lengthOf([3e200, 4e200])).toBeCloseTo(5e200, -186);
    expect(lengthOf([3e-200, 4e-200]) / 5e-200).toBeCloseTo(1, 14);
    expect(lengthOf([3e-310, 4e-310]) / 5e-310).toBeCloseTo(1, 12);
    expect(lengthOf([])).toBe(0);
    expect(lengthOf([3, 4])).toBe(5);
  });
});
