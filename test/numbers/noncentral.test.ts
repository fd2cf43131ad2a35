import {
  chiSquareUpper,
  fUpper,
  noncentralChiSquareUpper,
  noncentralFUpper,
  noncentralTUpper,
  normalUpper,
  tUpper,
} from '@core/numbers/distributions';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

fc.configureGlobal({ seed: 8 });

const freedom = fc.double({ min: 0.5, max: 300, noNaN: true });
const strength = fc.double({ min: 0, max: 200, noNaN: true });
const point = fc.double({ min: 0.01, max: 400, noNaN: true });

/** Equal but for a share; below the range of doubles only the size is compared. */
function close(found: number, truth: number, share = 1e-12): void {
  if (truth < 1e-290) expect(found).toBeLessThan(1e-289);
  else expect(Math.abs(found / truth - 1)).toBeLessThan(share);
}

describe('noncentral t tails far from 0', () => {
  // Integrals of the normal density times chi-square tails by mpmath 1.3, 25 digits.
  it.each([
    [10050, 5, 10000.001, 0.5780333094142475],
    [20000, 3, 10000.001, 0.138614957439759],
    [2e9, 7, 1e9, 0.0276255536773535],
  ])('P(T > %d) on %d degrees of freedom at noncentrality %d', (t, freedom, noncentrality, truth) => {
    close(noncentralTUpper(t, freedom, noncentrality), truth);
  });

  it('go over into the mixture at the point from which they are integrated', () => {
    for (const [t, freedom] of [
      [9000, 50],
      [20000, 3],
      [10001, 1e6],
    ] as const) {
      const [below, above] = [9999.99999, 10000.00001].map((far) => noncentralTUpper(t, freedom, far));
      expect(above).toBeGreaterThan(below as number);
      expect((above as number) / (below as number)).toBeLessThan(1 + 1e-5);
    }
  });

  it('end at once, at 1 and 0, where nothing is left to tell', () => {
    expect(noncentralTUpper(3, 12, 1e300)).toBeCloseTo(1, 14);
    expect(noncentralTUpper(3, 12, -1e300)).toBe(0);
    expect(noncentralTUpper(-3, 12, 1e300)).toBe(1);
  });
});

describe('noncentral tails', () => {
  it('without noncentrality are the central ones', () => {
    fc.assert(
      fc.property(point, freedom, freedom, (x, f1, f2) => {
        close(noncentralChiSquareUpper(x, f1, 0), chiSquareUpper(x, f1));
        close(noncentralFUpper(x, f1, f2, 0), fUpper(x, f1, f2));
        close(noncentralTUpper(x, f1, 0), tUpper(x, f1));
      }),
    );
  });

  it('on one degree of freedom are two normal tails', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.1, max: 15, noNaN: true }),
        fc.double({ min: 0, max: 15, noNaN: true }),
        (z, mean) => {
          const truth = normalUpper(z - mean) + normalUpper(z + mean);
          close(noncentralChiSquareUpper(z * z, 1, mean * mean), truth);
        },
      ),
    );
  });

  it('are found where every central tail that the sum begins with lies below the range of doubles', () => {
    close(noncentralChiSquareUpper(135 * 135, 1, 1e4), normalUpper(35), 1e-11);
    close(noncentralChiSquareUpper(1030 * 1030, 1, 1e6), normalUpper(30), 1e-11);
    expect(noncentralFUpper(1e4, 1, 1e9, 4900)).toBeGreaterThan(1e-220);
  });

  it('grow with the noncentrality', () => {
    fc.assert(
      fc.property(point, freedom, freedom, strength, (x, f1, f2, more) => {
        const grows = (less: number, greater: number) => expect(greater).toBeGreaterThanOrEqual(less * (1 - 1e-12));
        grows(noncentralChiSquareUpper(x, f1, more), noncentralChiSquareUpper(x, f1, more * 1.1 + 0.1));
        grows(noncentralFUpper(x, f1, f2, more), noncentralFUpper(x, f1, f2, more * 1.1 + 0.1));
      }),
    );
  });

  it('of F approach those of chi-square as the freedom below grows without end', () => {
    close(noncentralFUpper(2, 3, 1e12, 5), noncentralChiSquareUpper(6, 3, 5), 1e-10);
    expect(noncentralFUpper(2, 3, Infinity, 5)).toBe(noncentralChiSquareUpper(6, 3, 5));
    expect(noncentralTUpper(2, Infinity, 1)).toBe(normalUpper(1));
  });

  it("of Student's t on both sides are that of F on 1 and the freedom", () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.1, max: 9, noNaN: true }),
        freedom,
        fc.double({ min: -6, max: 6, noNaN: true }),
        (t, f, centre) => {
          const both = noncentralTUpper(t, f, centre) + noncentralTUpper(t, f, -centre);
          close(both, noncentralFUpper(t * t, 1, f, centre * centre));
          expect(noncentralTUpper(-t, f, centre) + noncentralTUpper(t, f, -centre)).toBeCloseTo(1, 13);
        },
      ),
    );
  });

  it('keep their size in the far tail, and end without a loop at great noncentrality', () => {
    expect(noncentralFUpper(1e5, 3, 100, 20)).toBeGreaterThan(0);
    expect(noncentralFUpper(1e5, 3, 100, 20)).toBeLessThan(1e-100);
    expect(noncentralChiSquareUpper(1e8, 1, 1e8)).toBeCloseTo(0.5, 3);
    expect(noncentralFUpper(2000, 1, 50, 1e5)).toBeGreaterThan(0.999);
    expect(noncentralFUpper(1e200, 3, 2, 5) / noncentralFUpper(1e150, 3, 2, 5) / 1e-50).toBeCloseTo(1, 10);
  });

  it('at the ends are 0 and 1', () => {
    expect([noncentralChiSquareUpper(0, 2, 3), noncentralChiSquareUpper(Infinity, 2, 3)]).toEqual([1, 0]);
    expect([noncentralFUpper(0, 2, 9, 3), noncentralFUpper(Infinity, 2, 9, 3)]).toEqual([1, 0]);
    expect([noncentralTUpper(-Infinity, 2, 3), noncentralTUpper(Infinity, 2, 3)]).toEqual([1, 0]);
  });

  it('of a negative noncentrality are a bug, except for t, as is a numerator without end', () => {
    expect(() => noncentralChiSquareUpper(1, Infinity, 1)).toThrow(RangeError);
    expect(() => noncentralFUpper(1, Infinity, 3, 1)).toThrow(RangeError);
    expect(() => noncentralChiSquareUpper(1, 1, -1)).toThrow(RangeError);
    expect(() => noncentralFUpper(1, 1, 1, Number.NaN)).toThrow(RangeError);
    expect(() => noncentralTUpper(1, 1, Infinity)).toThrow(RangeError);
  });
});
