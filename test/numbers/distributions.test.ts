import {
  chiSquareLower,
  chiSquareQuantile,
  chiSquareUpper,
  chiSquareUpperQuantile,
  fLower,
  fQuantile,
  fUpper,
  fUpperQuantile,
  normalDensity,
  normalLower,
  normalQuantile,
  normalTwoSided,
  normalUpper,
  normalUpperQuantile,
  tLower,
  tQuantile,
  tTwoSided,
  tUpper,
  tUpperQuantile,
} from '@core/numbers/distributions';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

fc.configureGlobal({ seed: 8 });

/** Freedom from a half to a million, whole or not. */
const freedom = fc.oneof(
  fc.double({ min: 0.5, max: 10, noNaN: true }),
  fc.integer({ min: 1, max: 200 }),
  fc.double({ min: 100, max: 1e6, noNaN: true }),
);

/** Probabilities from 1e-300 up. */
const probability = fc.oneof(
  fc.double({ min: 0.001, max: 0.999, noNaN: true }),
  fc
    .tuple(fc.double({ min: 1, max: 9.9, noNaN: true }), fc.integer({ min: 2, max: 300 }))
    .map(([digits, power]) => digits * Number(`1e-${power}`)),
);

/**
 * The tail at a point is what was asked for, as far as rounding of the point allows: it moves the tail by half a unit in the last
 * place times the slope of the tail's logarithm on the point's, found here by a small step.
 */
function expectTail(tail: (x: number) => number, at: number, asked: number): void {
  const found = tail(at);
  const slope = Math.abs(Math.log(tail(at * (1 + 1e-7)) / found)) / 1e-7;
  expect(Math.abs(found / asked - 1)).toBeLessThan(1e-14 + 3e-16 * slope);
}

describe('a quantile is the point whose tail was asked for', () => {
  it('of the normal distribution', () => {
    fc.assert(
      fc.property(probability, (p) => {
        expectTail(normalUpper, normalUpperQuantile(p), p);
        expectTail(normalLower, normalQuantile(p), p);
      }),
    );
  });

  it("of Student's distribution", () => {
    fc.assert(
      fc.property(probability, freedom, (p, f) => {
        const point = tUpperQuantile(p, f);
        if (Math.abs(point) < 1e300) expectTail((x) => tUpper(x, f), point, p);
        expect(tQuantile(p, f)).toBe(-point);
      }),
    );
  });

  it('of the chi-square distribution, from either side', () => {
    fc.assert(
      fc.property(probability, freedom, (p, f) => {
        expectTail((x) => chiSquareUpper(x, f), chiSquareUpperQuantile(p, f), p);
        const low = chiSquareQuantile(p, f);
        if (low > 1e-300) expectTail((x) => chiSquareLower(x, f), low, p);
      }),
    );
  });

  it("of Fisher's distribution, from either side", () => {
    fc.assert(
      fc.property(probability, freedom, freedom, (p, f1, f2) => {
        const high = fUpperQuantile(p, f1, f2);
        if (high < 1e300) expectTail((x) => fUpper(x, f1, f2), high, p);
        const low = fQuantile(p, f1, f2);
        if (low > 1e-300) expectTail((x) => fLower(x, f1, f2), low, p);
      }),
    );
  });

  it('rises with the probability', () => {
    fc.assert(
      fc.property(probability, probability, freedom, (p, q, f) => {
        const [less, more] = p < q ? [p, q] : [q, p];
        if (more / less < 1 + 1e-12) return;
        expect(normalQuantile(less)).toBeLessThan(normalQuantile(more));
        expect(tQuantile(less, f)).toBeLessThan(tQuantile(more, f));
        expect(chiSquareQuantile(less, f)).toBeLessThanOrEqual(chiSquareQuantile(more, f));
        expect(chiSquareUpperQuantile(more, f)).toBeLessThan(chiSquareUpperQuantile(less, f));
      }),
    );
  });

  it('keeps its digits beside a half, where it is close to 0', () => {
    const step = 2 ** -40;
    expect(normalQuantile(0.5)).toBeCloseTo(0, 300);
    expect(tQuantile(0.5, 3)).toBe(0);
    expect(normalUpperQuantile(0.5 - step) / (step / normalDensity(0))).toBeCloseTo(1, 14);
    // Density of Student's distribution on 2 at 0: root of 2 over 4.
    expect(tUpperQuantile(0.5 - step, 2) / ((4 * step) / Math.SQRT2)).toBeCloseTo(1, 14);
  });
});

