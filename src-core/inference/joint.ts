import { symmetricInverse } from '../algebra/dense';
import { chiSquareUpper, fUpper } from '../numbers/distributions';
import type { Answer } from '../protocol/result';
import type { Inferred } from './inferred';
import { numberOrNull } from './reference';

type Joint = Extract<Answer, { freedom1: number }>;

/**
 * Whether several coefficients are all zero.
 *
 *     W = b' V^-1 b over l coefficients; chi-square on l where the variances are known, else F = W / l on (l, freedom)
 *
 * columns: indices of the coefficients, each counted once. freedom: G - k, or under given errors that are estimates the smallest
 * Satterthwaite freedom of the coefficients.
 * The statistic is null where their covariance is undefined or singular.
 *
 * Example: for one coefficient F is the square of its t.
 * Source: Wald 1943.
 */
export function jointAnswer(columns: readonly number[], estimates: Float64Array, inferred: Inferred): Joint {
  const distinct = [...new Set(columns)];
  const freedom1 = distinct.length;
  const references = distinct.map((j) => inferred.references[j] ?? null);
  const undefinedAnswer: Joint = { statistic: null, scale: null, freedom1, freedom2: null, p: null };
  const wald = waldOf(distinct, estimates, inferred.covariance);
  if (wald === null || references.includes(null)) return undefinedAnswer;
  const freedoms = references.map((reference) => reference?.freedom ?? null).filter((f) => f !== null);
  if (freedoms.length === 0)
    return { statistic: wald, scale: null, freedom1, freedom2: null, p: chiSquareUpper(wald, freedom1) };
  const freedom2 = Math.min(...freedoms);
  const statistic = wald / freedom1;
  return { statistic, scale: null, freedom1, freedom2, p: fUpper(statistic, freedom1, freedom2) };
}

function waldOf(
  columns: readonly number[],
  estimates: Float64Array,
  covariance: readonly (readonly (number | null)[])[],
): number | null {
  const rows = columns.map((i) => columns.map((j) => covariance[i]?.[j] ?? null));
  if (rows.some((row) => row.includes(null))) return null;
  const inverse = symmetricInverse(rows as number[][]);
  if (inverse === null) return null;
  const b = columns.map((j) => estimates[j] as number);
  let sum = 0;
  for (const [i, row] of inverse.entries())
    for (const [j, value] of row.entries()) sum += (b[i] as number) * value * (b[j] as number);
  return numberOrNull(sum);
}
