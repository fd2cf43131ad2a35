import { leastSquares } from '../algebra/least-squares';
import { largestOf } from '../algebra/powers-of-two';
import type { Design } from '../model/design';
import type { MeanDependent } from '../model/mean-dependent';
import { fromDoubles } from '../numbers/decimals';
import { lengthOf } from '../numbers/sums';

/** Below this share of the largest movement a cell, and a coefficient, stands still. */
const STILL = 1e-7;
const HARDLY_MOVES = 1e-3;
/** What runs away moves by about 1 on a log or logit scale in every step. */
const RUNS = 0.1;

/** Cells whose fitted means run to none or all together, and the coefficients that take them there. */
export interface Separation {
  readonly cells: readonly number[];
  readonly coefficients: readonly number[];
}

/**
 * Whether a direction of the coefficients separates cells: it takes some that hold none (or all) ever nearer to that, and leaves every other cell as
 * it is, so that the likelihood rises along it without end.
 *
 * step: the direction by cell, a combination of the columns. Null where the direction is none of these.
 *
 * Example: a category level in which no cell has any count.
 * Source: Albert & Anderson 1984.
 */
export function separationAlong(
  of: { readonly part: MeanDependent; readonly design: Design },
  step: Float64Array,
): Separation | null {
  const cells = separatedCells(of.part, step);
  if (!cells) return null;
  const solved = leastSquares({ columns: of.design.columns, y: fromDoubles(step), variances: null });
  if ('dependent' in solved) throw new RangeError('the design was not checked');
  const moves = of.design.columns.map(({ high }, j) => Math.abs(solved.solution[j] as number) * lengthOf(high));
  const most = Math.max(...moves);
  return { cells, coefficients: moves.flatMap((move, j) => (move > HARDLY_MOVES * most ? [j] : [])) };
}

/** Cells that a step takes outwards, where it leaves all others as they are; else null. */
export function separatedCells({ kind, observed }: MeanDependent, step: Float64Array): number[] | null {
  const largest = largestOf(step);
  if (!(largest >= RUNS)) return null;
  const cells: number[] = [];
  for (const [g, d] of step.entries()) {
    if (Math.abs(d) <= STILL * largest) continue;
    const y = observed[g] as number;
    const outwards = d < 0 ? y === 0 : kind === 'binomial' && y === 1;
    if (!outwards) return null;
    cells.push(g);
  }
  return cells;
}
