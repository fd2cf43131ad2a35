import { median, sorted } from '../numbers/order';
import type { Plan } from '../protocol/plan';
import type { FitResult } from '../protocol/result';
import type { Cells } from '../table/cells';
import { freedomOf } from '../table/matrix';

/**
 * The freedom behind each cell's given error; null where errors are taken as exact or the plan gives none.
 *
 * Length G. A number in the plan holds for every cell; a column names each cell's own.
 *
 * Example: `freedom: 5` on ten cells gives ten fives.
 */
export function errorFreedomsOf(
  plan: Pick<Plan, 'variance'>,
  cells: Pick<Cells, 'count' | 'numbers'>,
): Float64Array | null {
  const given = plan.variance.parts.find((part) => part.kind === 'given');
  if (given === undefined || given.freedom === null) return null;
  if (typeof given.freedom === 'number') return new Float64Array(cells.count).fill(given.freedom);
  return cells.numbers(given.freedom.column).values.high;
}

/**
 * The freedom of a given matrix as a whole; null where the plan has none, or takes it as exact. Of a column's freedoms, one a cell, the smallest
 * holds: they describe one matrix.
 */
export function matrixFreedomOf(plan: Pick<Plan, 'variance'>, cells: Pick<Cells, 'count' | 'numbers'>): number | null {
  const matrix = plan.variance.parts.find((part) => part.kind === 'matrix');
  return matrix ? freedomOf(matrix.freedom, (column) => Array.from(cells.numbers(column).values.high)) : null;
}

function freedomsOfMatrix(plan: Pick<Plan, 'variance'>, cells: Pick<Cells, 'count' | 'numbers'>): Float64Array | null {
  const matrix = plan.variance.parts.find((part) => part.kind === 'matrix');
  if (matrix === undefined || matrix.freedom === null) return null;
  if (typeof matrix.freedom === 'number') return new Float64Array(cells.count).fill(matrix.freedom);
  return cells.numbers(matrix.freedom.column).values.high;
}

/** How many degrees of freedom stand behind the given errors or matrix: the middle and both ends; null where they are taken as exact. */
export function errorFreedomOf(
  plan: Pick<Plan, 'variance'>,
  cells: Pick<Cells, 'count' | 'numbers'>,
): FitResult['errorFreedom'] {
  const freedoms = errorFreedomsOf(plan, cells) ?? freedomsOfMatrix(plan, cells);
  if (freedoms === null || freedoms.length === 0) return null;
  const rising = sorted(freedoms);
  return { median: median(rising), low: rising[0] as number, high: rising[rising.length - 1] as number };
}

/**
 * Satterthwaite's freedom of a weighted sum of cells whose variances are themselves estimates.
 *
 *     (sum c^2 v)^2 / sum (c^4 s^4 / d)
 *
 * pulls: c, length G; variances: v, the whole variance of each cell; estimated: s^2, the part of it that is an estimate, on freedoms d.
 * Null where the sum is 0 or a freedom is not above 0.
 *
 * Example: equal pulls and variances on 10 cells of freedom 5 give 50.
 * Source: Satterthwaite 1946.
 */
export function satterthwaiteFreedom(known: {
  readonly pulls: ArrayLike<number>;
  readonly variances: Float64Array;
  readonly estimated: Float64Array;
  readonly freedoms: Float64Array;
}): number | null {
  const { pulls, variances, estimated, freedoms } = known;
  const largest = variances.reduce((most, v, g) => Math.max(most, Math.abs(pulls[g] as number) * Math.sqrt(v)), 0);
  if (!(largest > 0)) return null;
  let total = 0;
  let spread = 0;
  for (let g = 0; g < variances.length; g++) {
    const d = freedoms[g] as number;
    if (!(d > 0)) return null;
    const scaled = (pulls[g] as number) / largest;
    total += scaled * scaled * (variances[g] as number);
    const share = scaled * scaled * (estimated[g] as number);
    spread += (share * share) / d;
  }
  return spread > 0 ? (total * total) / spread : null;
}
