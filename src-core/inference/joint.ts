import { symmetricInverse } from '../algebra/dense';
import { chiSquareUpper, fUpper } from '../numbers/distributions';
import type { Reference } from '../protocol/result';
import type { Joint } from './claim';
import { numberOrNull } from './reference';

/**
 * Whether several coefficients are all zero, where one freedom judges them.
 *
 *     W = b' V^-1 b over l coefficients; chi-square on l where the variances are known, else F = W / l on (l, freedom)
 *
 * columns: places of the coefficients, each once. references: one a coefficient; freedom: the smallest of theirs (G - k, that of a matrix, or
 * Satterthwaite's under given errors that are estimates).
 * The statistic is null where their covariance is undefined or singular.
 *
 * Example: for one coefficient F is the square of its t.
 * Source: Wald 1943.
 */
export function jointBy(
  columns: readonly number[],
  of: {
    readonly estimates: Float64Array;
    readonly covariance: readonly (readonly (number | null)[])[];
    readonly references: readonly (Reference | null)[];
  },
): Joint {
  const references = columns.map((j) => of.references[j] ?? null);
  const wald = waldOf(columns, of.estimates, of.covariance);
  const freedom1 = columns.length;
  if (wald === null || references.includes(null)) return undefinedJoint(freedom1);
  const freedoms = references.map((reference) => reference?.freedom ?? null).filter((f) => f !== null);
  if (freedoms.length === 0) return chiSquareOf(wald, freedom1);
  return fOf(wald, { freedom1, freedom2: Math.min(...freedoms) });
}

/** No statistic, and nothing that stands on it. */
export function undefinedJoint(freedom1: number): Joint {
  return { statistic: null, scale: null, freedom1, freedom2: null, p: null };
}

/** W on chi-square. */
export function chiSquareOf(wald: number, freedom1: number): Joint {
  return { statistic: wald, scale: null, freedom1, freedom2: null, p: chiSquareUpper(wald, freedom1) };
}

/** W / l on F; without a p value where the second freedom is not above 0. */
export function fOf(wald: number, { freedom1, freedom2 }: { freedom1: number; freedom2: number }): Joint {
  if (!(freedom2 > 0)) return undefinedJoint(freedom1);
  const statistic = wald / freedom1;
  return { statistic, scale: null, freedom1, freedom2, p: fUpper(statistic, freedom1, freedom2) };
}

/** b' V^-1 b over the coefficients at these places; null where V is undefined there, or singular. */
export function waldOf(
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
