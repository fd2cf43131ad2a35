import type { Decimals } from '../numbers/decimals';
import { conditionOf, dependenceOf } from './dependence';
import { basisOf, type Reflected, reflectAll, towardsTriangle } from './householder';
import { largestOf } from './powers-of-two';
import { refine } from './refine';
import { inverseUpper, solveUpper, timesOwnTranspose } from './triangle';
import { type Whitened, whitenColumns } from './whitened';
import { wideBasis, wideGramInverse, wideLeastSquares } from './wide-householder';

/** Work G k^2 up to which everything is done in double-double for the sake of the errors' digits: a few hundredths of a second. */
const WIDE_ALWAYS = 2e5;
/** Work up to which a nearly dependent design is solved wholly in double-double, and the condition from which it is. */
const WIDE_WORK = 1e7;
const WIDE_CONDITION = 1e12;

/** Residuals below this share of what they are the difference of are rounding in double-double: 2^-90. */
const NOTHING = 8.077935669463161e-28;
/** Residuals below this share are no more than the rounding of doubles: nothing can be estimated from them. */
const HARDLY_ANYTHING = 1e-13;

/** A least-squares solution of full rank, in the caller's units. G cells, k columns. */
export interface Solved {
  readonly solution: Float64Array;
  /** |b_QR - b_refined|, k: what refinement changed. */
  readonly shift: Float64Array;
  /** y - X b, length G, the unit of y. */
  readonly residuals: Float64Array;
  /** residuals / sqrt(v). */
  readonly whitened: Float64Array;
  /** Orthonormal columns Q of the whitened design, k of length G. */
  readonly basis: readonly Float64Array[];
  /** R^-1 as columns, X_whitened = Q R. */
  readonly inverse: readonly Float64Array[];
  /** R as columns, upper triangle. */
  readonly triangle: readonly Float64Array[];
  /** (X' V^-1 X)^-1 as rows. */
  readonly gramInverse: readonly Float64Array[];
  /** 2-norm condition of the whitened design, its columns scaled to unit length. */
  readonly condition: number;
  /** True where the residuals are no more than the rounding of doubles leaves. */
  readonly perfect: boolean;
}

/** Otherwise: the columns of the first dependence, in order: all that take part, and no other. */
export type LeastSquares = Solved | { readonly dependent: readonly number[] };

/**
 * Least squares on cells of given variances: whitened in double-double, solved by Householder reflections, refined with double-double residuals;
 * wholly in double-double where the problem is small, or nearly dependent and not too large.
 *
 *     min sum over g of (y_g - x_g b)^2 / v_g
 *
 * columns: k of length G, G >= k; y: length G; both double-double. variances: length G, above 0; null for equal ones.
 * No value may be missing: one that is not finite is a bug and throws. None is changed.
 * Rank is judged on columns scaled by their own norm (`rankTolerance`): units never make a good design look dependent.
 * (X' V^-1 X)^-1 holds squares: it underflows to 0 for columns beyond 1e154, while the solution does not.
 *
 * Example: columns [1, 1, 1] and [0, 1, 2], y = [1, 3, 5] give the solution [1, 2] and no residuals.
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.3; Björck 1967.
 */
export function leastSquares(model: {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly variances: Float64Array | null;
}): LeastSquares {
  const { columns, y } = model;
  const cells = y.high.length;
  if (cells < columns.length) throw new RangeError('fewer cells than columns');
  const variances = model.variances ?? new Float64Array(cells).fill(1);
  const whitened = whitenColumns({ columns, y, variances });
  const reflected = reflectAll(whitened.columns.map((column) => column.high.slice()));
  const dependent = dependenceOf(whitened.columns, reflected);
  if (dependent) return { dependent };
  const condition = conditionOf(reflected.triangle);
  const work = cells * columns.length * columns.length;
  const wide = work <= WIDE_ALWAYS || (condition > WIDE_CONDITION && work <= WIDE_WORK);
  const route = wide ? wideRoute(whitened, reflected, condition) : plainRoute(whitened, reflected);
  return unscaled({ whitened, condition, ...route });
}

