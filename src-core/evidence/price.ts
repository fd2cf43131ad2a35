import { type Covariance, takeCovariance, throughCovariance, timesFactor } from '../algebra/covariance';
import { symmetricEigenvalues } from '../algebra/dense';
import { errorOf, factored, factorOf } from '../algebra/factored';
import { largestOf, powerOfTwoBelow } from '../algebra/powers-of-two';
import { underStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import type { RivalFit } from '../inference/fits';
import { numberOrNull } from '../inference/reference';
import { sum, sumOfSquares } from '../numbers/sums';
import type { BesideResult, Price, SquareEntry } from '../protocol/result';
import { efficiencyOf } from './efficiency';

/**
 * What every rival weighting would cost if the fitted structure is true.
 *
 *     Var_A = C_A Omega C_A' = Var_GLS + D Omega D',  D = C_A - C_GLS
 *
 * The second form is the one computed: the excess is a sum of squares, so that no cost is ever negative and none is lost to cancellation
 * (Aitken 1935). cost_j = excess_jj / Var_GLS_jj; efficiency det Var_GLS / det Var_A, for equal weights alone (Bloomfield & Watson 1975).
 *
 * C_GLS weights by the fitted Omega: under another target it is not the chosen C. Costs and efficiency are of the shape of Omega, a free scale
 * left out: it cancels, and may be 0 or undefined. What depends on it is null where as many cells as terms leave none.
 * An Omega without an inverse (a matrix of few degrees of freedom) has no best weighting to measure against: costs and eigenvalues are null.
 */
export function pricesOf(of: { readonly fitted: Fitted; readonly rivals: readonly RivalFit[] }): BesideResult[] {
  const { fitted, rivals } = of;
  // Under a link weights act on the working response; variances are told of the observed one.
  const slopes = fitted.fixedPoint?.link?.slopes;
  const best = factored(fitted.omegaShape).ok ? underStructure(fitted).pulls : null;
  const units = (best ?? fitted.pulls).map((row) => powerOfTwoBelow(largestOf(row)));
  const inUnits = (rows: Square): Square => rows.map((row, j) => row.map((c) => c / (units[j] as number)));
  const least = best && throughCovariance(inUnits(best), fitted.omegaShape);
  return rivals.map(({ rival, fitted: beside, ...told }): BesideResult => {
    const excess = best && throughCovariance(inUnits(differenceOf(beside.pulls, best)), fitted.omegaShape);
    const actual =
      least && excess
        ? least.map((row, i) => row.map((value, j) => value + at(excess, i, j)))
        : throughCovariance(inUnits(beside.pulls), fitted.omegaShape);
    const times = (value: number, i: number, j: number) =>
      value * (fitted.scale ?? 1) * (units[i] as number) * (units[j] as number);
    return {
      variance: rival,
      parameters: told.parameters,
      variances: Array.from(beside.variances.every(Number.isFinite) ? beside.variances : beside.shape, (v, g) =>
        slopes ? v * (slopes[g] as number) * (slopes[g] as number) : v,
      ),
      logLikelihood: told.logLikelihood,
      restrictedLogLikelihood: told.restrictedLogLikelihood,
      coefficients: told.coefficients,
      price: priceOf({ fitted, beside, units, least, excess, actual }),
      actualCovariance: actual.map((row, i) => Array.from(row, (value, j) => numberOrNull(times(value, i, j)))),
      eigenvalues: excess
        ? eigenvaluesOf(excess.map((row, i) => row.map((value, j) => times(value, i, j))))
        : actual.map(() => null),
      efficiency: !beside.correlated && equalThroughout(beside.shape) ? efficiencyOf(fitted) : null,
      moved: movedOf(fitted, beside),
    };
  });
}

type Square = readonly Float64Array[];

/** Descending, never below 0; null where the scale is undefined, or the units of the columns lie too far apart for one matrix. */
function eigenvaluesOf(rows: Square): (number | null)[] {
  if (!rows.every((row) => row.every(Number.isFinite))) return rows.map(() => null);
  return Array.from(symmetricEigenvalues(rows), (value) => Math.max(0, value));
}

/** least, excess, actual: in units of each coefficient's own pulls, a free scale left out. */
function priceOf(of: {
  readonly fitted: Fitted;
  readonly beside: Fitted;
  readonly units: readonly number[];
  readonly least: Square | null;
  readonly excess: Square | null;
  readonly actual: Square;
}): Price[] {
  const { fitted, beside, units, least, excess, actual } = of;
  const expected = expectedScale(fitted, beside);
  return fitted.design.names.map((term, j) => {
    const claimedSe = numberOrNull(beside.errors[j] as number);
    const root = rootOrNull(at(actual, j, j) * (fitted.scale ?? 1));
    const actualSe = root === null ? null : numberOrNull(root * (units[j] as number));
    return {
      term,
      claimedSe,
      expectedClaimedSe: expected === null ? null : numberOrNull(Math.sqrt(expected) * unscaledError(beside, j)),
      actualSe,
      cost: least && excess ? at(excess, j, j) / at(least, j, j) : null,
      claimedOverActual: claimedSe === null || actualSe === null ? null : numberOrNull(claimedSe / actualSe),
    };
  });
}

/**
 * The scale that a rival's own formula would find on average under the fitted Omega: tr(M_A Omega) / (G - k); 1 where its variances are wholly
 * known. Null where it estimates more than a scale: its average is then not a trace.
 */
function expectedScale(fitted: Fitted, beside: Fitted): number | null {
  if (beside.scale === null) return beside.estimatedParameters === 0 ? 1 : null;
  if (beside.residualFreedom <= 0 || beside.estimatedParameters > 1) return null;
  return traceUnder(fitted, beside) / beside.residualFreedom;
}

/** tr(M_A Omega) = tr(A^-1 Omega) - sum over the orthonormal basis q of |P'A^-1/2 q|^2. */
function traceUnder(fitted: Fitted, beside: Fitted): number {
  if (!fitted.correlated && !beside.correlated) {
    let trace = 0;
    for (const [g, a] of beside.shape.entries())
      trace += ((fitted.variances[g] as number) / a) * (1 - (beside.leverages[g] as number));
    return trace;
  }
  const { backwards, inverseAmong, inverseDiagonal } = factorOf(beside.omegaShape);
  const own = inverseDiagonal();
  let trace = sum(fitted.variances.map((v, g) => v * (own[g] as number)));
  for (const { cells } of beside.omegaShape.blocks ?? []) {
    const inverse = inverseAmong(cells);
    const [block] = takeCovariance(fitted.omega, cells).blocks ?? [];
    for (const [a, g] of (block?.cells ?? []).entries())
      for (const [b, h] of (block?.cells ?? []).entries())
        if (a !== b)
          trace += (inverse[g * cells.length + h] as number) * (block?.matrix[a * block.cells.length + b] as number);
  }
  return beside.basis.reduce((left, q) => {
    const error = errorOf(backwards(q), fitted.omega);
    return left - error * error;
  }, trace);
}

/** Root of (X'A^-1X)^-1_jj, A the shape. */
function unscaledError({ pulls, omegaShape }: Fitted, j: number): number {
  return errorOf(pulls[j] as Float64Array, omegaShape);
}

/** Which cells move the answer from the chosen weighting to the rival's: (C_A - C)_jg r_g, r under the chosen fit; a row sums to b_A - b. */
function movedOf(fitted: Fitted, beside: Fitted): BesideResult['moved'] {
  return fitted.design.names.map((term, j) => {
    const rival = beside.pulls[j] as Float64Array;
    const chosen = fitted.pulls[j] as Float64Array;
    return {
      term,
      byCell: Array.from(fitted.residuals, (r, g) => ((rival[g] as number) - (chosen[g] as number)) * r),
    };
  });
}

/**
 * Every structure's errors under every other: the root of diag C_A Omega_B C_A'.
 *
 * fits: the chosen first, then the rivals in order. A rival as truth has the scale of its own residuals at G - k, whatever its method;
 * null where that is undefined.
 */
export function squareOf(fits: readonly Fitted[]): SquareEntry[] {
  return fits.flatMap((truth, t) => {
    const omega = t === 0 ? truth.omega : ownTruth(truth);
    return fits.flatMap((weighting, w) =>
      weighting.design.names.map((term, j): SquareEntry => {
        const se = numberOrNull(errorOf(weighting.pulls[j] as Float64Array, omega));
        return { truth: t, weighting: w, term, se };
      }),
    );
  });
}

function ownTruth(fitted: Fitted): Covariance {
  if (fitted.scale === null) return fitted.omega;
  const scale = fitted.residualFreedom > 0 ? sumOfSquares(fitted.whitened) / fitted.residualFreedom : Number.NaN;
  return timesFactor(fitted.omegaShape, scale);
}

function at(rows: Square, i: number, j: number): number {
  return (rows[i] as Float64Array)[j] as number;
}

function differenceOf(a: Square, b: Square): Float64Array[] {
  return a.map((row, j) => row.map((value, g) => value - ((b[j] as Float64Array)[g] as number)));
}

function rootOrNull(value: number): number | null {
  return Number.isFinite(value) && value >= 0 ? Math.sqrt(value) : null;
}

function equalThroughout(values: Float64Array): boolean {
  return values.every((value) => value === values[0]);
}
