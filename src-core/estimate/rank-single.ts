import type { RankOne, RanksSlope } from '../algebra/block-form';
import type { InverseTerm } from '../algebra/rank-roots';

/** Where tables of traces are added up: tr(M_a), and tr(M_a M_b) row after row. */
export interface Traces {
  readonly traces: Float64Array;
  readonly products: Float64Array;
}

/** A term that shares its places with no other: the inverse there is E - gamma z z'. */
export interface SingleTerm {
  readonly term: InverseTerm;
  /** u of the block's own term, and 1 + c u'E u. */
  readonly own: Float64Array;
  readonly growth: number;
  readonly inverse: Float64Array;
}

/** A rank-one term of a slope, with y = Omega^-1 u. */
interface Solved {
  readonly factor: number;
  readonly u: Float64Array;
  readonly y: Float64Array;
}

/** Two vectors are multiples of each other where no place departs by more than rounding. */
const ROUNDING = 2e-15;

/**
 * Adds what one term's places bring to the traces. Where a slope's vector is a multiple k of the block's own, y = k z / growth: nothing cancels, however
 * much the term outweighs the diagonal.
 *
 * slopes: by the free parameters, with the ranks that stand on these places.
 */
export function addSingle(
  into: Traces,
  slopes: readonly ({ readonly slope: RanksSlope; readonly ranks: readonly RankOne[] } | null)[],
  single: SingleTerm,
): void {
  const q = slopes.length;
  const { term, inverse } = single;
  const solved = slopes.map((one) => one?.ranks.map((rank) => solvedRank(rank, single)) ?? []);
  for (let a = 0; a < q; a++) {
    const first = slopes[a];
    if (!first) continue;
    const f = first.slope.diagonal;
    into.traces[a] =
      (into.traces[a] as number) +
      (f ? sumOver(term, (i, z) => (f[i] as number) * ((inverse[i] as number) - term.gamma * z * z)) : 0) +
      ranksSum(solved[a] ?? [], ({ u, y }) => inner(u, y));
    for (let b = 0; b <= a; b++) {
      const second = slopes[b];
      if (!second) continue;
      const value = pairOf({ f, ranks: solved[a] ?? [] }, { f: second.slope.diagonal, ranks: solved[b] ?? [] }, single);
      into.products[a * q + b] = (into.products[a * q + b] as number) + value;
      if (a !== b) into.products[b * q + a] = (into.products[b * q + a] as number) + value;
    }
  }
}

interface Side {
  readonly f: Float64Array | null;
  readonly ranks: readonly Solved[];
}

function pairOf(one: Side, other: Side, { term, inverse }: SingleTerm): number {
  const { f, ranks } = one;
  const h = other.f;
  let sum = 0;
  if (f && h) {
    const both = (weigh: (e: number, z: number) => number) =>
      sumOver(term, (i, z) => (f[i] as number) * (h[i] as number) * weigh(inverse[i] as number, z));
    const along = (values: Float64Array) => sumOver(term, (i, z) => (values[i] as number) * z * z);
    sum += both((e) => e * e) - 2 * term.gamma * both((e, z) => e * z * z);
    sum += term.gamma * along(f) * (term.gamma * along(h));
  }
  const through = (values: Float64Array | null, own: readonly Solved[]) =>
    values
      ? ranksSum(own, ({ y }) =>
          y.reduce((total, v, a) => total + (values[term.places[a] as number] as number) * v * v, 0),
        )
      : 0;
  sum += through(f, other.ranks) + through(h, ranks);
  for (const left of ranks)
    for (const right of other.ranks) {
      const product = inner(left.u, right.y);
      sum += left.factor * right.factor * product * product;
    }
  return sum;
}

function solvedRank({ factor, vector }: RankOne, { term, own, growth, inverse }: SingleTerm): Solved {
  const share = (vector[0] as number) / (own[0] as number);
  const multiple = vector.every((u, a) => Math.abs(u - share * (own[a] as number)) <= ROUNDING * Math.abs(u));
  if (multiple) return { factor, u: vector, y: term.vector.map((z) => (share * z) / growth) };
  const along = term.gamma * inner(vector, term.vector);
  const y = vector.map(
    (u, a) => (inverse[term.places[a] as number] as number) * u - along * (term.vector[a] as number),
  );
  return { factor, u: vector, y };
}

function sumOver({ vector, places }: InverseTerm, value: (i: number, z: number) => number): number {
  let sum = 0;
  for (let a = 0; a < places.length; a++) sum += value(places[a] as number, vector[a] as number);
  return sum;
}

function ranksSum(ranks: readonly Solved[], value: (rank: Solved) => number): number {
  return ranks.reduce((sum, rank) => sum + rank.factor * value(rank), 0);
}

function inner(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += (a[i] as number) * (b[i] as number);
  return sum;
}
