import { divide, fromNumber, multiply, type Pair, parseDecimal, subtract } from '@core/numbers/double-double';
import { logGamma, stirlingRest } from '@core/numbers/stirling';
import { expOf, logOf } from '@core/numbers/transcendental';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

fc.configureGlobal({ seed: 8 });

function decimal(text: string): Pair {
  const pair = parseDecimal(text);
  if (!pair) throw new Error(text);
  return pair;
}

/** |found - truth| / |truth|, taken in double-double. */
function off(found: Pair, truth: Pair): number {
  return Math.abs(divide(subtract(found, truth), truth)[0]);
}

describe('double-double functions', () => {
  it('agree with mpmath to 30 digits', () => {
    // Source: mpmath 1.3.0, 40 digits.
    expect(off(expOf(fromNumber(1)), decimal('2.718281828459045235360287471352662497757'))).toBeLessThan(1e-30);
    expect(off(expOf(fromNumber(-0.5)), decimal('0.6065306597126334236037995349911804534419'))).toBeLessThan(1e-30);
    expect(off(expOf(fromNumber(700)), decimal('1.014232054735004509455329595231780120463e+304'))).toBeLessThan(1e-29);
    expect(off(logOf(fromNumber(2)), decimal('0.6931471805599453094172321214581765680755'))).toBeLessThan(1e-30);
    expect(off(logOf(fromNumber(3)), decimal('1.098612288668109691395245236922525704647'))).toBeLessThan(1e-30);
    expect(off(logOf(decimal('1e300')), decimal('690.7755278982137052053974364053092622803'))).toBeLessThan(1e-30);
    expect(off(logOf(decimal('0.1')), decimal('-2.302585092994045684017991454684364207601'))).toBeLessThan(1e-30);
  });

  it('undo each other', () => {
    fc.assert(
      fc.property(fc.double({ min: -600, max: 600, noNaN: true }), (x) => {
        expect(Math.abs(subtract(logOf(expOf(fromNumber(x))), fromNumber(x))[0])).toBeLessThan(
          4e-32 * (8 + Math.abs(x)),
        );
      }),
    );
  });

  it('turn sums into products', () => {
    const small = fc.double({ min: -300, max: 300, noNaN: true });
    fc.assert(
      fc.property(small, small, (x, y) => {
        const both: Pair = [x + y, x - (x + y - y) + (y - (x + y - (x + y - y)))];
        expect(off(multiply(expOf(fromNumber(x)), expOf(fromNumber(y))), expOf(both))).toBeLessThan(1e-28);
      }),
    );
  });

  it('end where doubles end', () => {
    expect(expOf(fromNumber(800))).toEqual([Infinity, 0]);
    expect(expOf(fromNumber(-800))).toEqual([0, 0]);
    expect(logOf(fromNumber(0))).toEqual([-Infinity, 0]);
    expect(logOf(fromNumber(-1))[0]).toBeNaN();
    expect(logOf(fromNumber(5e-324))[0]).toBeCloseTo(-744.4400719213812, 12);
    expect(logOf(fromNumber(1.7e308))[0]).toBeCloseTo(Math.log(1.7e308), 12);
  });
});

describe("Stirling's rest", () => {
  it('is continuous where the series takes over, and has its value at 1', () => {
    // 1 - ln(2 pi) / 2, from mpmath.
    expect(stirlingRest(1)).toBeCloseTo(0.08106146679532726, 16);
    expect(stirlingRest(15.999999999999998) / stirlingRest(16)).toBeCloseTo(1, 13);
  });

  it('gives logarithms of factorials', () => {
    let factorial = 1;
    for (let n = 1; n <= 20; n++) {
      factorial *= n;
      expect(logGamma(n + 1)).toBeCloseTo(Math.log(factorial), 13);
    }
    expect(logGamma(0.5)).toBeCloseTo(Math.log(Math.PI) / 2, 15);
  });
});
