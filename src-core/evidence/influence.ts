import { applied } from '../algebra/covariance';
import { errorOf, factorOf } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';
import { lengthOf } from '../numbers/sums';
import { LEVERAGE_OF_ONE } from '../numbers/tolerances';

/** Influence of one cell, under the names of the result. */
export interface CellInfluence {
  studentised: number | null;
  studentisedWithout: number | null;
  cookDistance: number | null;
  fitShift: number | null;
  coefficientShifts: (number | null)[];
  covarianceRatio: number | null;
}

/**
 * Influence of every cell, variance parameters held, a free scale alone re-estimated without the cell.
 *
 *     e = Omega^-1 r,  w_g = (Omega^-1)_gg,  Q_gg = w_g (1 - h_g)
 *     t_g = e_g / (s sqrt Q_gg),  t*_g with s(-g),  s(-g)^2 = (r' Omega^-1 r - e_g^2 / Q_gg) / (G - k - 1)
 *     d = C_.g e_g / Q_gg,  D_g = d' X' Omega^-1 X d / (k s^2) = t_g^2 h_g / ((1 - h_g) k)
 *     fit shift x_g'd / (s(-g) sqrt(x_g' Phi x_g)),  coefficient shift d_j / (s(-g) sqrt Phi_jj)
 *     covariance ratio (s(-g) / s)^(2k) / (1 - h_g)
 *
 * Omega without its free scale; scale known: s = s(-g) = 1. On independent cells these are the usual forms: e_g / sqrt w_g is the whitened residual, and
 * the fit shift t*_g sqrt(h_g / (1 - h_g)). Weights that are not the structure's (another target) keep the same
 * meaning under the fitted Omega: the residual's own variance, the covariance of the coefficients, s(-g) and the covariance ratio undefined.
 * Null where the leverage is 1, where no freedom is left (G - k <= 0, without itself G - k - 1 <= 0), and where all residuals vanish.
 *
 * Source: Belsley, Kuh & Welsch 1980; Cook 1977.
 */
export function influenceOf(fitted: Fitted): CellInfluence[] {
  const spread = spreadOf(fitted);
  const one = fitted.targetIsStructure ? ownWeights(fitted, spread) : otherWeights(fitted);
  return Array.from(fitted.residuals, (_, g) => one(g));
}

interface Spread {
  /** Sum of squared whitened residuals. */
  readonly total: number;
  /** s^2; 1 where the scale is known, null where G = k leaves it undefined. */
  readonly squared: number | null;
  readonly known: boolean;
  /** Roots of Phi_jj without the scale. */
  readonly unscaled: Float64Array;
}

function spreadOf(fitted: Fitted): Spread {
  let total = 0;
  for (const r of fitted.whitened) total += r * r;
  const known = fitted.scale === null;
  const freedom = fitted.residualFreedom;
  const unscaled = Float64Array.from(fitted.pulls, (pull) => errorOf(pull, fitted.omegaShape));
  return { total, known, squared: known ? 1 : freedom > 0 && total > 0 ? total / freedom : null, unscaled };
}

function ownWeights(fitted: Fitted, spread: Spread): (g: number) => CellInfluence {
  const k = fitted.coefficients.length;
  const { reduced, delta } = deletionOf(fitted);
  const fitShift = fitted.correlated ? fitShiftsOf(fitted, delta) : null;
  return (g) => {
    const leverage = fitted.leverages[g] as number;
    const open = 1 - leverage;
    if (open < LEVERAGE_OF_ONE || spread.squared === null) return nothing(k);
    const own = reduced[g] as number;
    const inner = own / Math.sqrt(spread.squared * open);
    const without = squaredWithout(fitted, spread, (own * own) / open);
    const usable = without !== null && without > 0 ? Math.sqrt(without) : null;
    const outer = usable === null ? null : own / (usable * Math.sqrt(open));
    return {
      studentised: inner,
      studentisedWithout: outer,
      cookDistance: (inner * inner * leverage) / (open * k),
      fitShift:
        outer === null || usable === null ? null : (fitShift?.(g, usable) ?? outer * Math.sqrt(leverage / open)),
      coefficientShifts: shiftsOf(fitted, { delta, g }, (j) =>
        usable === null ? null : usable * (spread.unscaled[j] as number),
      ),
      covarianceRatio: without === null ? null : wholePower(without / spread.squared, k) / open,
    };
  };
}

/** x_g'd over s(-g) and the root of x_g' Phi x_g, Phi = R^-1 R^-T without the scale. */
function fitShiftsOf({ design, pulls, inverse }: Fitted, delta: Float64Array): (g: number, without: number) => number {
  return (g, without) => {
    const row = design.columns.map((column) => column.high[g] as number);
    const own = row.reduce((sum, x, j) => sum + x * ((pulls[j] as Float64Array)[g] as number), 0);
    const turned = inverse.map((column) => row.reduce((sum, x, i) => sum + x * (column[i] ?? 0), 0));
    return (own * (delta[g] as number)) / (without * lengthOf(turned));
  };
}

