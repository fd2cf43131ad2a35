import type { Decimals } from '../numbers/decimals';
import { log } from '../numbers/elementary';
import { choleskyOf, forwardInPlace } from './cholesky';
import { powerOfTwoBelow } from './powers-of-two';
import { wideZeros } from './wide';
import { wideCholeskyOf, wideForward } from './wide-cholesky';

/** Work n^3 up to which a block is factored in double-double: a fraction of a second. */
const WIDE_WORK = 1e8;

/** A block of Omega as P P': what is asked of it, each in place on the block's own n cells. */
export interface BlockFactor {
  /** P^-1 x */
  readonly whiten: (x: Float64Array) => void;
  /** P^-1 x in double-double. */
  readonly whitenWide: (x: Decimals) => void;
  /** True where the factor itself has the digits of double-double. */
  readonly wide: boolean;
  /** P x */
  readonly unwhiten: (x: Float64Array) => void;
  /** P^-T x */
  readonly backwards: (x: Float64Array) => void;
  /** P' x */
  readonly root: (x: Float64Array) => void;
  /** ln det of the block. */
  readonly logDeterminant: number;
  /** Diagonal of the block's inverse. */
  readonly inverseDiagonal: () => Float64Array;
}

/**
 * The Cholesky factor of a dense block, P = D L with D powers of two that bring the diagonal near 1; in double-double where the block is small
 * enough. Null where it is not positive definite to the precision at hand.
 *
 * matrix: n x n, row after row.
 */
export function denseFactor(matrix: Float64Array, n: number): BlockFactor | null {
  const units = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const entry = matrix[i * n + i] as number;
    if (!(entry > 0 && entry < Infinity)) return null;
    units[i] = powerOfTwoBelow(Math.sqrt(entry));
  }
  const scaled = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++)
      scaled[i * n + j] = (matrix[i * n + j] as number) / (units[i] as number) / (units[j] as number);
  const wide = n * n * n <= WIDE_WORK ? wideCholeskyOf(scaled, n) : null;
  const factor = wide ? wide.high : n * n * n <= WIDE_WORK ? null : choleskyOf(scaled, n);
  return factor && { ...factorFrom(factor, wide, units), wide: wide !== null };
}

function factorFrom(factor: Float64Array, wide: Decimals | null, units: Float64Array): Omit<BlockFactor, 'wide'> {
  const n = units.length;
  let logDeterminant = 0;
  for (let i = 0; i < n; i++) logDeterminant += 2 * (log(factor[i * n + i] as number) + log(units[i] as number));
  return {
    whiten: (x) => {
      divide(x, units);
      forwardInPlace(factor, x, n);
    },
    whitenWide: (x) => {
      divide(x.high, units);
      divide(x.low, units);
      if (wide) wideForward(wide, x);
      else forwardOnly(factor, x);
    },
    unwhiten: (x) => {
      timesLower(factor, x);
      multiply(x, units);
    },
    backwards: (x) => {
      backwardInPlace(factor, x);
      divide(x, units);
    },
    root: (x) => {
      multiply(x, units);
      timesUpper(factor, x);
    },
    logDeterminant,
    inverseDiagonal: () => inverseDiagonalOf(factor, units),
  };
}

/** L^-1 x where L has the digits of doubles alone: no more are left. */
function forwardOnly(factor: Float64Array, { high, low }: Decimals): void {
  for (let i = 0; i < high.length; i++) high[i] = (high[i] as number) + (low[i] as number);
  forwardInPlace(factor, high, high.length);
  low.fill(0);
}

function divide(x: Float64Array, units: Float64Array): void {
  for (let i = 0; i < x.length; i++) x[i] = (x[i] as number) / (units[i] as number);
}

function multiply(x: Float64Array, units: Float64Array): void {
  for (let i = 0; i < x.length; i++) x[i] = (x[i] as number) * (units[i] as number);
}

/** Solves L' x = b in place. */
function backwardInPlace(factor: Float64Array, x: Float64Array): void {
  const n = x.length;
  for (let i = n - 1; i >= 0; i--) {
    const value = (x[i] as number) / (factor[i * n + i] as number);
    x[i] = value;
    for (let j = 0; j < i; j++) x[j] = (x[j] as number) - (factor[i * n + j] as number) * value;
  }
}

/** L x in place, from the last cell up. */
function timesLower(factor: Float64Array, x: Float64Array): void {
  const n = x.length;
  for (let i = n - 1; i >= 0; i--) {
    let sum = 0;
    for (let j = 0; j <= i; j++) sum += (factor[i * n + j] as number) * (x[j] as number);
    x[i] = sum;
  }
}

/** L' x in place, from the first cell down. */
function timesUpper(factor: Float64Array, x: Float64Array): void {
  const n = x.length;
  for (let i = 0; i < n; i++) {
    const value = x[i] as number;
    for (let j = 0; j < i; j++) x[j] = (x[j] as number) + (factor[i * n + j] as number) * value;
    x[i] = (factor[i * n + i] as number) * value;
  }
}

/** Squared lengths of the columns of L^-1. */
function inverseDiagonalOf(factor: Float64Array, units: Float64Array): Float64Array {
  const n = units.length;
  const diagonal = new Float64Array(n);
  const column = new Float64Array(n);
  for (let j = 0; j < n; j++) {
    column.fill(0);
    column[j] = 1;
    let squares = 0;
    for (let i = j; i < n; i++) {
      let left = column[i] as number;
      for (let l = j; l < i; l++) left -= (factor[i * n + l] as number) * (column[l] as number);
      left /= factor[i * n + i] as number;
      column[i] = left;
      squares += left * left;
    }
    diagonal[j] = squares / (units[j] as number) / (units[j] as number);
  }
  return diagonal;
}

/** A column of double-double zeros cut from one of length G. */
export function takeWide(column: Decimals, cells: Int32Array): Decimals {
  const part = wideZeros(cells.length);
  for (let i = 0; i < cells.length; i++) {
    part.high[i] = column.high[cells[i] as number] as number;
    part.low[i] = column.low[cells[i] as number] as number;
  }
  return part;
}
