const STEP = 4294967296;

/**
 * The largest power of two that does not exceed |x|: scaling by it moves the exponent and rounds nothing.
 *
 * x: any finite number; 0 gives 1, so that scaling by the answer is always allowed. A number that is not finite is a bug and throws.
 *
 * Example: `powerOfTwoBelow(-5)` is 4.
 */
export function powerOfTwoBelow(x: number): number {
  let rest = Math.abs(x);
  if (rest === 0) return 1;
  if (!(rest < Infinity)) throw new RangeError('a number that is not finite has no power of two below it');
  let power = 1;
  while (rest >= STEP) [rest, power] = [rest / STEP, power * STEP];
  while (rest < 1 / STEP) [rest, power] = [rest * STEP, power / STEP];
  while (rest >= 2) [rest, power] = [rest / 2, power * 2];
  while (rest < 1) [rest, power] = [rest * 2, power / 2];
  return power;
}

/**
 * A power of two whose root is one as well, near |x|: 4^e with 4^e <= |x| < 4^(e+1), and its root 2^e.
 *
 * Example: `powerOfFourBelow(40)` gives { power: 16, root: 4 }.
 */
export function powerOfFourBelow(x: number): { readonly power: number; readonly root: number } {
  const root = powerOfTwoBelow(Math.sqrt(Math.abs(x)));
  return { power: root * root, root };
}

/** The largest absolute value of a vector; 0 for an empty one. */
export function largestOf(values: Float64Array): number {
  let largest = 0;
  for (let g = 0; g < values.length; g++) {
    const size = Math.abs(values[g] as number);
    if (size > largest) largest = size;
  }
  return largest;
}