/** s(-g)^2, what deletion takes off the sum of squares given; null where nothing would be left to judge it by. */
function squaredWithout(fitted: Fitted, spread: Spread, taken: number): number | null {
  if (spread.known) return 1;
  const freedom = fitted.residualFreedom - 1;
  if (freedom <= 0) return null;
  const left = spread.total - taken;
  // What rounding alone leaves of a sum of squares that the cell carried wholly.
  return left <= spread.total * fitted.whitened.length * Number.EPSILON ? 0 : left / freedom;
}

/** Influence where the estimator weights by something else than the fitted Omega: Var(r) = Omega - XC Omega - Omega C'X' + X V X'. */
function otherWeights(fitted: Fitted): (g: number) => CellInfluence {
  const { design, covariance, errors, pulls, omega } = fitted;
  const k = fitted.coefficients.length;
  const { delta } = deletionOf(fitted);
  const through = fitted.correlated ? pulls.map((pull) => applied(omega, pull)) : null;
  return (g) => {
    const leverage = fitted.leverages[g] as number;
    const row = design.columns.map((column) => column.high[g] as number);
    const fittedVariance = quadratic(covariance, row);
    const own = fitted.variances[g] as number;
    const crossed = through
      ? row.reduce((sum, x, j) => sum + x * ((through[j] as Float64Array)[g] as number), 0)
      : own * leverage;
    const variance = own - 2 * crossed + fittedVariance;
    if (1 - leverage < LEVERAGE_OF_ONE || !(variance > 0)) return nothing(k);
    const pulled = row.reduce((sum, x, j) => sum + x * ((pulls[j] as Float64Array)[g] as number), 0);
    const shift = pulled * (delta[g] as number);
    return {
      studentised: (fitted.residuals[g] as number) / Math.sqrt(variance),
      studentisedWithout: null,
      cookDistance: null,
      fitShift: fittedVariance > 0 ? shift / Math.sqrt(fittedVariance) : null,
      coefficientShifts: shiftsOf(fitted, { delta, g }, (j) => errors[j] as number),
      covarianceRatio: null,
    };
  };
}

/** d_j over what it is measured in; null where that is null or 0. */
function shiftsOf(
  { pulls }: Fitted,
  { delta, g }: { readonly delta: Float64Array; readonly g: number },
  unit: (j: number) => number | null,
): (number | null)[] {
  return pulls.map((row, j) => {
    const per = unit(j);
    return per === null || !(per > 0) ? null : ((row[g] as number) * (delta[g] as number)) / per;
  });
}

function nothing(k: number): CellInfluence {
  return {
    studentised: null,
    studentisedWithout: null,
    cookDistance: null,
    fitShift: null,
    coefficientShifts: Array.from({ length: k }, () => null),
    covarianceRatio: null,
  };
}

function quadratic(rows: readonly Float64Array[], x: readonly number[]): number {
  let sum = 0;
  for (const [i, row] of rows.entries())
    for (const [j, value] of row.entries()) sum += (x[i] as number) * value * (x[j] as number);
  return sum;
}

function wholePower(base: number, exponent: number): number {
  let product = 1;
  for (let i = 0; i < exponent; i++) product *= base;
  return product;
}

/** What deleting each cell takes away, by the estimator's weights A^-1. */
interface Deletion {
  /** e_g / sqrt w_g, e = A^-1 r, w_g = (A^-1)_gg, for the structure's own weights: the whitened residual where cells are independent. */
  readonly reduced: Float64Array;
  /** e_g / Q_gg, in the outcome's unit; NaN where the leverage is 1. */
  readonly delta: Float64Array;
}

function deletionOf({ weighting, residuals, whitened, leverages }: Fitted): Deletion {
  const open = leverages.map((h) => (1 - h < LEVERAGE_OF_ONE ? Number.NaN : 1 - h));
  if (!weighting.blocks) return { reduced: whitened, delta: residuals.map((r, g) => r / (open[g] as number)) };
  const { solve, inverseDiagonal } = factorOf(weighting);
  const own = inverseDiagonal();
  const turned = solve(residuals);
  return {
    reduced: turned.map((e, g) => e / Math.sqrt(own[g] as number)),
    delta: turned.map((e, g) => e / ((own[g] as number) * (open[g] as number))),
  };
}

/**
 * How far every coefficient falls when one cell is left out: d = b - b(-g), the weights of the others held.
 *
 *     d = C_.g e_g / Q_gg,  on independent cells C_.g r_g / (1 - h_g)
 *
 * One row a coefficient, length G; NaN where the cell's leverage is 1, which leaves nothing to fit without it.
 */
export function deletionShifts(fitted: Fitted): Float64Array[] {
  const { delta } = deletionOf(fitted);
  return fitted.pulls.map((row) => row.map((c, g) => c * (delta[g] as number)));
}
