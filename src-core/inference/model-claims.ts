import { type Covariance, independent, throughCovariance, timesFactor } from '../algebra/covariance';
import { errorOf } from '../algebra/factored';
import { underStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import type { Plan, RobustCorrection } from '../protocol/plan';
import type { Reference } from '../protocol/result';
import type { Cells } from '../table/cells';
import type { Claim } from './claim';
import { unitRow } from './coordinates';
import { jointBy } from './joint';
import { knappHartungFactor } from './knapp-hartung';
import { numberOrNull, standardNormal, studentOn } from './reference';
import { robustSpread } from './robust';
import { errorFreedomsOf, matrixFreedomOf, satterthwaiteFreedom } from './satterthwaite';

/** A variance below this, the smallest normal double, has lost its digits: it is undefined, and not 0. */
const LEAST_VARIANCE = 2.2250738585072014e-308;

/**
 * Model-based errors.
 *
 *     C Omega C'; normal where every variance is known, t with G - k otherwise
 *
 * Given errors with a freedom, everything else known: t with Satterthwaite's freedom of the combination. A matrix with a freedom: t with it, and with G - k
 * at most where a parameter was estimated beside it. Joint: chi-square, or F on the smallest freedom of the coefficients.
 *
 * Source: Aitken 1935; Satterthwaite 1946.
 */
export function modelClaim(fitted: Fitted, plan: Plan, cells: Cells): Claim {
  return spreadClaim(fitted, {
    spread: fitted.omega,
    covariance: modelCovariance(fitted, 1),
    errors: Array.from(fitted.errors, numberOrNull),
    referenceOf: modelReferences(fitted, plan, cells),
  });
}

/** Model-based errors times the root of q, t with G - k; null throughout where no residual is free. Source: Knapp & Hartung 2003. */
export function knappHartungClaim(
  fitted: Fitted,
  floor: boolean,
): { readonly claim: Claim; readonly factor: number | null } {
  const factor = knappHartungFactor(underStructure(fitted), floor);
  const onResiduals = studentOn(fitted.residualFreedom);
  const claim = spreadClaim(fitted, {
    spread: factor === null ? null : timesFactor(fitted.omega, factor),
    covariance: factor === null ? undefinedCovariance(fitted) : modelCovariance(fitted, factor),
    errors: Array.from(fitted.errors, (error) => (factor === null ? null : numberOrNull(error * Math.sqrt(factor)))),
    referenceOf: () => onResiduals,
  });
  return { claim, factor };
}

/** HC0 to HC4, t with G - k, F(l, G - k); null throughout where no residual is free. Source: White 1980; MacKinnon & White 1985. */
export function robustClaim(fitted: Fitted, correction: RobustCorrection): Claim {
  const squares = robustSpread(fitted, correction);
  const spread = squares && independent(squares);
  const onResiduals = studentOn(fitted.residualFreedom);
  return spreadClaim(fitted, {
    spread,
    covariance: spread
      ? throughCovariance(fitted.pulls, spread).map((row) => Array.from(row, numberOrNull))
      : undefinedCovariance(fitted),
    errors: fitted.pulls.map((pull) => (spread ? numberOrNull(errorOf(pull, spread)) : null)),
    referenceOf: () => onResiduals,
  });
}

/** V = C spread C'. */
function spreadClaim(
  fitted: Fitted,
  of: Pick<Claim, 'covariance' | 'errors' | 'referenceOf'> & { readonly spread: Covariance | null },
): Claim {
  const { spread, covariance, errors, referenceOf } = of;
  const k = fitted.pulls.length;
  const references = fitted.pulls.map((_, j) => referenceOf(unitRow(k, j)));
  return {
    covariance,
    errors,
    errorOf: (multipliers) =>
      spread === null ? null : numberOrNull(errorOf(pullsOf(fitted.pulls, multipliers), spread)),
    referenceOf,
    jointOf: (columns) => jointBy(columns, { estimates: fitted.coefficients, covariance, references }),
    drawn: null,
  };
}

function undefinedCovariance({ pulls }: Fitted): null[][] {
  return pulls.map(() => pulls.map(() => null));
}

function modelCovariance(fitted: Fitted, factor: number): (number | null)[][] {
  return fitted.covariance.map((row, i) =>
    Array.from(row, (value, j) => {
      const vanished = i === j && Math.abs(value) < LEAST_VARIANCE && fitted.scale !== 0;
      return vanished ? null : numberOrNull(value * factor);
    }),
  );
}

function modelReferences(fitted: Fitted, plan: Plan, cells: Cells): Claim['referenceOf'] {
  const onResiduals = studentOn(fitted.residualFreedom);
  const estimated = fitted.estimatedParameters > 0;
  const ofMatrix = matrixFreedomOf(plan, cells);
  if (ofMatrix !== null) {
    const reference = studentOn(estimated ? Math.min(ofMatrix, fitted.residualFreedom) : ofMatrix);
    return () => reference;
  }
  if (estimated) return () => onResiduals;
  const freedoms = errorFreedomsOf(plan, cells);
  return freedoms === null ? () => standardNormal : byGivenErrors(fitted, freedoms);
}

function byGivenErrors(fitted: Fitted, freedoms: Float64Array): (multipliers: ArrayLike<number>) => Reference | null {
  const { pulls, variances, structure, theta } = fitted;
  const scale = structure.scaleAt < 0 ? 1 : (theta[structure.scaleAt] as number);
  const estimated = structure.sampling.map((a) => a * scale);
  return (multipliers) =>
    studentOn(satterthwaiteFreedom({ pulls: pullsOf(pulls, multipliers), variances, estimated, freedoms }));
}

/** Pulls of a combination of coefficients on the cells: sum of multipliers times the rows of C. */
function pullsOf(pulls: readonly Float64Array[], multipliers: ArrayLike<number>): Float64Array {
  const combined = new Float64Array(pulls[0]?.length ?? 0);
  for (const [j, row] of pulls.entries()) {
    const share = multipliers[j] as number;
    if (share === 0) continue;
    for (let g = 0; g < row.length; g++) combined[g] = (combined[g] as number) + share * (row[g] as number);
  }
  return combined;
}
