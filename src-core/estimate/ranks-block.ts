import type { RanksForm, RanksSlope } from '../algebra/block-form';
import { backwardRanks, rankRootsOf, whitenRanks } from '../algebra/rank-roots';
import { log } from '../numbers/elementary';
import type { LinkedBlock } from './linked-block';
import { rankTables } from './rank-tables';

/**
 * A block of a diagonal and rank-one terms in a likelihood: whitening, score and information at the cost of its places, times the terms that share them.
 *
 * form, slopes: in units of the middle's roots, slopes by the free parameters each in its unit. Null where it is not positive definite.
 */
export function ranksBlock(of: {
  readonly form: RanksForm;
  readonly slopes: () => readonly (RanksSlope | null)[];
}): LinkedBlock | null {
  const { form } = of;
  const own = rankRootsOf(form);
  if (!own) return null;
  let logDeterminant = 0;
  for (const root of own.roots) logDeterminant += 2 * log(root);
  for (const { growth } of own.factors) logDeterminant += log(growth);
  if (!(Math.abs(logDeterminant) < Infinity)) return null;
  let known: readonly (RanksSlope | null)[] | null = null;
  const slopes = () => (known ??= of.slopes());
  const tables = madeOnce(() => rankTables({ form, roots: own, slopes: slopes() }));
  return {
    logDeterminant,
    whiten: (rows, width) => whitenRanks(own, rows, width),
    slopes: () =>
      slopes().map(
        (slope, a) =>
          slope && {
            trace: tables().traces[a] as number,
            times: (rows, width) => {
              const back = rows.slice();
              backwardRanks(own, back, width);
              const through = appliedSlope(slope, back, width);
              whitenRanks(own, through, width);
              return through;
            },
          },
      ),
    traces: () => tables().products,
  };
}

function madeOnce<T>(make: () => T): () => T {
  let made: { readonly value: T } | null = null;
  return () => (made ??= { value: make() }).value;
}

function appliedSlope({ diagonal, ranks }: RanksSlope, rows: Float64Array, width: number): Float64Array {
  const result = new Float64Array(rows.length);
  if (diagonal)
    for (let i = 0, at = 0; i < diagonal.length; i++)
      for (let c = 0; c < width; c++, at++) result[at] = (diagonal[i] as number) * (rows[at] as number);
  const along = new Float64Array(width);
  for (const { factor, vector, places } of ranks) {
    along.fill(0);
    for (let a = 0; a < places.length; a++) {
      const from = (places[a] as number) * width;
      const u = factor * (vector[a] as number);
      for (let c = 0; c < width; c++) along[c] = (along[c] as number) + u * (rows[from + c] as number);
    }
    for (let a = 0; a < places.length; a++) {
      const from = (places[a] as number) * width;
      const u = vector[a] as number;
      for (let c = 0; c < width; c++) result[from + c] = (result[from + c] as number) + u * (along[c] as number);
    }
  }
  return result;
}
