import { shapiroWilk } from '@core/evidence/shapiro-wilk';
import * as fc from 'fast-check';
import { expect, test } from 'vitest';

const numbers = fc.array(fc.double({ min: -1e3, max: 1e3, noNaN: true }), { minLength: 3, maxLength: 60 });

test('three equally spaced values have W 1 and p 1', () => {
  expect(shapiroWilk(Float64Array.of(3, 1, 2))?.w).toBeCloseTo(1, 14);
  expect(shapiroWilk(Float64Array.of(3, 1, 2))?.p).toBeCloseTo(1, 6);
});

// Closed form at n = 3: W is least, 3/4, where two values are equal.
test('three values of which two are equal have W 3/4 and p 0', () => {
  expect(shapiroWilk(Float64Array.of(1, 1, 4))?.w).toBeCloseTo(0.75, 14);
  expect(shapiroWilk(Float64Array.of(1, 1, 4))?.p).toBeLessThan(1e-7);
});

test('equal values, fewer than 3 and more than 5000 have no W', () => {
  expect(shapiroWilk(Float64Array.of(2, 2, 2, 2))).toBeNull();
  expect(shapiroWilk(Float64Array.of(1, 2))).toBeNull();
  expect(shapiroWilk(new Float64Array(5001).map((_, i) => i))).toBeNull();
});

test('W depends neither on the order of the values nor on their unit and origin', () => {
  fc.assert(
    fc.property(numbers, (values) => {
      const plain = shapiroWilk(Float64Array.from(values));
      fc.pre(plain !== null && Math.max(...values) - Math.min(...values) > 1e-3);
      const turned = shapiroWilk(Float64Array.from([...values].reverse(), (x) => 7 - 2 * x));
      expect(turned?.w).toBeCloseTo(plain?.w as number, 8);
    }),
    { seed: 11 },
  );
});
