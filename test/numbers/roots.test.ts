import { bracketUp, findRoot, maximise1d } from '@core/numbers/roots';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

fc.configureGlobal({ seed: 8 });

describe('a root', () => {
  it('is found to the tolerance, wherever it lies and whichever end comes first', () => {
    fc.assert(
      fc.property(fc.double({ min: -50, max: 50, noNaN: true }), fc.boolean(), (at, turned) => {
        const of = (x: number) => Math.atan(x - at) + (x - at) ** 3 / 1000;
        const ends = turned ? { low: 60, high: -60 } : { low: -60, high: 60 };
        const found = findRoot({ of, ...ends, tolerance: 1e-12 });
        expect(Math.abs((found ?? Infinity) - at)).toBeLessThan(1e-12 + 1e-14 * Math.abs(at));
      }),
    );
  });

  it('is found where the function is flat, steep or of odd order', () => {
    for (const [of, at] of [
      [(x: number) => (x - 0.3) ** 9, 0.3],
      [(x: number) => Math.exp(50 * x) - 1, 0],
      [(x: number) => (x < 0.7 ? -1 : 1), 0.7],
      [(x: number) => x ** 3, 0],
    ] as const)
      expect(Math.abs((findRoot({ of, low: -1, high: 2, tolerance: 1e-9 }) ?? Infinity) - at)).toBeLessThan(1e-9);
  });

  it('is taken in few steps: at most 100 for any of them, 12 for a plain one', () => {
    const counted = (of: (x: number) => number) => {
      let count = 0;
      findRoot({ of: (x) => (count++, of(x)), low: -1, high: 2, tolerance: 1e-12 });
      return count;
    };
    expect(counted((x) => x * x * x - 2 * x - 0.5)).toBeLessThanOrEqual(14);
    expect(counted((x) => (x - 0.3) ** 9)).toBeLessThan(200);
    expect(counted((x) => (x < 0.7 ? -1 : 1))).toBeLessThan(100);
  });

  it('at an end is that end; without a change of sign, or with values that are none, there is none', () => {
    expect(findRoot({ of: (x) => x, low: 0, high: 1, tolerance: 1e-9 })).toBe(0);
    expect(findRoot({ of: (x) => x - 1, low: 0, high: 1, tolerance: 1e-9 })).toBe(1);
    expect(findRoot({ of: (x) => x * x + 1, low: -1, high: 1, tolerance: 1e-9 })).toBeNull();
    expect(findRoot({ of: () => Number.NaN, low: -1, high: 1, tolerance: 1e-9 })).toBeNull();
  });
});

describe('a bracket', () => {
  it('widens upwards until the sign changes', () => {
    expect(bracketUp({ of: (x) => x - 10, from: 0, first: 1, limit: 100 })).toEqual({ low: 7, high: 15 });
    expect(bracketUp({ of: (x) => 10 - x, from: 0, first: 1, limit: 12 })).toEqual({ low: 7, high: 12 });
    expect(bracketUp({ of: (x) => x, from: 0, first: 1, limit: 12 })).toEqual({ low: 0, high: 0 });
  });

  it('ends at the limit', () => {
    expect(bracketUp({ of: (x) => x - 1000, from: 0, first: 1, limit: 100 })).toBeNull();
  });
});

describe('the highest point', () => {
  it('is found inside', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.01, max: 9.9, noNaN: true }), (top) => {
        const { at, value } = maximise1d({ of: (x) => -((x - top) ** 2) - Math.abs(x - top) ** 3, low: 0, high: 10 });
        expect(Math.abs(at - top)).toBeLessThan(1e-7);
        expect(value).toBeGreaterThan(-1e-14);
      }),
    );
  });

  it('may be an end', () => {
    expect(maximise1d({ of: (x) => x, low: 0, high: 3 })).toEqual({ at: 3, value: 3 });
    expect(maximise1d({ of: (x) => -x, low: 0, high: 3 }).at).toBe(0);
  });

  it('is found beside stretches without a value', () => {
    const of = (x: number) => (x < 1 ? Number.NaN : -((x - 2) ** 2));
    expect(maximise1d({ of, low: 0, high: 5 }).at).toBeCloseTo(2, 6);
  });
});
