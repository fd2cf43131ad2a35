import { type Pair, restOfProduct, twoProduct } from './error-free';

const GRAMMAR = /^([+\-\u2212]?)(?:(\d+)\.?(\d*)|\.(\d+))(?:[eE]([+\-\u2212]?\d+))?$/;
const MINUS = '\u2212';

/** 10^0 to 10^22: the powers of ten that a double holds exactly. */
const TENS = Array.from({ length: 23 }, (_, power) => Number(`1e${power}`));

/**
 * A decimal number as written, to about 32 digits: the nearest double, and the nearest double to what that leaves.
 *
 * text: an optional sign (+, -, U+2212), ASCII digits with at most one point (digits on one side suffice), an optional exponent.
 * high is Number(text) exactly. Null where the text is not of that form, or lies beyond the range of a double.
 *
 * Example: parseDecimal('0.1') = [0.1, -5.551115123125783e-18].
 */
export function parseDecimal(text: string): Pair | null {
  const found = GRAMMAR.exec(text);
  if (!found) return null;
  const [, sign = '', whole = '', fraction = '', alone = '', exponent = '0'] = found;
  const digits = whole + fraction + alone;
  const power = Number(exponent.replace(MINUS, '-')) - fraction.length - alone.length;
  const size = Number(`${digits}e${power}`);
  if (size === Infinity) return null;
  const negative = sign === '-' || sign === MINUS;
  const rest = size === 0 ? 0 : restOf({ digits, power, size });
  return negative ? [-size, 0 - rest] : [size, 0 + rest];
}

interface Written {
  readonly digits: string;
  /** The number is digits times 10 to this power. */
  readonly power: number;
  /** The double nearest to it. */
  readonly size: number;
}

function restOf(written: Written): number {
  const { digits, power, size } = written;
  const tens = TENS[Math.abs(power)];
  if (digits.length > 15 || tens === undefined) return restByWholeNumbers(written);
  const whole = Number(digits);
  if (power >= 0) return twoProduct(whole, tens)[1];
  const product = size * tens;
  return (whole - product - restOfProduct(size, tens, product)) / tens;
}

/** The number less the double, over a common denominator, in whole numbers of any length. */
function restByWholeNumbers({ digits, power, size }: Written): number {
  const { whole, shift } = wholeOf(size);
  const tens = BigInt(`1${'0'.repeat(Math.abs(power))}`);
  const two = 1n << BigInt(Math.abs(shift));
  const [above, below] = power < 0 ? [BigInt(digits), tens] : [BigInt(digits) * tens, 1n];
  const [doubleAbove, doubleBelow] = shift < 0 ? [whole, two] : [whole * two, 1n];
  return ratio(above * doubleBelow - doubleAbove * below, below * doubleBelow);
}

/** A positive finite double as whole times 2^shift. */
function wholeOf(size: number): { whole: bigint; shift: number } {
  const bits = new DataView(new ArrayBuffer(8));
  bits.setFloat64(0, size);
  const word = bits.getBigUint64(0);
  const exponent = Number(word >> 52n);
  const fraction = word & 0xfffffffffffffn;
  return exponent === 0
    ? { whole: fraction, shift: -1074 }
    : { whole: fraction | 0x10000000000000n, shift: exponent - 1075 };
}

/** The double nearest to above / below, below > 0: 64 bits and a sticky one of the quotient, rounded once. */
function ratio(above: bigint, below: bigint): number {
  if (above === 0n) return 0;
  const size = above < 0n ? -above : above;
  const shift = 64 - (lengthOf(size) - lengthOf(below));
  const numerator = shift > 0 ? size << BigInt(shift) : size;
  const denominator = shift < 0 ? below << BigInt(-shift) : below;
  const quotient = numerator / denominator;
  const sticky = quotient * denominator === numerator ? 0n : 1n;
  const value = timesPowerOfTwo(Number((quotient << 1n) | sticky), -shift - 1);
  return above < 0n ? -value : value;
}

function lengthOf(positive: bigint): number {
  return positive.toString(16).length * 4;
}

function timesPowerOfTwo(value: number, power: number): number {
  let scaled = value;
  let left = power;
  for (; left < -1000; left += 1000) scaled *= 9.332636185032189e-302; // 2^-1000
  for (; left > 1000; left -= 1000) scaled *= 1.0715086071862673e301; // 2^1000
  return scaled * Number(left < 0 ? 1 / Number(1n << BigInt(-left)) : Number(1n << BigInt(left)));
}
