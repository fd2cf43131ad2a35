import type { Fitted } from '../estimate/fitted';
import { fUpper } from '../numbers/distributions';
import { lengthOf } from '../numbers/sums';
import type { Claim, Joint } from './claim';
import { directionOf, unitRow } from './coordinates';
import { chiSquareOf, fOf, undefinedJoint, waldOf } from './joint';
import { type AdjustmentPieces, adjustmentPieces } from './kenward-roger-pieces';
import { orthonormal } from './orthonormal-directions';
import { numberOrNull, standardNormal, studentOn } from './reference';
import { through, traceOfProduct } from './small-matrices';

/**
 * Errors adjusted for variance parameters that were estimated by restricted likelihood, with a freedom of their own.
 *
 *     Phi_A = Phi + 2 Phi [ sum_ij W_ij (Q_ij - P_i Phi P_j) ] Phi,  a combination: t with 2 (z'z)^2 / g'Wg, g_i = z'S_i z
 *     joint: lambda W / l on F(l, m)
 *
 * fitted: by restricted likelihood, weights from the structure, Omega linear in its free parameters. In the coordinates of the whitened orthonormal
 * design (`adjustmentPieces`): Phi = R^-1 R^-T, dPhi/dtheta_i = R^-1 S_i R^-T. Without a free parameter it is the model's own, on the normal.
 * Null throughout where the information is singular.
 *
 * Source: Kenward & Roger 1997.
 */
export function kenwardRogerClaim(fitted: Fitted): Claim {
  const pieces = adjustmentPieces(fitted);
  const k = fitted.basis.length;
  const root = Math.sqrt(fitted.scale ?? 1);
  const turned = (multipliers: ArrayLike<number>) => directionOf(fitted, multipliers).map((value) => value * root);
  const directions = fitted.design.names.map((_, j) => turned(unitRow(k, j)));
  const { adjusted } = pieces;
  const covariance = directions.map((z) =>
    directions.map((x) => (adjusted ? numberOrNull(through(z, adjusted, x)) : null)),
  );
  const errorOf = (multipliers: ArrayLike<number>): number | null => {
    const z = turned(multipliers);
    const size = lengthOf(z);
    if (!adjusted || size === 0) return adjusted ? 0 : null;
    const unit = z.map((value) => value / size);
    return numberOrNull(size * Math.sqrt(through(unit, adjusted, unit)));
  };
  return {
    covariance,
    errors: directions.map((_, j) => errorOf(unitRow(k, j))),
    errorOf,
    referenceOf: (multipliers) =>
      pieces.slopes.length === 0 ? standardNormal : studentOn(freedomAlong(pieces, turned(multipliers))),
    jointOf: (columns) => {
      const wald = waldOf(columns, fitted.coefficients, covariance);
      if (wald === null) return undefinedJoint(columns.length);
      if (pieces.slopes.length === 0) return chiSquareOf(wald, columns.length);
      return scaledF(
        wald,
        columns.length,
        tracesAlong(
          pieces,
          columns.map((j) => directions[j] as Float64Array),
        ),
      );
    },
    drawn: null,
  };
}

/** 2 (z'z)^2 / g'Wg; null where no parameter moves the variance of the combination. */
function freedomAlong({ slopes, spread }: AdjustmentPieces, direction: Float64Array): number | null {
  const size = lengthOf(direction);
  if (!spread || !(size > 0)) return null;
  const z = direction.map((value) => value / size);
  const gradient = slopes.map((slope) => through(z, slope, z));
  let variance = 0;
  for (const [i, row] of spread.entries())
    for (const [j, weight] of row.entries()) variance += weight * (gradient[i] as number) * (gradient[j] as number);
  return numberOrNull(2 / variance);
}

interface Traces {
  /** sum W_ij tr(U_i) tr(U_j) */
  readonly first: number;
  /** sum W_ij tr(U_i U_j) */
  readonly second: number;
}

/** U_i = Y' S_i Y, Y orthonormal with the span of the directions; null where these depend on each other. */
function tracesAlong({ slopes, spread }: AdjustmentPieces, directions: readonly Float64Array[]): Traces | null {
  const l = directions.length;
  const basis = orthonormal(directions)?.vectors;
  if (!spread || !basis) return null;
  const inner = slopes.map((slope) => {
    const table = new Float64Array(l * l);
    for (const [a, x] of basis.entries()) for (const [b, y] of basis.entries()) table[a * l + b] = through(x, slope, y);
    return table;
  });
  const traces = inner.map((table) => basis.reduce((sum, _, a) => sum + (table[a * l + a] as number), 0));
  let [first, second] = [0, 0];
  for (const [i, row] of spread.entries())
    for (const [j, weight] of row.entries()) {
      first += weight * (traces[i] as number) * (traces[j] as number);
      second += weight * traceOfProduct(inner[i] as Float64Array, inner[j] as Float64Array);
    }
  return { first, second };
}

/**
 * The scaled F of the paper: scale and second freedom match the mean and variance of W / l to those of F.
 *
 * For one coefficient it is the square of its t, whatever the freedom. Null where a moment does not exist.
 */
export function scaledF(wald: number, l: number, traces: Traces | null): Joint {
  if (!traces || !(traces.second > 0)) return undefinedJoint(l);
  const { first, second } = traces;
  if (l === 1) return { ...fOf(wald, { freedom1: 1, freedom2: 2 / first }), scale: 1 };
  const b = (first + 6 * second) / (2 * l);
  const g = ((l + 1) * first - (l + 4) * second) / ((l + 2) * second);
  const divisor = 3 * l + 2 * (1 - g);
  const expected = 1 / (1 - second / l);
  const [c1, c2, c3] = [g / divisor, (l - g) / divisor, (l + 2 - g) / divisor];
  const left = 1 - c2 * b;
  const variance = ((2 / l) * (1 + c1 * b)) / (left * left * (1 - c3 * b));
  const ratio = variance / (2 * expected * expected);
  const freedom2 = numberOrNull(4 + (l + 2) / (l * ratio - 1));
  if (freedom2 === null || !(l * ratio > 1 && expected > 0 && c3 * b < 1)) return undefinedJoint(l);
  const scale = freedom2 / (expected * (freedom2 - 2));
  const statistic = numberOrNull((scale * wald) / l);
  if (statistic === null) return undefinedJoint(l);
  return { statistic, scale, freedom1: l, freedom2, p: fUpper(statistic, l, freedom2) };
}
