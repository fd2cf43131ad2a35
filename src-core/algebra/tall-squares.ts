import { isStill } from '../kernels/kernels';
import type { Decimals } from '../numbers/decimals';
import { rankTolerance } from '../numbers/tolerances';
import { conditionOf, dependentAt } from './dependence';
import { powerOfFourBelow } from './powers-of-two';
import type { Solved } from './solved';
import { placeTall, reduceTall, type TallPlaces, type TallProblem } from './tall';
import { tallBasis } from './tall-basis';
import { refineTall } from './tall-refine';
import { inverseUpper, timesOwnTranspose } from './triangle';

/** Residuals below this share of what they are the difference of are rounding in double-double: 2^-90. */
const NOTHING = 8.077935669463161e-28;
/** Residuals below this share are no more than the rounding of doubles. */
const HARDLY_ANYTHING = 1e-13;
/** Variances below this share of the largest are too uneven for whitening in doubles: 2^-200. */
const EVEN = 6.223015277861142e-61;

interface Scaled {
  readonly variances: Float64Array | null;
  /** Root of what the variances were divided by. */
  readonly root: number;
}

/**
 * Least squares on many cells of given variances, by the kernels: one triangle by reflections of row blocks, refined with double-double
 * residuals; the orthonormal basis is formed when it is first asked for.
 *
 * Null where something has to be scaled, looked at for a dependence or done in double-double first (condition beyond `worst`): by another route.
 */
export function tallLeastSquares(
  model: { readonly columns: readonly Decimals[]; readonly y: Decimals; readonly variances: Float64Array | null },
  worst: number,
): Solved | null {
  const { columns, y } = model;
  const k = columns.length;
  const scaled = scaledVariances(model.variances);
  if (!scaled || k === 0) return null;
  const problem = { columns, y, variances: scaled.variances };
  const places = placeTall(problem);
  const reduced = reduceTall(places);
  if (!reduced || dependentAt(reduced.triangle, rankTolerance(places.cells, k)) >= 0) return null;
  const condition = conditionOf(reduced.triangle);
  if (condition > worst) return null;
  const inverse = inverseUpper(reduced.triangle);
  const solved = refineTall(reduced, { inverse, condition });
  const { root } = scaled;
  const nothing = solved.largest <= NOTHING * solved.size;
  const gramInverse = timesOwnTranspose(inverse);
  const basis = once(() => tallBasis(still(places, problem), inverse));
  return {
    solution: solved.solution.high,
    shift: solved.first.map((first, j) =>
      Math.abs(first - (solved.solution.high[j] as number) - (solved.solution.low[j] as number)),
    ),
    residuals: nothing ? solved.residuals.fill(0) : solved.residuals,
    whitened: nothing ? solved.whitened.fill(0) : times(solved.whitened, 1 / root),
    get basis() {
      return basis();
    },
    inverse: inverse.map((column) => times(column, root)),
    triangle: reduced.triangle.map((column) => times(column, 1 / root)),
    gramInverse: gramInverse.map((row) => times(row, root * root)),
    condition,
    perfect: solved.largest <= HARDLY_ANYTHING * solved.size,
  };
}

/** Divided by a power of four, so that the largest lies near 1; equal ones by themselves, none left. Null where they are too uneven. */
export function scaledVariances(variances: Float64Array | null): Scaled | null {
  if (!variances) return { variances: null, root: 1 };
  let least = Infinity;
  let most = 0;
  for (let g = 0; g < variances.length; g++) {
    const v = variances[g] as number;
    if (!(v > 0 && v < Infinity)) throw new RangeError('a variance is not finite and above 0');
    if (v < least) least = v;
    if (v > most) most = v;
  }
  if (least === most) return { variances: null, root: Math.sqrt(most) };
  if (least < EVEN * most) return null;
  const { power, root } = powerOfFourBelow(most);
  const scaled = new Float64Array(variances.length);
  for (let g = 0; g < scaled.length; g++) scaled[g] = (variances[g] as number) / power;
  return { variances: scaled, root };
}

/** The places with their columns in them: copied again where others have worked in the memory since. */
function still(places: TallPlaces, problem: TallProblem): TallPlaces {
  return isStill(places.room) ? places : placeTall(problem);
}

function once<T>(make: () => T): () => T {
  let made: { readonly value: T } | null = null;
  return () => {
    made ??= { value: make() };
    return made.value;
  };
}

function times(values: Float64Array, factor: number): Float64Array {
  if (factor !== 1) for (let i = 0; i < values.length; i++) values[i] = (values[i] as number) * factor;
  return values;
}
