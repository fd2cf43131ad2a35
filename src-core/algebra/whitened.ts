import type { Decimals } from '../numbers/decimals';
import type { Factored } from './factored';
import { largestOf, powerOfFourBelow, powerOfTwoBelow } from './powers-of-two';
import { type WideNumber, wideQuotient, wideRoot, wideTimes } from './wide';

/**
 * Columns and response divided by the root of each cell's variance, in double-double, and scaled by powers of two so that no square
 * overflows and nothing is rounded on the way: X_whitened = columns * columnScale / rootScale, y_whitened = y * yScale / rootScale.
 */
export interface Whitened {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly columnScale: Float64Array;
  readonly yScale: number;
  readonly rootScale: number;
  /** Root of the variance, divided by rootScale: takes a whitened residual back. Null where cells are correlated. */
  readonly roots: Float64Array | null;
}

/**
 * Whitens a design and a response under correlated errors, P^-1 x with Omega = P P'. Columns, y and what throws as in `whitenColumns`; nothing is
 * missing. factor: of Omega.
 */
export function whitenThrough(model: {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly factor: Factored;
}): Whitened {
  const parts = [...model.columns, model.y].map((column) => whitenOne(column, model.factor.whiten));
  return { ...scaledParts(parts), rootScale: 1, roots: null };
}

/**
 * Whitens a design and a response under independent errors, x_g / sqrt(v_g).
 *
 * columns, y: length G, double-double, finite. variances: length G, finite and above 0, of any size.
 * A value that is not finite, or a variance not above 0, is the caller's bug and throws.
 */
export function whitenColumns(model: {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly variances: Float64Array;
}): Whitened {
  const { variances } = model;
  if (!variances.every((v) => v > 0 && v < Infinity)) throw new RangeError('a variance is not finite and above 0');
  const { power, root: rootScale } = powerOfFourBelow(largestOf(variances));
  const { roots, inverses } = rootsOf(variances, power);
  const whiten = inverses && ((column: Decimals) => wideTimes(column, inverses));
  const parts = [...model.columns, model.y].map((column) => whitenOne(column, whiten));
  return { ...scaledParts(parts), rootScale, roots };
}

interface ScaledColumn {
  readonly column: Decimals;
  readonly scale: number;
}

function scaledParts(parts: readonly ScaledColumn[]): Pick<Whitened, 'columns' | 'y' | 'columnScale' | 'yScale'> {
  const own = parts.slice(0, -1);
  const last = parts.at(-1) as ScaledColumn;
  return {
    columns: own.map((part) => part.column),
    y: last.column,
    columnScale: Float64Array.from(own, (part) => part.scale),
    yScale: last.scale,
  };
}

function whitenOne(column: Decimals, whiten: ((column: Decimals) => Decimals) | null): ScaledColumn {
  const before = powerOfTwoBelow(checkedLargest(column));
  const scaled = before === 1 ? column : divided(column, before);
  if (!whiten) return { column: scaled, scale: before };
  const whitened = whiten(scaled);
  const after = powerOfTwoBelow(largestOf(whitened.high));
  if (after !== 1) divideInPlace(whitened, after);
  return { column: whitened, scale: before * after };
}

function checkedLargest({ high }: Decimals): number {
  let largest = 0;
  for (let g = 0; g < high.length; g++) {
    const size = Math.abs(high[g] as number);
    if (!(size < Infinity)) throw new RangeError('a column holds a value that is not finite');
    if (size > largest) largest = size;
  }
  return largest;
}

function divided({ high, low }: Decimals, by: number): Decimals {
  const column = { high: high.slice(), low: low.slice() };
  divideInPlace(column, by);
  return column;
}

/** by: a power of two. */
function divideInPlace({ high, low }: Decimals, by: number): void {
  const factor = 1 / by;
  for (let g = 0; g < high.length; g++) {
    high[g] = (high[g] as number) * factor;
    low[g] = (low[g] as number) * factor;
  }
}

/** Roots and inverse roots of v / power; inverses is null where every root is 1. */
function rootsOf(variances: Float64Array, power: number): { roots: Float64Array; inverses: Decimals | null } {
  const cells = variances.length;
  const roots = new Float64Array(cells);
  const inverses = { high: new Float64Array(cells), low: new Float64Array(cells) };
  const root: WideNumber = new Float64Array(2);
  const inverse: WideNumber = new Float64Array(2);
  const variance: [number, number] = [0, 0];
  const one = [1, 0];
  let allOne = true;
  for (let g = 0; g < cells; g++) {
    variance[0] = (variances[g] as number) / power;
    if (variance[0] !== 1) allOne = false;
    wideQuotient(inverse, one, wideRoot(root, variance));
    roots[g] = root[0] as number;
    inverses.high[g] = inverse[0] as number;
    inverses.low[g] = inverse[1] as number;
  }
  return { roots, inverses: allOne ? null : inverses };
}
