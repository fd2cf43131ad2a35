import { placeIn, rangeAround, ticksOf, tickText } from '@core/figures/ticks';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const span = fc
  .tuple(fc.double({ min: -1e6, max: 1e6, noNaN: true }), fc.double({ min: 1e-6, max: 1e6, noNaN: true }))
  .map(([low, width]) => ({ min: low, max: low + width, log: false }))
  .filter(({ min, max }) => max - min > 1e-9 * Math.max(Math.abs(min), Math.abs(max)));
const decades = fc
  .tuple(fc.double({ min: -8, max: 8, noNaN: true }), fc.double({ min: 0.1, max: 9, noNaN: true }))
  .map(([low, width]) => ({ min: 10 ** low, max: 10 ** (low + width), log: true }));

describe('the ticks of an axis', () => {
  it('lie inside it, rise, and are no more than asked for', () => {
    fc.assert(
      fc.property(fc.oneof(span, decades), fc.integer({ min: 3, max: 9 }), (range, most) => {
        const ticks = ticksOf(range, most);
        expect(ticks.length).toBeLessThanOrEqual(most + 1);
        for (const [i, tick] of ticks.entries()) {
          expect(placeIn(range, tick)).toBeGreaterThanOrEqual(-1e-6);
          expect(placeIn(range, tick)).toBeLessThanOrEqual(1 + 1e-6);
          if (i > 0) expect(tick).toBeGreaterThan(ticks[i - 1] as number);
        }
      }),
    );
  });

  it.each([
    [{ min: 0, max: 1.5, log: false }, 6, [0, 0.5, 1, 1.5]],
    [{ min: -1.3, max: 0.1, log: false }, 6, [-1, -0.5, 0]],
    [{ min: 8, max: 1100, log: true }, 6, [10, 30, 100, 300, 1000]],
    [{ min: 0.0001, max: 20, log: true }, 6, [0.0001, 0.001, 0.01, 0.1, 1, 10]],
    [{ min: 30, max: 70, log: true }, 6, [30, 40, 50, 60, 70]],
  ])('of %j, at most %i, are round', (range, most, expected) => {
    expect(ticksOf(range, most)).toEqual(expected);
  });

  it('are written as numbers in the report are, tiny and huge ones as powers', () => {
    expect([0, -0.5, 0.001, 1e-5, -2e7, 1e6].map(tickText)).toEqual(['0', '−0.5', '0.001', '10⁻⁵', '−2·10⁷', '10⁶']);
  });
});

describe('the range of an axis', () => {
  it('holds every value, whatever they are', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -1e9, max: 1e9, noNaN: true }), { minLength: 1 }), (values) => {
        const range = rangeAround(values);
        for (const value of values) expect(value >= range.min && value <= range.max).toBe(true);
        expect(range.max).toBeGreaterThan(range.min);
      }),
    );
  });

  it('stays above zero on a log axis, where values at or below zero have no place', () => {
    expect(rangeAround([0, -1], { log: true })).toEqual({ min: 1, max: 10, log: true });
    const range = rangeAround([0, 3], { log: true });
    expect(range.min).toBeGreaterThan(0);
    expect(range.min).toBeLessThan(3);
    expect(range.max).toBeGreaterThan(3);
  });
});
