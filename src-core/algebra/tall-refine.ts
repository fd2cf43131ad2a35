import { allOf } from '../kernels/kernels';
import type { Decimals } from '../numbers/decimals';
import type { TallReduced } from './tall';
import { solveLower, solveUpper } from './triangle';

/** Rounds of refinement at most. */
const ROUNDS = 12;
/** A share of a coefficient, or of its error, that no double shows: 2^-60. */
const ENOUGH = 8.673617379884035e-19;
/** What a step by the triangle alone leaves of an error, in units of the condition: 32 rounding errors. */
const LEAVES = 7.1e-15;
/** 2^27 + 1: splits a double into two halves of 26 bits (Dekker 1971). */
const SPLIT = 134217729;

/** A refined solution of a tall problem, in the units of its columns. */
export interface TallSolved {
  readonly first: Float64Array;
  readonly solution: Decimals;
  /** y - X b, length G. */
  readonly residuals: Float64Array;
  /** residuals / root v. */
  readonly whitened: Float64Array;
  /** The largest |whitened|, and the largest whitened |y| + sum |x b|. */
  readonly largest: number;
  readonly size: number;
}

/**
 * Iterative refinement by the triangle alone, with double-double residuals.
 *
 *     R'R d = X' V^-1 (y - X b),  b + d
 *
 * Each step leaves a share of about the condition times the rounding error, so that one is enough unless the condition is large; steps go on
 * until what is left changes no digit of a coefficient or of its error, or no longer halves.
 *
 * reduced: of full rank; inverse: R^-1 as columns; condition: of the whitened design, its columns scaled to unit length.
 * Source: Björck 1967, 1987 (corrected seminormal equations).
 */
export function refineTall(
  reduced: TallReduced,
  known: { readonly inverse: readonly Float64Array[]; readonly condition: number },
): TallSolved {
  const { triangle } = reduced;
  const k = triangle.length;
  const first = solveUpper(triangle, reduced.along);
  const solution = { high: first.slice(), low: new Float64Array(k) };
  const rowLengths = rowLengthsOf(known.inverse);
  let step: Float64Array = new Float64Array(k);
  let before = Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    const { along, squares } = leftAlong(reduced, solution);
    const turned = solveLower(triangle, along);
    const length = Math.sqrt(turned.reduce((sum, h) => sum + h * h, 0));
    if (!(length < before / 2)) break;
    step = solveUpper(triangle, turned);
    addTo(solution, step);
    const left = LEAVES * known.condition * length;
    const error = Math.sqrt(squares / reduced.places.cells);
    const small = (reach: number, j: number) =>
      reach * left <= ENOUGH * Math.max(Math.abs(solution.high[j] as number), reach * error);
    if (rowLengths.every(small)) break;
    step = new Float64Array(k);
    before = length;
  }
  return { first, solution, ...settled(reduced, solution, step) };
}

function rowLengthsOf(inverse: readonly Float64Array[]): Float64Array {
  return Float64Array.from(inverse, (_, i) =>
    Math.sqrt(inverse.reduce((sum, column) => sum + (column[i] as number) * (column[i] as number), 0)),
  );
}

/** r = y - X b in the kernels' memory; X' V^-1 r and r' V^-1 r. */
function leftAlong({ places }: TallReduced, solution: Decimals): { along: Float64Array; squares: number } {
  const { room, rows, k, chunks, small: b, block } = places;
  const { m, run } = room;
  for (let j = 0; j < k; j++) {
    const high = solution.high[j] as number;
    const spread = SPLIT * high;
    m[b + 4 * j] = high;
    m[b + 4 * j + 1] = solution.low[j] as number;
    m[b + 4 * j + 2] = spread - (spread - high);
    m[b + 4 * j + 3] = high - (spread - (spread - high));
  }
  const along = b + 4 * (k + 1);
  run.residuals({ ...places, b, along, work: block }, allOf(rows));
  run.joinPairs(along, chunks, k + 1);
  return {
    along: Float64Array.from({ length: k }, (_, j) => m[along + 2 * j] as number),
    squares: m[along + 2 * k] as number,
  };
}

function addTo({ high, low }: Decimals, step: Float64Array): void {
  for (let j = 0; j < step.length; j++) {
    const old = high[j] as number;
    const next = old + (step[j] as number);
    const part = next - old;
    const rest = old - (next - part) + ((step[j] as number) - part) + (low[j] as number);
    high[j] = next + rest;
    low[j] = next - (high[j] as number) + rest;
  }
}

/** The residuals after the last step, which those in the memory do not hold yet. */
function settled(
  { places }: TallReduced,
  solution: Decimals,
  step: Float64Array,
): Pick<TallSolved, 'residuals' | 'whitened' | 'largest' | 'size'> {
  const { room, rows, k, chunks, cells, small: steps, high, whitened, block } = places;
  const { m, run } = room;
  for (let j = 0; j < k; j++) {
    m[steps + 2 * j] = step[j] as number;
    m[steps + 2 * j + 1] = Math.abs(solution.high[j] as number);
  }
  const most = steps + 4 * (k + 1);
  run.settle({ ...places, steps, largest: most, work: block }, allOf(rows));
  let largest = 0;
  let size = 0;
  for (let chunk = 0; chunk < chunks; chunk++) {
    largest = Math.max(largest, m[most + 2 * chunk] as number);
    size = Math.max(size, m[most + 2 * chunk + 1] as number);
  }
  return {
    residuals: m.slice(high, high + cells),
    whitened: m.slice(whitened, whitened + cells),
    largest,
    size,
  };
}
