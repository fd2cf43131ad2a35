import { add, divide, fromNumber, multiply, ONE, type Pair, subtract, toNumber, twoSum } from './double-double';
import { logOf } from './transcendental';

/** B(2n) / (2n (2n - 1)), n = 1 to 10: Stirling's series in 1/a, 1/a^3, ... */
const SERIES = [
  1 / 12,
  -1 / 360,
  1 / 1260,
  -1 / 1680,
  1 / 1188,
  -691 / 360360,
  1 / 156,
  -3617 / 122400,
  43867 / 244188,
  -174611 / 125400,
];
const ENOUGH = 16;

/**
 * What Stirling's formula leaves out of the logarithm of the gamma function.
 *
 *     ln Gamma(a + 1) = (a + 1/2) ln a - a + ln(2 pi) / 2 + rest
 *
 * a: above 0. Absolute error below 1e-16 (1 + |rest|); small a are moved up to 16 and back in double-double.
 *
 * Example: stirlingRest(1) = 1 - ln(2 pi) / 2 = 0.08106146679532726.
 * Source: DLMF 5.11.1.
 */
export function stirlingRest(a: number): number {
  if (a >= ENOUGH) return series(a);
  const steps = Math.ceil(ENOUGH - a);
  const moved = twoSum(a, steps);
  let product: Pair = ONE;
  for (let step = 1; step <= steps; step++) product = multiply(product, twoSum(a, step));
  const before = multiply(twoSum(a, 0.5), logOf(fromNumber(a)));
  const after = multiply(add(moved, fromNumber(0.5)), logOf(moved));
  const change = subtract(subtract(after, before), add(logOf(product), fromNumber(steps)));
  return toNumber(add(change, fromNumber(series(moved[0]))));
}

function series(a: number): number {
  const inverse = 1 / a;
  const square = inverse * inverse;
  let value = 0;
  for (let n = SERIES.length - 1; n >= 0; n--) value = value * square + (SERIES[n] as number);
  return value * inverse;
}

/**
 * ln Gamma(a) for a above 0, in double-double as far as Stirling's rest allows (absolute error 1e-16).
 *
 * Example: logGamma(5) = ln 24 = 3.1780538303479458.
 */
export function logGamma(a: number): number {
  const logarithm = logOf(fromNumber(a));
  const main = subtract(multiply(twoSum(a, -0.5), logarithm), fromNumber(a));
  return toNumber(add(main, add(HALF_LOG_TWO_PI, fromNumber(stirlingRest(a)))));
}

/** Half the logarithm of 2 pi, in double-double. */
const HALF_LOG_TWO_PI: Pair = logOfTwoPi();

function logOfTwoPi(): Pair {
  const twoPi: Pair = [6.283185307179586, 2.4492935982947064e-16];
  return divide(logOf(twoPi), fromNumber(2));
}