describe('tails', () => {
  const point = fc.double({ min: 0, max: 60, noNaN: true });

  it('above and below sum to 1', () => {
    fc.assert(
      fc.property(point, freedom, freedom, (x, f1, f2) => {
        expect(normalUpper(x) + normalLower(x)).toBeCloseTo(1, 15);
        expect(tUpper(x, f1) + tLower(x, f1)).toBeCloseTo(1, 15);
        expect(chiSquareUpper(x, f1) + chiSquareLower(x, f1)).toBeCloseTo(1, 15);
        expect(fUpper(x, f1, f2) + fLower(x, f1, f2)).toBeCloseTo(1, 15);
      }),
    );
  });

  it('are those of the squared or turned statistic', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.01, max: 30, noNaN: true }), freedom, freedom, (x, f1, f2) => {
        const close = (a: number, b: number) => {
          if (b > 1e-290) expect(Math.abs(a / b - 1)).toBeLessThan(1e-12);
          else expect(a).toBeLessThan(1e-289);
        };
        close(tTwoSided(x, f1), fUpper(x * x, 1, f1));
        close(normalTwoSided(x), chiSquareUpper(x * x, 1));
        close(fUpper(x, f1, f2), fLower(1 / x, f2, f1));
      }),
    );
  });

  it('have their closed forms', () => {
    for (const x of [0.003, 0.4, 1, 7, 300]) {
      expect(chiSquareUpper(x, 2) / Math.exp(-x / 2)).toBeCloseTo(1, 13);
      expect(chiSquareUpper(x, 4) / (Math.exp(-x / 2) * (1 + x / 2))).toBeCloseTo(1, 13);
      expect(tUpper(x, 1) / (Math.atan(1 / x) / Math.PI)).toBeCloseTo(1, 14);
      const root = Math.sqrt(2 + x * x);
      expect(tUpper(x, 2) / (1 / (root * (root + x)))).toBeCloseTo(1, 14);
      expect(fUpper(x, 2, 6) / (1 + x / 3) ** -3).toBeCloseTo(1, 13);
      expect(fLower(x, 6, 2) / (1 + 1 / (3 * x)) ** -3).toBeCloseTo(1, 13);
    }
  });

  it('fall as the statistic rises', () => {
    fc.assert(
      fc.property(point, fc.double({ min: 0.001, max: 5, noNaN: true }), freedom, freedom, (x, more, f1, f2) => {
        const falls = (tail: (at: number) => number) => {
          const [before, after] = [tail(x), tail(x + more)];
          if (before > 1e-290 && before < 0.999) expect(after).toBeLessThan(before);
          else expect(after).toBeLessThanOrEqual(before);
        };
        falls(normalUpper);
        falls((at) => tUpper(at, f1));
        falls((at) => chiSquareUpper(at, f1));
        falls((at) => fUpper(at, f1, f2));
      }),
    );
  });

  it('keep their size down to 1e-300 and become 0 only beyond the range of doubles', () => {
    expect(normalUpper(37)).toBeGreaterThan(1e-300);
    expect(normalUpper(39)).toBe(0);
    expect(tUpper(1e250, 1) / (1e-250 / Math.PI)).toBeCloseTo(1, 12);
    expect(fUpper(1e250, 3, 2) * 1e250).toBeCloseTo(1, 12);
    expect(chiSquareUpper(1e5, 3)).toBe(0);
  });

  it('approach those of the limit as freedom grows without end', () => {
    for (const x of [0.5, 2.5, 9]) {
      expect(tUpper(x, 1e17) / normalUpper(x)).toBeCloseTo(1, 12);
      expect(tUpper(x, Infinity)).toBe(normalUpper(x));
      expect(tTwoSided(-x, Infinity)).toBe(normalTwoSided(x));
      expect(fUpper(x, 3, 1e17) / chiSquareUpper(3 * x, 3)).toBeCloseTo(1, 12);
      expect(fUpper(x, 3, Infinity)).toBe(chiSquareUpper(3 * x, 3));
      expect(fUpper(x, Infinity, 3) / chiSquareLower(3 / x, 3)).toBeCloseTo(1, 14);
      expect(fUpper(x, 1e17, 3) / fUpper(x, Infinity, 3)).toBeCloseTo(1, 12);
    }
    expect(tUpperQuantile(0.025, Infinity)).toBe(normalUpperQuantile(0.025));
    expect(fUpperQuantile(0.05, 3, Infinity) / (chiSquareUpperQuantile(0.05, 3) / 3)).toBeCloseTo(1, 14);
  });

  it('with freedom in the millions on both sides are still those of the normal limit', () => {
    // (F - 1) / root(2/f1 + 2/f2) is standard normal up to terms of order 1 / root f.
    const f = 1e10;
    const x = 1 + 2 * Math.sqrt(4 / f);
    expect(fUpper(x, f, f) / normalUpper(2)).toBeCloseTo(1, 3);
    expect(chiSquareUpper(f + 2 * Math.sqrt(2 * f), f) / normalUpper(2)).toBeCloseTo(1, 3);
    expect(chiSquareLower(f - 2 * Math.sqrt(2 * f), f) / normalUpper(2)).toBeCloseTo(1, 3);
  });

  it('at the ends are 0, a half or 1', () => {
    expect([tUpper(0, 5), tUpper(Infinity, 5), tUpper(-Infinity, 5)]).toEqual([0.5, 0, 1]);
    expect([normalUpper(0), normalUpper(Infinity), normalUpper(-Infinity)]).toEqual([0.5, 0, 1]);
    expect([chiSquareUpper(0, 5), chiSquareUpper(-1, 5), chiSquareUpper(Infinity, 5)]).toEqual([1, 1, 0]);
    expect([fUpper(0, 2, 5), fUpper(-1, 2, 5), fUpper(Infinity, 2, 5)]).toEqual([1, 1, 0]);
  });
});

