import { median, quantile, ranks, sorted, sortedIndices } from '@core/numbers/order';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

fc.configureGlobal({ seed: 8 });

const values = fc.array(fc.integer({ min: -5, max: 5 }), { minLength: 1, maxLength: 30 });

describe('order', () => {
  it('is rising, keeps equal values in their order, and names every position once', () => {
    fc.assert(
      fc.property(values, (list) => {
        const order = sortedIndices(list);
        expect([...order].sort((a, b) => a - b)).toEqual([...list.keys()]);
        for (let place = 1; place < order.length; place++) {
          const [before, after] = [order[place - 1] as number, order[place] as number];
          const [low, high] = [list[before] as number, list[after] as number];
          expect(low < high || (low === high && before < after)).toBe(true);
        }
      }),
    );
  });

  it('puts what is not a number last', () => {
    expect(sortedIndices([Number.NaN, 2, Number.NaN, 1])).toEqual([3, 1, 0, 2]);
    expect([...sorted([Number.NaN, 2, 1])]).toEqual([1, 2, Number.NaN]);
  });

  it('leaves the list that it was given alone', () => {
    const list = [3, 1, 2];
    sorted(list);
    median(list);
    expect(list).toEqual([3, 1, 2]);
  });
});

describe('ranks', () => {
  it('count those below and half of the equals, and sum to G (G + 1) / 2', () => {
    fc.assert(
      fc.property(values, (list) => {
        const found = ranks(list);
        for (const [g, value] of list.entries()) {
          const below = list.filter((other) => other < value).length;
          const equal = list.filter((other) => other === value).length;
          expect(found[g]).toBe(below + (equal + 1) / 2);
        }
        expect(found.reduce((a, b) => a + b, 0)).toBe((list.length * (list.length + 1)) / 2);
      }),
    );
  });
});

describe('a quantile', () => {
  it('is linear between the order statistics (Hyndman & Fan 1996, definition 7)', () => {
    expect(quantile([1, 2, 3, 4], 0.25)).toBe(1.75);
    expect(quantile([10, 20, 40], 0.75)).toBe(30);
    expect(quantile([7], 0.3)).toBe(7);
    expect(quantile([1, 5], 0)).toBe(1);
    expect(quantile([1, 5], 1)).toBe(5);
  });

  it('at a half is the median', () => {
    fc.assert(
      fc.property(values, (list) => {
        expect(quantile(sorted(list), 0.5)).toBe(median(list));
      }),
    );
  });

  it('of nothing, or of a share that is none, is a bug', () => {
    expect(() => quantile([], 0.5)).toThrow(RangeError);
    expect(() => quantile([1], 1.1)).toThrow(RangeError);
    expect(() => median([])).toThrow(RangeError);
  });

  it('of the largest doubles does not overflow', () => {
    expect(median([1.7e308, 1.7e308])).toBe(1.7e308);
  });
});
