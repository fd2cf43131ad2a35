import { errorOf } from '../estimate/fit-at';
import type { Fitted } from '../estimate/fitted';
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
 *     t_g = r_g / (s sqrt(a_g (1 - h_g))),  t*_g with s(-g),  s(-g)^2 = (r'r - r_g^2 / (1 - h_g)) / (G - k - 1)  (r whitened)
 *     d = C_.g r_g / (1 - h_g),  D_g = t_g^2 h_g / ((1 - h_g) k)
 *     fit shift t*_g sqrt(h_g / (1 - h_g)),  coefficient shift d_j / (s(-g) sqrt Phi_jj),  covariance ratio (s(-g) / s)^(2k) / (1 - h_g)
 *
 * a: variances without their free scale; scale known: s = s(-g) = 1. Weights that are not the structure's (another target) keep the same
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
  const unscaled = Float64Array.from(fitted.pulls, (pull) => errorOf(pull, fitted.shape));
  return { total, known, squared: known ? 1 : freedom > 0 && total > 0 ? total / freedom : null, unscaled };
}

function ownWeights(fitted: Fitted, spread: Spread): (g: number) => CellInfluence {
  const k = fitted.coefficients.length;
  return (g) => {
    const leverage = fitted.leverages[g] as number;
    const open = 1 - leverage;
    if (open < LEVERAGE_OF_ONE || spread.squared === null) return nothing(k);
    const whitened = fitted.whitened[g] as number;
    const inner = whitened / Math.sqrt(spread.squared * open);
    const without = squaredWithout(fitted, spread, (whitened * whitened) / open);
    const usable = without !== null && without > 0 ? Math.sqrt(without) : null;
    const outer = usable === null ? null : whitened / (usable * Math.sqrt(open));
    return {
      studentised: inner,
      studentisedWithout: outer,
      cookDistance: (inner * inner * leverage) / (open * k),
      fitShift: outer === null ? null : outer * Math.sqrt(leverage / open),
      coefficientShifts: shiftsOf(fitted, g, (j) => (usable === null ? null : usable * (spread.unscaled[j] as number))),
      covarianceRatio: without === null ? null : wholePower(without / spread.squared, k) / open,
    };
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

/** Influence where the estimator weights by something else than the fitted Omega. */
function otherWeights(fitted: Fitted): (g: number) => CellInfluence {
  const { design, covariance, errors, pulls } = fitted;
  const k = fitted.coefficients.length;
  return (g) => {
    const leverage = fitted.leverages[g] as number;
    const open = 1 - leverage;
    const row = design.columns.map((column) => column.high[g] as number);
    const fittedVariance = quadratic(covariance, row);
    const own = fitted.variances[g] as number;
    const variance = own * (1 - 2 * leverage) + fittedVariance;
    if (open < LEVERAGE_OF_ONE || !(variance > 0)) return nothing(k);
    const residual = fitted.residuals[g] as number;
    let shift = 0;
    for (const [j, x] of row.entries()) shift += (x * ((pulls[j] as Float64Array)[g] as number) * residual) / open;
    return {
      studentised: residual / Math.sqrt(variance),
      studentisedWithout: null,
      cookDistance: null,
      fitShift: fittedVariance > 0 ? shift / Math.sqrt(fittedVariance) : null,
      coefficientShifts: shiftsOf(fitted, g, (j) => errors[j] as number),
      covarianceRatio: null,
    };
  };
}

/** d_j over what it is measured in; null where that is null or 0. */
function shiftsOf(fitted: Fitted, g: number, unit: (j: number) => number | null): (number | null)[] {
  const open = 1 - (fitted.leverages[g] as number);
  const residual = fitted.residuals[g] as number;
  return fitted.pulls.map((row, j) => {
    const per = unit(j);
    return per === null || !(per > 0) ? null : ((row[g] as number) * residual) / open / per;
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

/**
 * How far every coefficient falls when one cell is left out: d = b - b(-g), the weights of the others held.
 *
 *     d = C_.g r_g / (1 - h_g)
 *
 * One row a coefficient, length G; NaN where the cell's leverage is 1, which leaves nothing to fit without it.
 */
export function deletionShifts(fitted: Fitted): Float64Array[] {
  return fitted.pulls.map((row) =>
    row.map((c, g) => {
      const open = 1 - (fitted.leverages[g] as number);
      return open < LEVERAGE_OF_ONE ? Number.NaN : (c * (fitted.residuals[g] as number)) / open;
    }),
  );
}