describe('what has no answer is the caller bug that it is', () => {
  it('no freedom at or below 0, none that is not a number', () => {
    for (const f of [0, -1, Number.NaN]) {
      expect(() => tUpper(1, f)).toThrow(RangeError);
      expect(() => tTwoSided(1, f)).toThrow(RangeError);
      expect(() => chiSquareUpper(1, f)).toThrow(RangeError);
      expect(() => fUpper(1, f, 3)).toThrow(RangeError);
      expect(() => fUpper(1, 3, f)).toThrow(RangeError);
      expect(() => tUpperQuantile(0.1, f)).toThrow(RangeError);
    }
    expect(() => chiSquareUpper(1, Infinity)).toThrow(RangeError);
  });

  it('no statistic that is not a number, no probability of 0 or 1', () => {
    expect(() => normalUpper(Number.NaN)).toThrow(RangeError);
    expect(() => tUpper(Number.NaN, 3)).toThrow(RangeError);
    expect(() => fUpper(Number.NaN, 3, 4)).toThrow(RangeError);
    for (const p of [0, 1, -0.1, 1.1, Number.NaN]) {
      expect(() => normalQuantile(p)).toThrow(RangeError);
      expect(() => tQuantile(p, 3)).toThrow(RangeError);
      expect(() => chiSquareQuantile(p, 3)).toThrow(RangeError);
      expect(() => fQuantile(p, 3, 4)).toThrow(RangeError);
    }
  });
});
