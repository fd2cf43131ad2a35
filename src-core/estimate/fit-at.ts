import { leastSquares, type Solved } from '../algebra/least-squares';
import { leveragesOf } from '../algebra/orthonormal';
import { throughDiagonal } from '../algebra/through-diagonal';
import type { Design } from '../model/design';
import type { Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import { log10 } from '../numbers/elementary';
import { lengthOf } from '../numbers/sums';
import type { Estimate } from '../protocol/plan';
import type { Fitted } from './fitted';

/** Digits that a double can be certified to. */
const ALL_DIGITS = 17;
/** A coefficient is 0 to rounding below this share of the response's own size in its units. */
const ROUNDING = 2.220446049250313e-16;

export interface FitPlace {
  readonly response: Decimals;
  readonly design: Design;
  readonly structure: Structure;
  readonly estimate: Estimate;
  /** a_g of the estimator's weights 1 / a_g where they do not come from the structure. */
  readonly weighting: Float64Array | null;
  readonly theta: Float64Array;
  readonly startsTried: number;
}

/** v_g at theta with a free common scale left out. */
export function shapeAt(structure: Structure, theta: Float64Array): Float64Array {
  if (!structure.commonScale) return structure.variancesAt(theta);
  const unit = theta.slice();
  unit[structure.scaleAt] = 1;
  return structure.variancesAt(unit);
}

/**
 * The fitted model at given variance parameters: the coefficients, their covariance and what hangs on them.
 *
 *     b = (X' A^-1 X)^-1 X' A^-1 y = C y,  Var(b) = C Omega C'
 *
 * A: the weighting, the structure's own shape unless one is given. A scale that is NaN (no residuals to estimate it from) leaves the
 * covariance NaN. The design must have full rank (`designOf` refuses others): a dependence that only the weights bring about throws.
 */
export function fitAt(place: FitPlace): Fitted {
  const { response, design, structure, theta } = place;
  const shape = shapeAt(structure, theta);
  const weighting = place.weighting ?? shape;
  const solved = leastSquares({ columns: design.columns, y: response, variances: weighting });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  const scale = structure.commonScale ? (theta[structure.scaleAt] as number) : null;
  const pulls = pullsOf(solved, weighting);
  const covariance = place.weighting
    ? throughDiagonal(
        pulls,
        shape.map((v) => v * (scale ?? 1)),
      )
    : solved.gramInverse.map((row) => row.map((value) => value * (scale ?? 1)));
  const variances = scale === null ? shape : shape.map((v) => v * scale);
  const errors = errorsOf({ covariance, pulls, variances });
  return {
    response,
    design,
    structure,
    estimate: place.estimate,
    theta,
    variances,
    shape,
    scale,
    weighting,
    targetIsStructure: place.weighting === null,
    coefficients: solved.solution,
    residuals: solved.residuals,
    whitened: place.weighting ? solved.residuals.map((r, g) => r / Math.sqrt(shape[g] as number)) : solved.whitened,
    covariance,
    errors,
    pulls,
    gramInverse: solved.gramInverse,
    leverages: leveragesOf(solved.basis, response.high.length),
    residualFreedom: response.high.length - design.columns.length,
    estimatedParameters: structure.parameters.filter((parameter) => parameter.fixed === null).length,
    digits: digitsOf(solved, errors),
    condition: solved.condition,
    converged: true,
    startsTried: place.startsTried,
  };
}

/** C = R^-1 Q' A^-1/2, k rows of length G. */
export function pullsOf({ basis, inverse }: Solved, weighting: Float64Array): Float64Array[] {
  const roots = weighting.map(Math.sqrt);
  return basis.map((_, j) => {
    const row = new Float64Array(roots.length);
    for (let i = j; i < basis.length; i++) {
      const share = (inverse[i] as Float64Array)[j] as number;
      const vector = basis[i] as Float64Array;
      for (let g = 0; g < row.length; g++) row[g] = (row[g] as number) + share * (vector[g] as number);
    }
    for (let g = 0; g < row.length; g++) row[g] = (row[g] as number) / (roots[g] as number);
    return row;
  });
}

/** Below the one and above the other a variance has lost digits: its root is taken from the pulls. */
const LEAST_VARIANCE = 1e-290;
const MOST_VARIANCE = 1e290;

/** Standard errors: roots of the diagonal of C diag(v) C', by the length of C v^1/2 where a variance runs over or under. */
export function errorsOf(of: {
  readonly covariance: readonly ArrayLike<number>[];
  readonly pulls: readonly Float64Array[];
  readonly variances: Float64Array;
}): Float64Array {
  return Float64Array.from(of.covariance, (row, j) => {
    const variance = row[j] as number;
    if (variance > LEAST_VARIANCE && variance < MOST_VARIANCE) return Math.sqrt(variance);
    return errorOf(of.pulls[j] as Float64Array, of.variances);
  });
}

/** Root of sum c^2 v, the error of the combination of cells with these pulls; NaN where a variance is. */
export function errorOf(pull: Float64Array, variances: Float64Array): number {
  return lengthOf(pull.map((c, g) => c * Math.sqrt(variances[g] as number)));
}

/**
 * Digits to which plain reflections and the refined solution agree.
 *
 *     min over j of -log10( |b_QR - b_refined| / max(|b_j|, se_j) ), at most 17
 *
 * Where both are rounding (a coefficient of 0 in a perfect fit) against the largest coefficient in the column's unit.
 */
function digitsOf({ solution, shift, gramInverse }: Solved, errors: Float64Array): number {
  let fewest = ALL_DIGITS;
  const size = largestShare(solution, gramInverse);
  for (let j = 0; j < solution.length; j++) {
    const changed = shift[j] as number;
    if (changed === 0) continue;
    const error = errors[j] as number;
    const whole = size * Math.sqrt((gramInverse[j] as Float64Array)[j] as number);
    const own = Math.max(Math.abs(solution[j] as number), Number.isFinite(error) ? error : 0);
    const against = own > ROUNDING * whole ? own : whole;
    if (against > 0) fewest = Math.min(fewest, -log10(changed / against));
  }
  return Math.max(0, fewest);
}

/** The largest coefficient in units of its own column: |b_j| over the root of its entry in the inverse. */
function largestShare(solution: Float64Array, gramInverse: readonly Float64Array[]): number {
  let largest = 0;
  for (let j = 0; j < solution.length; j++) {
    const unit = Math.sqrt((gramInverse[j] as Float64Array)[j] as number);
    if (unit > 0) largest = Math.max(largest, Math.abs(solution[j] as number) / unit);
  }
  return largest;
}
