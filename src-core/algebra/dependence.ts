import type { Decimals } from '../numbers/decimals';
import { rankTolerance, SHARE_OF_DEPENDENCE } from '../numbers/tolerances';
import { singularValues } from './dense';
import { type Reflected, reflectAll, towardsTriangle } from './householder';
import { refine } from './refine';
import { solveUpper } from './triangle';
import { whitenColumns } from './whitened';

/**
 * The first dependence among columns, as `leastSquares` would report it; null where they are independent.
 *
 * Example: [1, 1], [1, 2] and [2, 3] give [0, 1, 2].
 */
export function dependenceAmong(columns: readonly Decimals[]): readonly number[] | null {
  const cells = columns[0]?.high.length ?? 0;
  const zeros = { high: new Float64Array(cells), low: new Float64Array(cells) };
  const whitened = whitenColumns({ columns, y: zeros, variances: new Float64Array(cells).fill(1) });
  return dependenceOf(whitened.columns, reflectAll(whitened.columns.map((column) => column.high.slice())));
}

/** Singular values of R with its columns scaled to unit length: those of the whitened design. */
export function conditionOf(triangle: readonly Float64Array[]): number {
  if (triangle.length === 0) return 1;
  const scaled = triangle.map((column) => column.map((value) => value / lengthOf(column)));
  const values = singularValues(scaled);
  const smallest = values.at(-1) as number;
  return smallest > 0 ? (values[0] as number) / smallest : Number.MAX_VALUE;
}

function lengthOf(column: Float64Array): number {
  let sum = 0;
  for (const x of column) sum += x * x;
  return Math.sqrt(sum);
}

/** The first column that the earlier ones explain, by its pivot on the triangle as a share of its length; -1 where none is. */
export function dependentAt(triangle: readonly Float64Array[], tolerance: number): number {
  return triangle.findIndex((column, j) => Math.abs(column[j] as number) <= tolerance * lengthOf(column));
}

/** The first column that the earlier ones explain, with those that explain it; null where none does. */
export function dependenceOf(columns: readonly Decimals[], { triangle }: Reflected): number[] | null {
  const at = dependentAt(triangle, rankTolerance(columns[0]?.high.length ?? 0, columns.length));
  const lengths = triangle.map(lengthOf);
  if (at < 0) return null;
  if (lengths[at] === 0) return [at];
  const y = columns[at] as Decimals;
  const before = columns.slice(0, at);
  const reflected = reflectAll(before.map((column) => column.high.slice()));
  const target = y.high.slice();
  towardsTriangle(reflected, target);
  const start = { high: solveUpper(reflected.triangle, target), low: new Float64Array(at) };
  const { solution } = refine({ columns: before, y, reflected, start });
  const takesPart = (j: number) =>
    Math.abs(solution.high[j] as number) * (lengths[j] as number) > SHARE_OF_DEPENDENCE * (lengths[at] as number);
  return [...before.keys()].filter(takesPart).concat(at);
}
