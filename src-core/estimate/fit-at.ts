import { type Covariance, independent, throughCovariance, timesFactor } from '../algebra/covariance';
import { errorOf, factored, factorOf } from '../algebra/factored';
import { leastSquares, type Solved } from '../algebra/least-squares';
import { leveragesOf } from '../algebra/orthonormal';
import { timesTransposed } from '../algebra/tall-products';
import type { Design } from '../model/design';
import { omegaAt, type Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import { log10 } from '../numbers/elementary';
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
  /** A of the estimator's weights A^-1 where they do not come from the structure. */
  readonly weighting: Covariance | null;
  readonly theta: Float64Array;
  readonly startsTried: number;
  /** Least squares under the weights, where it is known already. */
  readonly solved?: Solved;
}

/** Omega at theta with a free common scale left out. */
export function shapeAt(structure: Structure, theta: Float64Array): Covariance {
  if (!structure.commonScale) return omegaAt(structure, theta);
  const unit = theta.slice();
  unit[structure.scaleAt] = 1;
  return omegaAt(structure, unit);
}

/** A of the structure's own weights A^-1: its shape, or the diagonal of one that is not to be inverted. */
export function ownWeighting(structure: Structure, shape: Covariance): Covariance {
  return structure.byDiagonal ? independent(shape.diagonal) : shape;
}

/**
 * The fitted model at given variance parameters: the coefficients, their covariance and what hangs on them.
 *
 *     b = (X' A^-1 X)^-1 X' A^-1 y = C y,  Var(b) = C Omega C'
 *
 * A: the weighting, the structure's own shape unless one is given; its diagonal where a matrix of few degrees of freedom is not to be inverted. A scale that is NaN (no residuals to estimate it from) leaves the
 * covariance NaN. The design must have full rank (`designOf` refuses others): a dependence that only the weights bring about throws.
 */
export function fitAt(place: FitPlace): Fitted {
  const { response, design, structure, theta } = place;
  const omegaShape = shapeAt(structure, theta);
  const targetIsStructure = place.weighting === null && !structure.byDiagonal;
  const weighting = place.weighting ?? ownWeighting(structure, omegaShape);
  const solved = place.solved ?? leastSquares({ columns: design.columns, y: response, covariance: weighting });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  const scale = structure.commonScale ? (theta[structure.scaleAt] as number) : null;
  const held = heldParts({ solved, omegaShape, weighting, scale, targetIsStructure });
  return {
    ...held,
    response,
    design,
    structure,
    estimate: place.estimate,
    theta,
    scale,
    targetIsStructure,
    residualFreedom: response.high.length - design.columns.length,
    estimatedParameters: structure.parameters.filter((parameter) => parameter.fixed === null).length,
    digits: digitsOf(solved, held.errors),
    converged: true,
    startsTried: place.startsTried,
  };
}

type HeldParts = Pick<
  Fitted,
  | 'omega'
  | 'omegaShape'
  | 'correlated'
  | 'variances'
  | 'shape'
  | 'weighting'
  | 'coefficients'
  | 'residuals'
  | 'whitened'
  | 'covariance'
  | 'errors'
  | 'pulls'
  | 'gramInverse'
  | 'leverages'
  | 'basis'
  | 'inverse'
  | 'condition'
>;

/** What hangs on one least-squares solution, its weighting and Omega. */
export function heldParts(of: {
  readonly solved: Solved;
  readonly omegaShape: Covariance;
  readonly weighting: Covariance;
  readonly scale: number | null;
  readonly targetIsStructure: boolean;
}): HeldParts {
  const { solved, omegaShape, weighting, scale } = of;
  const pulls = pullsOf(solved, weighting);
  const omega = scale === null ? omegaShape : timesFactor(omegaShape, scale);
  const covariance = of.targetIsStructure
    ? solved.gramInverse.map((row) => row.map((value) => value * (scale ?? 1)))
    : throughCovariance(pulls, omega);
  return {
    omega,
    omegaShape,
    correlated: omegaShape.blocks !== null,
    variances: omega.diagonal,
    shape: omegaShape.diagonal,
    weighting,
    coefficients: solved.solution,
    residuals: solved.residuals,
    whitened: of.targetIsStructure ? solved.whitened : whitenedBy(omegaShape, solved.residuals),
    covariance,
    errors: errorsOf({ covariance, pulls, omega }),
    pulls,
    gramInverse: solved.gramInverse,
    leverages: leveragesUnder(solved, weighting),
    basis: solved.basis,
    inverse: solved.inverse,
    condition: solved.condition,
  };
}

/** P^-1 r; by the roots of the variances alone where Omega has no inverse (a matrix of few degrees of freedom). */
function whitenedBy(omega: Covariance, residuals: Float64Array): Float64Array {
  const factoring = omega.blocks && factored(omega);
  if (factoring?.ok) return factoring.factor.whitened(residuals);
  return residuals.map((r, g) => r / Math.sqrt(omega.diagonal[g] as number));
}

/** h_g = |P^-T q_g|^2 / (A^-1)_gg with the basis q of the whitened design. */
function leveragesUnder({ basis, residuals }: Solved, weighting: Covariance): Float64Array {
  if (!weighting.blocks) return leveragesOf(basis, residuals.length);
  const { backwards, inverseDiagonal } = factorOf(weighting);
  const own = inverseDiagonal();
  const back = basis.map(backwards);
  const squares = new Float64Array(residuals.length);
  for (const vector of back)
    for (const [g, value] of vector.entries()) squares[g] = (squares[g] as number) + value * value;
  return squares.map((square, g) => Math.min(1, square / (own[g] as number)));
}

/** C = R^-1 Q' P^-1, k rows of length G, with the weighting A = P P'. */
export function pullsOf({ basis, inverse }: Solved, weighting: Covariance): Float64Array[] {
  const { diagonal, blocks } = weighting;
  const ones = () => new Float64Array(diagonal.length).fill(1);
  const rows = timesTransposed(basis, inverse, blocks ? ones() : diagonal.map((v) => 1 / Math.sqrt(v)));
  return blocks ? rows.map(factorOf(weighting).backwards) : rows;
}

/** Below the one and above the other a variance has lost digits: its root is taken from the pulls. */
const LEAST_VARIANCE = 1e-290;
const MOST_VARIANCE = 1e290;

/** Standard errors: roots of the diagonal of C Omega C', by the length of P'C' where a variance runs over or under. */
export function errorsOf(of: {
  readonly covariance: readonly ArrayLike<number>[];
  readonly pulls: readonly Float64Array[];
  readonly omega: Covariance;
}): Float64Array {
  return Float64Array.from(of.covariance, (row, j) => {
    const variance = row[j] as number;
    if (variance > LEAST_VARIANCE && variance < MOST_VARIANCE) return Math.sqrt(variance);
    return errorOf(of.pulls[j] as Float64Array, of.omega);
  });
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
