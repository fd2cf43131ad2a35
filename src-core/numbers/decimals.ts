import { add, divide, multiply, ONE, type Pair, squareRoot, subtract } from './double-double';
import { pow } from './elementary';
import { logOf as logOfPair } from './transcendental';

/**
 * A column of double-double numbers: value g is high[g] + low[g], with |low| at most half a unit in the last place of high.
 * A value that is not there is NaN in high and 0 in low. Plain doubles have low 0 throughout.
 */
export interface Decimals {
  readonly high: Float64Array;
  readonly low: Float64Array;
}

// In every function below: columns have the same length G (other lengths throw); what is missing in an argument is missing in the
// result; a value that cannot be formed (division by zero, root or log of a negative number, overflow) is missing too.

/** A column of doubles. Example: fromDoubles([0.5]) holds 0.5 exactly. */
export function fromDoubles(values: ArrayLike<number>): Decimals {
  return formed(values.length, (g) => [values[g] as number, 0]);
}

/** A column of pairs, null where there is no value. Example: fromPairs([[1, 1e-20], null]). */
export function fromPairs(values: readonly (Pair | null)[]): Decimals {
  return formed(values.length, (g) => values[g] ?? [Number.NaN, 0]);
}

/** Value g of a column as a pair. Example: pairAt(fromDoubles([2]), 0) = [2, 0]. */
export function pairAt(column: Decimals, g: number): Pair {
  return [column.high[g] as number, column.low[g] as number];
}

/** a_g b_g. Example: 3 and 7 give 21. */
export function productOf(a: Decimals, b: Decimals): Decimals {
  return joined(a, b, multiply);
}

/** a_g / b_g; missing where b_g is 0. Example: 1 and 3 give a third to 31 digits. */
export function quotientOf(a: Decimals, b: Decimals): Decimals {
  return joined(a, b, divide);
}

/** a_g - b_g. Example: 3 and 7 give -4. */
export function differenceOf(a: Decimals, b: Decimals): Decimals {
  return joined(a, b, subtract);
}

/** a_g + b_g. Example: 3 and 7 give 10. */
export function sumOf(a: Decimals, b: Decimals): Decimals {
  return joined(a, b, add);
}

/** factor x_g, the factor a double or a pair. Example: 0.25 times 8 gives 2. */
export function scaledBy(column: Decimals, factor: number | Pair): Decimals {
  const pair: Pair = typeof factor === 'number' ? [factor, 0] : factor;
  return each(column, (x) => multiply(x, pair));
}

/** 1 / x_g; missing where x_g is 0. Example: 4 gives 0.25. */
export function reciprocalOf(column: Decimals): Decimals {
  return each(column, (x) => divide(ONE, x));
}

/** The square root of x_g; missing below 0. Example: 2 gives 1.4142135623730950488 and on. */
export function rootOf(column: Decimals): Decimals {
  return each(column, squareRoot);
}

/** The natural logarithm of x_g; missing at and below 0. Example: 1 gives 0. */
export function logOf(column: Decimals): Decimals {
  return each(column, logOfPair);
}

/**
 * x_g to a power: whole exponents by repeated multiplication in double-double, negative ones as the reciprocal, a half as the root,
 * others in doubles alone.
 *
 * Example: 1.1 to the power 2 gives 1.21 to 31 digits where 1.1 was parsed as a decimal.
 */
export function powerOf(column: Decimals, exponent: number): Decimals {
  if (exponent === 0.5) return rootOf(column);
  if (!Number.isInteger(exponent)) return each(column, (x) => [pow(x[0], exponent), 0]);
  if (exponent < 0) return reciprocalOf(powerOf(column, -exponent));
  return each(column, (x) => wholePower(x, exponent));
}

/** The values of some rows, in the order of the rows. Example: rows [2, 0] of 5, 6, 7 give 7, 5. */
export function takeRows(column: Decimals, rows: ArrayLike<number>): Decimals {
  const count = rows.length;
  const taken = { high: new Float64Array(count), low: new Float64Array(count) };
  for (let place = 0; place < count; place++) {
    taken.high[place] = column.high[rows[place] as number] as number;
    taken.low[place] = column.low[rows[place] as number] as number;
  }
  return taken;
}

/** Squares and multiplies; 0 to the power 0 is 1. */
function wholePower(x: Pair, exponent: number): Pair {
  let value = ONE;
  let square = x;
  for (let left = exponent; left > 0; left = Math.floor(left / 2)) {
    if (left % 2 === 1) value = multiply(value, square);
    if (left > 1) square = multiply(square, square);
  }
  return value;
}

function each(column: Decimals, form: (x: Pair) => Pair): Decimals {
  return formed(column.high.length, (g) => (Number.isNaN(column.high[g]) ? MISSING : form(pairAt(column, g))));
}

function joined(a: Decimals, b: Decimals, form: (x: Pair, y: Pair) => Pair): Decimals {
  if (a.high.length !== b.high.length) throw new RangeError(`columns of ${a.high.length} and ${b.high.length} cells`);
  return formed(a.high.length, (g) => form(pairAt(a, g), pairAt(b, g)));
}

const MISSING: Pair = [Number.NaN, 0];

function formed(count: number, at: (g: number) => Pair): Decimals {
  const high = new Float64Array(count);
  const low = new Float64Array(count);
  for (let g = 0; g < count; g++) {
    const [first, rest] = at(g);
    const there = Math.abs(first) < Infinity;
    high[g] = there ? first : Number.NaN;
    low[g] = there ? rest : 0;
  }
  return { high, low };
}