interface Route {
  readonly first: Decimals;
  readonly solution: Decimals;
  readonly residuals: Decimals;
  readonly basis: readonly Float64Array[];
  readonly inverse: readonly Float64Array[];
  readonly triangle: readonly Float64Array[];
  readonly gramInverse: readonly Float64Array[];
}

function plainRoute(whitened: Whitened, reflected: Reflected): Route {
  const { columns, y } = whitened;
  const first = plainSolution(whitened, reflected);
  const inverse = inverseUpper(reflected.triangle);
  return {
    first,
    ...refine({ columns, y, reflected, start: first }),
    basis: basisOf(reflected, y.high.length),
    inverse,
    triangle: reflected.triangle,
    gramInverse: timesOwnTranspose(inverse),
  };
}

function wideRoute(whitened: Whitened, reflected: Reflected, condition: number): Route {
  const { columns, y } = whitened;
  const solved = wideLeastSquares(columns, y);
  return {
    first: condition > WIDE_CONDITION ? solved.solution : plainSolution(whitened, reflected),
    ...refine({ columns, y, reflected, start: solved.solution }),
    basis: wideBasis(columns, solved.inverse),
    inverse: solved.inverse.map((column) => column.high),
    triangle: solved.triangle.map((column) => column.high),
    gramInverse: wideGramInverse(solved.inverse),
  };
}

function plainSolution({ columns, y }: Whitened, reflected: Reflected): Decimals {
  const target = y.high.slice();
  towardsTriangle(reflected, target);
  return { high: solveUpper(reflected.triangle, target), low: new Float64Array(columns.length) };
}

/** Back to the caller's units: powers of two alone, so that nothing is rounded. */
function unscaled(parts: Route & { readonly whitened: Whitened; readonly condition: number }): Solved {
  const { whitened, solution, first } = parts;
  const { columnScale, yScale, rootScale, roots } = whitened;
  const k = columnScale.length;
  const size = largestPart(whitened, solution);
  const largest = largestOf(parts.residuals.high);
  const left = largest <= NOTHING * size ? new Float64Array(roots.length) : parts.residuals.high;
  const inUnit = (value: number, j: number) => (value / (columnScale[j] as number)) * yScale;
  const perColumn = (j: number) => rootScale / (columnScale[j] as number);
  return {
    solution: solution.high.map(inUnit),
    shift: Float64Array.from({ length: k }, (_, j) => inUnit(Math.abs(differenceAt(first, solution, j)), j)),
    residuals: left.map((r, g) => r * (roots[g] as number) * yScale),
    whitened: left.map((r) => (r / rootScale) * yScale),
    basis: parts.basis,
    inverse: parts.inverse.map((column) => column.map((value, i) => value * perColumn(i))),
    triangle: parts.triangle.map((column, j) => column.map((value) => value / perColumn(j))),
    gramInverse: parts.gramInverse.map((row, i) => row.map((value, j) => value * perColumn(i) * perColumn(j))),
    condition: parts.condition,
    perfect: largest <= HARDLY_ANYTHING * size,
  };
}

function differenceAt(a: Decimals, b: Decimals, j: number): number {
  return (a.high[j] as number) - (b.high[j] as number) + ((a.low[j] as number) - (b.low[j] as number));
}

/** The largest of what a residual is the difference of: |y| + sum |x b|. */
function largestPart({ columns, y }: Whitened, solution: Decimals): number {
  const sums = y.high.map(Math.abs);
  for (const [j, column] of columns.entries()) {
    const b = Math.abs(solution.high[j] as number);
    for (let g = 0; g < sums.length; g++) sums[g] = (sums[g] as number) + b * Math.abs(column.high[g] as number);
  }
  return largestOf(sums);
}
