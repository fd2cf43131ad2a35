import type { Decimals } from '../numbers/decimals';
import { awayFromTriangle, type Reflected, towardsTriangle } from './householder';
import { solveLower, solveUpper } from './triangle';
import { type WideNumber, wideAdd, wideCopy, wideDot, wideZeros } from './wide';

/** Rounds of refinement at most; three do for any condition that doubles can judge. */
const ROUNDS = 12;
/** A correction below this share of the solution changes no digit of a double, 2^-70. */
const ENOUGH = 8.470329472543003e-22;

/**
 * Iterative refinement of a least-squares solution on the augmented system, with double-double residuals.
 *
 *     [ I  X ] [ r ]   [ y ]
 *     [ X' 0 ] [ b ] = [ 0 ]
 *
 * columns, y: length G, double-double; reflected: the reflections of the rounded columns; start: the solution so far, k double-double
 * numbers. Returns solution and residuals in double-double. Refinement stops when a round changes nothing that a double can hold, or no longer
 * halves the correction.
 *
 * Source: Björck 1967, BIT 7, 257-278.
 */
export function refine(model: {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly reflected: Reflected;
  readonly start: Decimals;
}): { readonly solution: Decimals; readonly residuals: Decimals } {
  const { columns, y } = model;
  let solution = model.start;
  let left = leftOver(columns, y, solution);
  const residuals = wideCopy(left);
  let before = Infinity;
  for (let round = 0; round < ROUNDS && columns.length > 0; round++) {
    wideAdd(left, [-1, 0], residuals);
    const step = correction(model, left.high, residuals);
    const size = relativeSize(step.solution, solution.high);
    if (!(size < before / 2)) break;
    const next = wideCopy(solution);
    wideAdd(next, [1, 0], { high: step.solution, low: new Float64Array(columns.length) });
    solution = next;
    if (size < ENOUGH) break;
    wideAdd(residuals, [1, 0], { high: step.residuals, low: new Float64Array(y.high.length) });
    left = leftOver(columns, y, solution);
    before = size;
  }
  return { solution, residuals: leftOver(columns, y, solution) };
}

/** What the reflections make of what the two block equations leave over. */
function correction(
  model: { readonly columns: readonly Decimals[]; readonly reflected: Reflected },
  gap: Float64Array,
  residuals: Decimals,
): { solution: Float64Array; residuals: Float64Array } {
  const { columns, reflected } = model;
  const sum: WideNumber = new Float64Array(2);
  const along = Float64Array.from(columns, (column) => -(wideDot(sum, column, residuals)[0] as number));
  const turned = solveLower(reflected.triangle, along);
  towardsTriangle(reflected, gap);
  const right = turned.map((h, j) => (gap[j] as number) - h);
  gap.set(turned);
  awayFromTriangle(reflected, gap);
  return { solution: solveUpper(reflected.triangle, right), residuals: gap };
}

/** y - X b in double-double. */
function leftOver(columns: readonly Decimals[], y: Decimals, solution: Decimals): Decimals {
  const left = wideZeros(y.high.length);
  wideAdd(left, [1, 0], y);
  for (const [j, column] of columns.entries())
    wideAdd(left, [-(solution.high[j] as number), -(solution.low[j] as number)], column);
  return left;
}

/** The largest correction as a share of the largest of what is corrected; 0 where nothing is corrected. */
export function relativeSize(step: Float64Array, solution: Float64Array): number {
  let largest = 0;
  let scale = 0;
  for (let j = 0; j < step.length; j++) {
    largest = Math.max(largest, Math.abs(step[j] as number));
    scale = Math.max(scale, Math.abs(solution[j] as number));
  }
  return largest === 0 ? 0 : largest / (scale || largest);
}
