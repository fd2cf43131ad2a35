import type { InverseTerm } from '../algebra/rank-roots';
import { alongOf, clear, gathered, put, type RankInverse, type RankSide, type SidedRank, slotOf } from './rank-side';

/**
 * tr(Omega^-1 F Omega^-1 H) of two slopes of a block of ranks, Omega^-1 = E - sum gamma z z'.
 *
 *     tr(E F E H) - 2 sum gamma z'F E H z + sum gamma gamma' (z'F z') (z'H z')
 */
export function pairTrace(first: RankSide, second: RankSide, of: RankInverse): number {
  const crossed = crossDots(first, second, of);
  let trace = plainPart(first, second, of);
  for (const { one, other, value } of crossed) {
    const factors = one.rank.factor * other.rank.factor;
    trace += factors * value * value;
    trace -= 2 * factors * value * commonAlong(one, other, of);
  }
  trace -= 2 * (diagonalPart(first, second, of) + throughRanks(first, second, of) + throughRanks(second, first, of));
  return trace + insidePart(first, second, of);
}

/** u' E v of every pair of ranks that share places. */
function crossDots(
  first: RankSide,
  second: RankSide,
  { inverse, layout }: RankInverse,
): { readonly one: SidedRank; readonly other: SidedRank; readonly value: number }[] {
  const buffer = new Float64Array(inverse.length);
  const found: { one: SidedRank; other: SidedRank; value: number }[] = [];
  const half = (from: RankSide, to: RankSide, mirrored: boolean) => {
    for (const thick of from.ranks) {
      const size = thick.rank.places.length;
      put(buffer, thick.rank, inverse);
      for (const t of layout.beside[thick.at] ?? [])
        for (const thin of to.byTerm.get(t) ?? []) {
          const theirs = thin.rank.places.length;
          if (theirs > size || (theirs === size && mirrored)) continue;
          const value = gathered(buffer, thin.rank);
          if (value === 0) continue;
          found.push(mirrored ? { one: thin, other: thick, value } : { one: thick, other: thin, value });
        }
      clear(buffer, thick.rank);
    }
  };
  half(first, second, false);
  half(second, first, true);
  return found;
}

/** sum over terms beside both of gamma (u'z) (v'z). */
function commonAlong(one: SidedRank, other: SidedRank, { terms, layout }: RankInverse): number {
  const [few, many] = one.along.length <= other.along.length ? [one, other] : [other, one];
  let sum = 0;
  for (const [x, l] of (layout.beside[few.at] ?? []).entries()) {
    const slot = few.at === many.at ? x : slotOf(layout, many.at, l);
    if (slot >= 0) sum += (terms[l]?.gamma as number) * (few.along[x] as number) * (many.along[slot] as number);
  }
  return sum;
}

/** The diagonals' part of tr(E F E H). */
function plainPart(first: RankSide, second: RankSide, { inverse }: RankInverse): number {
  let sum = 0;
  if (first.diagonal && second.diagonal)
    for (const [i, e] of inverse.entries())
      sum += e * e * (first.diagonal[i] as number) * (second.diagonal[i] as number);
  for (const [side, other] of [
    [first, second],
    [second, first],
  ] as const) {
    const { diagonal } = side;
    if (!diagonal) continue;
    for (const { rank } of other.ranks)
      for (let a = 0; a < rank.places.length; a++) {
        const i = rank.places[a] as number;
        const along = (inverse[i] as number) * (rank.vector[a] as number);
        sum += rank.factor * (diagonal[i] as number) * along * along;
      }
  }
  return sum;
}

/** sum gamma z' D E D' z. */
function diagonalPart(first: RankSide, second: RankSide, { inverse, terms }: RankInverse): number {
  if (!first.diagonal || !second.diagonal) return 0;
  let sum = 0;
  for (const { vector, places, gamma } of terms)
    for (let a = 0; a < places.length; a++) {
      const i = places[a] as number;
      const z = vector[a] as number;
      sum += gamma * z * z * (first.diagonal[i] as number) * (inverse[i] as number) * (second.diagonal[i] as number);
    }
  return sum;
}

/** sum gamma z' D E u c u'z: the diagonal of one slope and the ranks of the other. */
function throughRanks(first: RankSide, second: RankSide, of: RankInverse): number {
  const { diagonal } = first;
  if (!diagonal || second.ranks.length === 0) return 0;
  const both = diagonal.map((d, i) => d * (of.inverse[i] as number));
  const weighed = alongOf(
    second.ranks.map(({ rank }) => rank),
    both,
    of,
  );
  let sum = 0;
  for (const [r, { rank, at, along }] of second.ranks.entries())
    for (const [x, l] of (of.layout.beside[at] ?? []).entries())
      sum += (of.terms[l]?.gamma as number) * rank.factor * (along[x] as number) * (weighed[r]?.[x] as number);
  return sum;
}

/** sum over pairs of terms of gamma gamma' (z'F z') (z'H z'), heavy ranks apart. */
function insidePart(first: RankSide, second: RankSide, of: RankInverse): number {
  const { terms, layout } = of;
  let sum = 0;
  for (const [l, row] of first.inside.entries()) {
    const gamma = (terms[l] as InverseTerm).gamma;
    const other = second.inside[l] as Float64Array;
    for (const [slot, m] of (layout.beside[l] ?? []).entries())
      sum += gamma * (terms[m]?.gamma as number) * (row[slot] as number) * (other[slot] as number);
  }
  const heavy = (side: RankSide) => side.ranks.filter((sided) => sided.heavy);
  for (const sided of heavy(first)) sum += throughInside(sided, second, of);
  for (const sided of heavy(second)) sum += throughInside(sided, first, of);
  const others = heavy(second);
  for (const one of heavy(first))
    for (const other of others) {
      if (layout.component[one.at] !== layout.component[other.at]) continue;
      const common = commonAlong(one, other, of);
      sum += one.rank.factor * other.rank.factor * common * common;
    }
  return sum;
}

/** c (Gamma a)' S (Gamma a), a of a heavy rank and S what the other slope has inside. */
function throughInside({ rank, at, along }: SidedRank, side: RankSide, { terms, layout }: RankInverse): number {
  const weighed = new Float64Array(terms.length);
  const own = layout.beside[at] ?? [];
  for (const [x, l] of own.entries()) weighed[l] = (terms[l]?.gamma as number) * (along[x] as number);
  let sum = 0;
  for (const l of own)
    for (const [slot, m] of (layout.beside[l] ?? []).entries())
      sum += (weighed[l] as number) * (side.inside[l]?.[slot] as number) * (weighed[m] as number);
  return rank.factor * sum;
}
