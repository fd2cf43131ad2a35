import type { Decimals } from '../numbers/decimals';
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
  /** Root of the variance, divided by rootScale: takes a whitened residual back. */
  readonly roots: Float64Array;
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
  const parts = [...model.columns, model.y].map((column) => whitenOne(column, inverses));
  const last = parts.pop() as { column: Decimals; scale: number };
  return {
    columns: parts.map((part) => part.column),
    y: last.column,
    columnScale: Float64Array.from(parts, (part) => part.scale),
    yScale: last.scale,
    rootScale,
    roots,
  };
}

function whitenOne(column: Decimals, inverses: Decimals | null): { column: Decimals; scale: number } {
  const before = powerOfTwoBelow(checkedLargest(column));
  const scaled = times(column, 1 / before);
  if (!inverses) return { column: scaled, scale: before };
  const whitened = wideTimes(scaled, inverses);
  const after = powerOfTwoBelow(largestOf(whitened.high));
  return { column: times(whitened, 1 / after), scale: before * after };
}

function checkedLargest(column: Decimals): number {
  const largest = largestOf(column.high);
  if (!(largest < Infinity) || column.high.some(Number.isNaN))
    throw new RangeError('a column holds a value that is not finite');
  return largest;
}

function times(column: Decimals, factor: number): Decimals {
  return { high: column.high.map((x) => x * factor), low: column.low.map((x) => x * factor) };
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
