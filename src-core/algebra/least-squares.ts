import { type Decimals, scaledBy } from '../numbers/decimals';
import type { Covariance } from './covariance';
import { conditionOf, dependenceOf } from './dependence';
import { factorOf } from './factored';
import { basisOf, type Reflected, reflectAll, towardsTriangle } from './householder';
import { largestOf } from './powers-of-two';
import { refine } from './refine';
import { refineThrough } from './refine-through';
import type { Solved } from './solved';
import { tallLeastSquares } from './tall-squares';
import { inverseUpper, solveUpper, timesOwnTranspose } from './triangle';
import { type Whitened, whitenColumns, whitenThrough } from './whitened';
import { wideAdd, wideCopy } from './wide';
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

export type { Solved } from './solved';

/** Otherwise: the columns of the first dependence, in order: all that take part, and no other. */
export type LeastSquares = Solved | { readonly dependent: readonly number[] };

interface Asked {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly variances?: Float64Array | null;
  readonly covariance?: Covariance;
}

/**
 * Least squares on cells of given variances, or of a given covariance: whitened in double-double, solved by Householder reflections, refined with double-double residuals;
 * wholly in double-double where the problem is small, or nearly dependent and not too large.
 *
 *     min sum over g of (y_g - x_g b)^2 / v_g,  or  min (y - X b)' Omega^-1 (y - X b)
 *
 * columns: k of length G, G >= k; y: length G; both double-double. variances: length G, above 0; null or absent for equal ones. covariance: in
 * their place, positive definite (`factored` says whether it is; another one throws).
 * No value may be missing: one that is not finite is a bug and throws. None is changed.
 * Rank is judged on columns scaled by their own norm (`rankTolerance`): units never make a good design look dependent.
 * (X' V^-1 X)^-1 holds squares: it underflows to 0 for columns beyond 1e154, while the solution does not.
 *
 * Example: columns [1, 1, 1] and [0, 1, 2], y = [1, 3, 5] give the solution [1, 2] and no residuals.
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.3; Björck 1967.
 */
export function leastSquares(model: Asked): LeastSquares {
  const { columns, y } = model;
  const cells = y.high.length;
  if (cells < columns.length) throw new RangeError('fewer cells than columns');
  const tall = cells * columns.length * columns.length > WIDE_ALWAYS ? tallRoute(model) : null;
  if (tall) return tall;
  const whitened = whitenedBy(model);
  const reflected = reflectAll(whitened.columns.map((column) => column.high.slice()));
  const dependent = dependenceOf(whitened.columns, reflected);
  if (dependent) return { dependent };
  const condition = conditionOf(reflected.triangle);
  const work = cells * columns.length * columns.length;
  const wide = work <= WIDE_ALWAYS || (condition > WIDE_CONDITION && work <= WIDE_WORK);
  const route = wide ? wideRoute(whitened, reflected, condition) : plainRoute(whitened, reflected);
  return unscaled({ model, whitened, condition, ...route, ...throughOmega(model, { whitened, reflected, route }) });
}

/** Where Omega's own factor has no more than the digits of doubles, the solution is refined on Omega itself; else nothing. */
function throughOmega(
  { columns, y, covariance }: Asked,
  of: { readonly whitened: Whitened; readonly reflected: Reflected; readonly route: Route },
): Partial<Pick<Route, 'solution' | 'residuals'>> {
  if (!covariance?.blocks) return {};
  const factor = factorOf(covariance);
  if (factor.wide) return {};
  const { whitened, reflected, route } = of;
  return refineThrough({
    columns: columns.map((column, j) => scaledBy(column, 1 / (whitened.columnScale[j] as number))),
    y: scaledBy(y, 1 / whitened.yScale),
    covariance,
    factor,
    reflected,
    start: route.solution,
    residuals: route.residuals.high,
  });
}

/** By the kernels; null where another route has to be taken. */
function tallRoute({ columns, y, variances, covariance }: Asked): Solved | null {
  if (covariance?.blocks) return null;
  const work = y.high.length * columns.length * columns.length;
  const own = covariance?.diagonal ?? variances ?? null;
  return tallLeastSquares({ columns, y, variances: own }, work <= WIDE_WORK ? WIDE_CONDITION : Infinity);
}

function whitenedBy({ columns, y, variances, covariance }: Asked): Whitened {
  if (!covariance?.blocks) {
    const own = covariance?.diagonal ?? variances ?? new Float64Array(y.high.length).fill(1);
    return whitenColumns({ columns, y, variances: own });
  }
  return whitenThrough({ columns, y, factor: factorOf(covariance) });
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
function unscaled(
  parts: Route & { readonly model: Asked; readonly whitened: Whitened; readonly condition: number },
): Solved {
  const { model, whitened, solution, first } = parts;
  const { columnScale, yScale, rootScale, roots } = whitened;
  const k = columnScale.length;
  const size = largestPart(whitened, solution);
  const largest = largestOf(parts.residuals.high);
  const nothing = largest <= NOTHING * size;
  const left = nothing ? new Float64Array(model.y.high.length) : parts.residuals.high;
  const inUnit = (value: number, j: number) => (value / (columnScale[j] as number)) * yScale;
  const perColumn = (j: number) => rootScale / (columnScale[j] as number);
  return {
    solution: solution.high.map(inUnit),
    shift: Float64Array.from({ length: k }, (_, j) => inUnit(Math.abs(differenceAt(first, solution, j)), j)),
    residuals: roots
      ? left.map((r, g) => r * (roots[g] as number) * yScale)
      : nothing
        ? left.slice()
        : leftOver(model, {
            high: solution.high.map(inUnit),
            low: solution.low.map(inUnit),
          }),
    whitened: left.map((r) => (r / rootScale) * yScale),
    basis: parts.basis,
    inverse: parts.inverse.map((column) => column.map((value, i) => value * perColumn(i))),
    triangle: parts.triangle.map((column, j) => column.map((value) => value / perColumn(j))),
    gramInverse: parts.gramInverse.map((row, i) => row.map((value, j) => value * perColumn(i) * perColumn(j))),
    condition: parts.condition,
    perfect: largest <= HARDLY_ANYTHING * size,
  };
}

/** y - X b, formed in double-double. */
function leftOver({ columns, y }: Asked, solution: Decimals): Float64Array {
  const left = wideCopy(y);
  for (const [j, column] of columns.entries())
    wideAdd(left, [-(solution.high[j] as number), -(solution.low[j] as number)], column);
  return left.high;
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
