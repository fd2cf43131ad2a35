import type { Decimals } from '../numbers/decimals';
import type { Covariance } from './covariance';
import type { Factored } from './factored';
import { awayFromTriangle, type Reflected, towardsTriangle } from './householder';
import { relativeSize } from './refine';
import { solveLower, solveUpper } from './triangle';
import { type WideNumber, wideAdd, wideCopy, wideDot, wideProduct, wideZeros } from './wide';

/** Rounds at most, and a correction that changes no digit of a double, 2^-70: as in `refine`. */
const ROUNDS = 12;
const ENOUGH = 8.470329472543003e-22;

/**
 * Iterative refinement of a least-squares solution under a covariance whose factor has the digits of doubles alone: Omega itself, and not its factor, enters
 * the residuals, formed in double-double.
 *
 *     [ Omega  X ] [ l ]   [ y ]
 *     [ X'     0 ] [ b ] = [ 0 ],   l = Omega^-1 (y - X b)
 *
 * columns, y: not whitened, in double-double; reflected: of the whitened columns; start: the solution so far; residuals: whitened. Returns the solution and
 * the whitened residuals P'l.
 *
 * Source: Björck 1967; Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed., 20.5.
 */
export function refineThrough(model: {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly covariance: Covariance;
  readonly factor: Factored;
  readonly reflected: Reflected;
  readonly start: Decimals;
  readonly residuals: Float64Array;
}): { readonly solution: Decimals; readonly residuals: Decimals } {
  const { columns, y, factor, reflected } = model;
  const solution = wideCopy(model.start);
  const weighed: Decimals = { high: factor.backwards(model.residuals), low: new Float64Array(y.high.length) };
  const sum: WideNumber = new Float64Array(2);
  let before = Infinity;
  for (let round = 0; round < ROUNDS && columns.length > 0; round++) {
    const left = gapOf(model, solution, weighed);
    const along = Float64Array.from(columns, (column) => -(wideDot(sum, column, weighed)[0] as number));
    const turned = solveLower(reflected.triangle, along);
    const gap = factor.whitened(left.high);
    towardsTriangle(reflected, gap);
    const right = turned.map((h, j) => (gap[j] as number) - h);
    gap.set(turned);
    awayFromTriangle(reflected, gap);
    const step = solveUpper(reflected.triangle, right);
    const size = relativeSize(step, solution.high);
    if (!(size < before / 2)) break;
    wideAdd(solution, [1, 0], { high: step, low: new Float64Array(step.length) });
    wideAdd(weighed, [1, 0], { high: factor.backwards(gap), low: new Float64Array(gap.length) });
    if (size < ENOUGH) break;
    before = size;
  }
  return { solution, residuals: { high: factor.root(weighed.high), low: new Float64Array(y.high.length) } };
}

/** y - X b - Omega l in double-double. */
function gapOf(
  { columns, y, covariance }: Parameters<typeof refineThrough>[0],
  solution: Decimals,
  weighed: Decimals,
): Decimals {
  const left = wideCopy(y);
  for (const [j, column] of columns.entries())
    wideAdd(left, [-(solution.high[j] as number), -(solution.low[j] as number)], column);
  wideAdd(left, [-1, 0], wideApplied(covariance, weighed));
  return left;
}

/** Omega x in double-double; blocks by their full matrix. */
function wideApplied({ diagonal, blocks }: Covariance, x: Decimals): Decimals {
  const result = wideZeros(diagonal.length);
  for (const [g, v] of diagonal.entries()) wideProduct(result, g, x.high[g] as number, x.low[g] as number, v, 0);
  const sum: WideNumber = new Float64Array(2);
  for (const { cells, matrix } of blocks ?? []) {
    const n = cells.length;
    const part = wideZeros(n);
    const zeros = new Float64Array(n);
    for (let i = 0; i < n; i++) {
      part.high[i] = x.high[cells[i] as number] as number;
      part.low[i] = x.low[cells[i] as number] as number;
    }
    for (let i = 0; i < n; i++) {
      wideDot(sum, { high: matrix.subarray(i * n, (i + 1) * n), low: zeros }, part);
      result.high[cells[i] as number] = sum[0] as number;
      result.low[cells[i] as number] = sum[1] as number;
    }
  }
  return result;
}
