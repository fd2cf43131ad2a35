import { independent, throughCovariance } from '../algebra/covariance';
import { largestOf } from '../algebra/powers-of-two';
import type { Fitted } from '../estimate/fitted';
import { tau2BiasOf } from '../inference/tau2-bias';
import type { Parameter } from '../model/structure';

/** Shrunken estimate of one cell, under the names of the result. */
export interface Shrunken {
  shrunken: number | null;
  ownShare: number | null;
  mse: number | null;
  mseParts: [number | null, number | null, number | null] | null;
}

/**
 * Each cell's estimate drawn towards the fit, by how much of its variance is sampling; null where no between part stands, and where cells are
 * correlated: an estimate would draw on the others too.
 *
 *     own share = tau^2 / (tau^2 + D_g),  D = the sampling variance; estimate = own share y + (1 - own share) x'b
 *     mse = g1 + g2 + 2 g3, full likelihood less b (1 - own share)^2
 *     g1 = own share D,  g2 = (1 - own share)^2 x' Phi x,  g3 = (d own share / d theta)' W (d own share / d theta) (tau^2 + D)
 *
 * W: the covariance of the variance parameters; of tau^2 alone 2 / sum (tau^2 + D)^-2, of (tau^2, phi) the inverse restricted information.
 * Parameters that the user fixed do not count. The mean squared error is null for variances that follow from fitted means, moment rules, two-step fits, other targets, an estimated
 * exponent, gamma or class, and a full likelihood that estimates phi: no expansion is known here for those.
 *
 * Source: Fay & Herriot 1979; Prasad & Rao 1990; Datta & Lahiri 2000.
 */
export function shrunkenOf(fitted: Fitted): Shrunken[] | null {
  const { structure, theta } = fitted;
  if (structure.betweenAt < 0 || fitted.correlated) return null;
  const between = theta[structure.betweenAt] as number;
  const spread = spreadOf(fitted);
  const bias = spread === null ? 0 : biasOf(fitted);
  const largest = largestOf(structure.sampling);
  return Array.from(fitted.variances, (v, g) => {
    const sampling = v - between;
    const own = between / v;
    const rest = sampling / v;
    const shrunken = (fitted.response.high[g] as number) - rest * (fitted.residuals[g] as number);
    if (spread === null) return { shrunken, ownShare: own, mse: null, mseParts: null };
    const g1 = own * sampling;
    const g2 = rest * rest * (fitted.leverages[g] as number) * v;
    const g3 = thirdPart({ spread, rest, own, variance: v, relative: (structure.sampling[g] as number) / largest });
    return { shrunken, ownShare: own, mse: g1 + g2 + 2 * g3 - bias * rest * rest, mseParts: [g1, g2, g3] };
  });
}

/**
 * Covariance of tau^2 and of phi times the largest a, both counted in `unit`, the smallest variance, so that no product of variances runs over or
 * under; zero in the rows of a parameter that is known.
 */
interface Spread {
  readonly unit: number;
  readonly between: number;
  readonly joint: number;
  readonly scale: number;
}

/** relative: a_g over the largest a. */
function thirdPart(of: {
  readonly spread: Spread;
  readonly rest: number;
  readonly own: number;
  readonly variance: number;
  readonly relative: number;
}): number {
  const { spread, rest, own, variance, relative } = of;
  const byScale = own * relative;
  const sum = rest * rest * spread.between - 2 * rest * byScale * spread.joint + byScale * byScale * spread.scale;
  return sum * spread.unit * (spread.unit / variance);
}

function spreadOf(fitted: Fitted): Spread | null {
  const { structure, estimate } = fitted;
  if (!fitted.targetIsStructure || fitted.fixedPoint) return null;
  const free = (at: number): boolean => at >= 0 && (structure.parameters[at] as Parameter).fixed === null;
  const others = structure.parameters.some(
    ({ role, fixed }) => role !== 'between' && role !== 'scale' && fixed === null,
  );
  const betweenFree = free(structure.betweenAt);
  const scaleFree = free(structure.scaleAt);
  if (others) return null;
  const unit = fitted.variances.reduce((least, v) => Math.min(least, v), Infinity);
  if (!betweenFree && !scaleFree) return { unit, between: 0, joint: 0, scale: 0 };
  if (estimate.method !== 'restricted' && (estimate.method !== 'full' || scaleFree)) return null;
  if (!scaleFree)
    return { unit, between: 2 / sumOf(fitted.variances, (v) => (unit / v) * (unit / v)), joint: 0, scale: 0 };
  return spreadOfBoth(fitted, { betweenFree, unit });
}

/** Inverse restricted information of (tau^2, phi), or of phi alone. */
function spreadOfBoth(fitted: Fitted, { betweenFree, unit }: { betweenFree: boolean; unit: number }): Spread | null {
  const { sampling } = fitted.structure;
  const largest = largestOf(sampling);
  const byScale = sampling.map((a) => (a / largest) * unit);
  const byBetween = new Float64Array(sampling.length).fill(unit);
  const pp = restrictedInformation(fitted, byScale, byScale);
  if (!betweenFree) return { unit, between: 0, joint: 0, scale: 1 / pp };
  const tt = restrictedInformation(fitted, byBetween, byBetween);
  const tp = restrictedInformation(fitted, byBetween, byScale);
  const determinant = tt * pp - tp * tp;
  if (!(determinant > tt * pp * Number.EPSILON)) return null;
  return { unit, between: pp / determinant, joint: -tp / determinant, scale: tt / determinant };
}

/**
 * One entry of the restricted expected information, Omega diagonal and its derivatives diag(a), diag(b).
 *
 *     1/2 tr(P diag(a) P diag(b)) = 1/2 [ sum a b / v^2 - 2 sum a b h / v^2 + tr(Phi A Phi B) ],  A = X' Omega^-1 diag(a) Omega^-1 X
 *
 * Phi A is C diag(a) Omega^-1 X, k x k.
 */
function restrictedInformation(fitted: Fitted, a: Float64Array, b: Float64Array): number {
  const { variances, leverages } = fitted;
  let sum = 0;
  for (const [g, v] of variances.entries())
    sum += ((a[g] as number) / v) * ((b[g] as number) / v) * (1 - 2 * (leverages[g] as number));
  const byA = throughPulls(fitted, a);
  const byB = throughPulls(fitted, b);
  for (const [i, row] of byA.entries())
    for (const [j, value] of row.entries()) sum += value * ((byB[j] as Float64Array)[i] as number);
  return sum / 2;
}

/** C diag(a) Omega^-1 X: rows i, columns j. */
function throughPulls({ pulls, design, variances }: Fitted, a: Float64Array): Float64Array[] {
  const shares = a.map((value, g) => value / (variances[g] as number));
  return throughCovariance(
    pulls,
    independent(shares),
    design.columns.map(({ high }) => high),
  );
}

/** b of the full likelihood, times (1 - own share)^2 to be taken off: - sum h / v over sum v^-2. */
function biasOf(fitted: Fitted): number {
  const { structure, estimate } = fitted;
  const between = structure.parameters[structure.betweenAt] as Parameter;
  return estimate.method !== 'full' || between.fixed !== null ? 0 : (tau2BiasOf(fitted) ?? 0);
}

function sumOf(values: Float64Array, one: (value: number, g: number) => number): number {
  let sum = 0;
  for (const [g, value] of values.entries()) sum += one(value, g);
  return sum;
}
