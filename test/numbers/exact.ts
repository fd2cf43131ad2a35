import type { Pair } from '@core/numbers/double-double';

/** A fraction in whole numbers of any length; below is above 0. */
export interface Fraction {
  readonly above: bigint;
  readonly below: bigint;
}

/** A finite double, exactly. */
export function exactly(value: number): Fraction {
  const bits = new DataView(new ArrayBuffer(8));
  bits.setFloat64(0, Math.abs(value));
  const word = bits.getBigUint64(0);
  const exponent = Number(word >> 52n);
  const fraction = word & 0xfffffffffffffn;
  const whole = exponent === 0 ? fraction : fraction | 0x10000000000000n;
  const shift = (exponent || 1) - 1075;
  const signed = value < 0 ? -whole : whole;
  return shift < 0 ? { above: signed, below: 1n << BigInt(-shift) } : { above: signed << BigInt(shift), below: 1n };
}

export function exactPair(pair: Pair): Fraction {
  return plus(exactly(pair[0]), exactly(pair[1]));
}

export function plus(a: Fraction, b: Fraction): Fraction {
  return { above: a.above * b.below + b.above * a.below, below: a.below * b.below };
}

export function minus(a: Fraction, b: Fraction): Fraction {
  return plus(a, { above: -b.above, below: b.below });
}

export function times(a: Fraction, b: Fraction): Fraction {
  return { above: a.above * b.above, below: a.below * b.below };
}

export function over(a: Fraction, b: Fraction): Fraction {
  const turned = b.above < 0n ? { above: -b.below, below: -b.above } : { above: b.below, below: b.above };
  return times(a, turned);
}

/** Whether a and b are the same number. */
export function same(a: Fraction, b: Fraction): boolean {
  return a.above * b.below === b.above * a.below;
}

/** Whether |found - true| is at most 2^-bits of |true|. */
export function within(found: Fraction, truth: Fraction, bits: number): boolean {
  const off = minus(found, truth);
  const left = (off.above < 0n ? -off.above : off.above) * truth.below * 2n ** BigInt(bits);
  return left <= (truth.above < 0n ? -truth.above : truth.above) * off.below;
}

/** The exact value of a decimal number as written, in the plain grammar. */
export function written(text: string): Fraction {
  const [, sign = '', whole = '', fraction = '', exponent = '0'] =
    /^([+\-\u2212]?)(\d*)\.?(\d*)(?:[eE]([+\-\u2212]?\d+))?$/.exec(text) ?? [];
  const power = Number(exponent.replace('\u2212', '-')) - fraction.length;
  const digits = BigInt(`${whole}${fraction}`) * (sign === '-' || sign === '\u2212' ? -1n : 1n);
  const tens = 10n ** BigInt(Math.abs(power));
  return power < 0 ? { above: digits, below: tens } : { above: digits * tens, below: 1n };
}
