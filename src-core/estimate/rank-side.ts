import type { RankOne, RanksSlope } from '../algebra/block-form';
import type { RankLayout } from '../algebra/rank-layout';
import type { InverseTerm } from '../algebra/rank-roots';

/** A list as long as this is searched by halves. */
const LONG = 8;

/** The inverse of a block of ranks: E - sum gamma z z', E the inverse diagonal. */
export interface RankInverse {
  readonly inverse: Float64Array;
  readonly terms: readonly InverseTerm[];
  readonly layout: RankLayout;
}

/** A rank-one term of a slope at the place of a term of the block. */
export interface SidedRank {
  readonly rank: RankOne;
  readonly at: number;
  /** u'z of every term beside it. */
  readonly along: Float64Array;
  /** True where its products are kept as its own: its neighbours are many, or not all beside each other. */
  readonly heavy: boolean;
}

/** One slope F against the inverse. */
export interface RankSide {
  readonly diagonal: Float64Array | null;
  readonly ranks: readonly SidedRank[];
  /** The ranks by the term at whose place they stand. */
  readonly byTerm: ReadonlyMap<number, readonly SidedRank[]>;
  /** z_l' F z_m of every term and those beside it, heavy ranks left out. */
  readonly inside: readonly Float64Array[];
  /** tr(Omega^-1 F). */
  readonly trace: number;
}

/** What a slope has in common with the inverse of its block. */
export function rankSideOf(slope: RanksSlope, of: RankInverse): RankSide {
  const { inverse, terms, layout } = of;
  const along = alongOf(slope.ranks, null, of);
  const ranks = slope.ranks.map((rank, r): SidedRank => {
    const at = layout.positionOf.get(rank.places) as number;
    const own = along[r] as Float64Array;
    return { rank, at, along: own, heavy: !layout.close[at] };
  });
  const byTerm = new Map<number, SidedRank[]>();
  for (const sided of ranks) byTerm.set(sided.at, [...(byTerm.get(sided.at) ?? []), sided]);
  const inside = layout.beside.map((beside) => new Float64Array(beside.length));
  if (slope.diagonal) addDiagonal(inside, slope.diagonal, of);
  for (const { rank, at, along: own, heavy } of ranks) {
    const beside = layout.beside[at] as readonly number[];
    if (heavy) continue;
    for (const [x, l] of beside.entries())
      for (const [y, m] of beside.entries()) {
        const slot = slotOf(layout, l, m);
        const row = inside[l] as Float64Array;
        row[slot] = (row[slot] as number) + rank.factor * (own[x] as number) * (own[y] as number);
      }
  }
  return {
    diagonal: slope.diagonal,
    ranks,
    byTerm,
    inside,
    trace: traceOf({ slope, ranks, inside }, { inverse, terms, layout }),
  };
}

/** The place of m among the terms beside l. */
export function slotOf({ beside }: RankLayout, l: number, m: number): number {
  const own = beside[l] as readonly number[];
  if (own.length <= LONG) return own.indexOf(m);
  let low = 0;
  let high = own.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((own[middle] as number) < m) low = middle + 1;
    else high = middle;
  }
  return own[low] === m ? low : -1;
}

function traceOf(
  {
    slope,
    ranks,
    inside,
  }: { readonly slope: RanksSlope; readonly ranks: readonly SidedRank[]; readonly inside: readonly Float64Array[] },
  { inverse, terms, layout }: RankInverse,
): number {
  let trace = 0;
  if (slope.diagonal) for (const [i, e] of inverse.entries()) trace += e * (slope.diagonal[i] as number);
  for (const { factor, vector, places } of slope.ranks)
    for (let a = 0; a < places.length; a++)
      trace += factor * (inverse[places[a] as number] as number) * (vector[a] as number) * (vector[a] as number);
  for (const [l, { gamma }] of terms.entries()) trace -= gamma * (inside[l]?.[slotOf(layout, l, l)] as number);
  for (const { rank, at, along, heavy } of ranks) {
    if (!heavy) continue;
    for (const [x, l] of (layout.beside[at] ?? []).entries())
      trace -= (terms[l]?.gamma as number) * rank.factor * (along[x] as number) * (along[x] as number);
  }
  return trace;
}

/** u' diag(weights) z of every rank and the terms beside it: the thinner of the two is taken place by place. */
export function alongOf(ranks: readonly RankOne[], weights: Float64Array | null, of: RankInverse): Float64Array[] {
  const { inverse, terms, layout } = of;
  const buffer = new Float64Array(inverse.length);
  const at = ranks.map(({ places }) => layout.positionOf.get(places) as number);
  const along = at.map((t) => new Float64Array((layout.beside[t] as readonly number[]).length));
  const thinner: (readonly [r: number, slot: number])[][] = terms.map(() => []);
  for (const [r, rank] of ranks.entries()) {
    put(buffer, rank, weights);
    for (const [slot, l] of (layout.beside[at[r] as number] ?? []).entries()) {
      const term = terms[l] as InverseTerm;
      if (term.places.length <= rank.places.length) (along[r] as Float64Array)[slot] = gathered(buffer, term);
      else thinner[l]?.push([r, slot]);
    }
    clear(buffer, rank);
  }
  for (const [l, pairs] of thinner.entries()) {
    if (pairs.length === 0) continue;
    put(buffer, terms[l] as InverseTerm, weights);
    for (const [r, slot] of pairs) (along[r] as Float64Array)[slot] = gathered(buffer, ranks[r] as RankOne);
    clear(buffer, terms[l] as InverseTerm);
  }
  return along;
}

/** z_l' D z_m, the thinner of the two place by place. */
function addDiagonal(inside: readonly Float64Array[], diagonal: Float64Array, { terms, layout }: RankInverse): void {
  const buffer = new Float64Array(diagonal.length);
  for (const [l, term] of terms.entries()) {
    put(buffer, term, diagonal);
    for (const [slot, m] of (layout.beside[l] ?? []).entries()) {
      const other = terms[m] as InverseTerm;
      const [own, theirs] = [term.places.length, other.places.length];
      if (theirs > own || (theirs === own && m > l)) continue;
      const value = gathered(buffer, other);
      (inside[l] as Float64Array)[slot] = value;
      (inside[m] as Float64Array)[slotOf(layout, m, l)] = value;
    }
    clear(buffer, term);
  }
}

/** A vector on some places. */
interface Thin {
  readonly vector: Float64Array;
  readonly places: Int32Array;
}

export function put(buffer: Float64Array, { vector, places }: Thin, weights: Float64Array | null): void {
  for (let a = 0; a < places.length; a++) {
    const i = places[a] as number;
    buffer[i] = (vector[a] as number) * (weights ? (weights[i] as number) : 1);
  }
}

export function gathered(buffer: Float64Array, { vector, places }: Thin): number {
  let sum = 0;
  for (let a = 0; a < places.length; a++) sum += (buffer[places[a] as number] as number) * (vector[a] as number);
  return sum;
}

export function clear(buffer: Float64Array, { places }: Pick<Thin, 'places'>): void {
  for (let a = 0; a < places.length; a++) buffer[places[a] as number] = 0;
}
