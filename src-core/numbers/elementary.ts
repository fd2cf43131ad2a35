import arcsineOf from '@stdlib/math-base-special-asin';
import exponentialOf from '@stdlib/math-base-special-exp';
import exponentialLessOneOf from '@stdlib/math-base-special-expm1';
import logarithmOf from '@stdlib/math-base-special-ln';
import logarithmOfOneAndOf from '@stdlib/math-base-special-log1p';
import powerOf from '@stdlib/math-base-special-pow';

// Ports in plain JavaScript that reach no built-in function but abs, floor, trunc and sqrt: engines differ in the last bit of their own.
// An argument outside a function's domain gives NaN, as it would with the built-in one; callers that may meet one ask first.

/** e^x, within one unit in the last place. Example: exp(1) = 2.718281828459045. Source: fdlibm 5.3 e_exp. */
export function exp(x: number): number {
  return exponentialOf(x);
}

/** e^x - 1, accurate near 0. Example: expm1(1e-20) = 1e-20. Source: fdlibm 5.3 s_expm1. */
export function expm1(x: number): number {
  return exponentialLessOneOf(x);
}

/** The natural logarithm; -Infinity at 0, NaN below. Example: log(1) = 0. Source: fdlibm 5.3 e_log. */
export function log(x: number): number {
  return logarithmOf(x);
}

/** ln(1 + x), accurate near 0; -Infinity at -1, NaN below. Example: log1p(1e-20) = 1e-20. Source: fdlibm 5.3 s_log1p. */
export function log1p(x: number): number {
  return logarithmOfOneAndOf(x);
}

/** x^y; NaN where a negative base meets an exponent that is no whole number. Example: pow(2, 10) = 1024. Source: fdlibm 5.3 e_pow. */
export function pow(base: number, exponent: number): number {
  return powerOf(base, exponent);
}

const LOG10_OF_E = Math.LOG10E;
const LOG10_OF_E_REST = 1.098319650216765e-17;

/**
 * The decimal logarithm, within two units in the last place, and a whole number at the double nearest to any power of ten from 1e-307 up.
 *
 * x: above 0; -Infinity at 0, NaN below.
 *
 * Example: log10(1e-7) = -7.
 */
export function log10(x: number): number {
  const natural = log(x);
  const found = natural * LOG10_OF_E + natural * LOG10_OF_E_REST;
  const whole = Math.round(found);
  return Math.abs(found - whole) < 1e-12 && whole > -308 && x === Number(`1e${whole}`) ? whole : found;
}

/** The hyperbolic tangent. Example: tanh(0.5) = 0.46211715726000973. */
export function tanh(x: number): number {
  const size = Math.abs(x);
  if (size > 22) return Math.sign(x);
  const grown = expm1(2 * size);
  return Math.sign(x) * (grown / (grown + 2));
}

/** The inverse of tanh, for |x| below 1; infinite at 1, NaN beyond. Example: atanh(0.5) = 0.5493061443340549. */
export function atanh(x: number): number {
  const size = Math.abs(x);
  return (Math.sign(x) * log1p((2 * size) / (1 - size))) / 2;
}

/** The angle in radians whose sine is x, |x| at most 1, NaN beyond. Example: arcsin(1) = 1.5707963267948966. Source: Cephes asin. */
export function arcsin(x: number): number {
  return arcsineOf(x);
}
