import type { RankOne, RanksForm, RanksSlope } from '../algebra/block-form';
import type { RankLayout } from '../algebra/rank-layout';
import { inverseTerms, layoutOf, type RankRoot, type RankRoots, whitenRanks } from '../algebra/rank-roots';
import { rankSideOf } from './rank-side';
import { addSingle, type Traces } from './rank-single';
import { pairTrace } from './rank-traces';

/** A term that outweighs what stands before it by more than this takes digits from sums of thin terms. */
const OUTWEIGHS = 300;
/** Work (cells times the places of their terms) up to which terms that touch are then taken through the factor in full. */
const IN_FULL = 2e7;

/**
 * tr(M_a) of every slope of a block of ranks, and tr(M_a M_b) of every pair.
 *
 * Terms that touch no other by their own places; others by sums of thin terms, or through the factor in full where a term outweighs the rest by so
 * much that such sums would lose digits.
 */
export function rankTables(of: {
  readonly form: RanksForm;
  readonly roots: RankRoots;
  readonly slopes: readonly (RanksSlope | null)[];
}): Traces {
  const { form, roots, slopes } = of;
  const q = slopes.length;
  const into: Traces = { traces: new Float64Array(q), products: new Float64Array(q * q) };
  const layout = layoutOf(form);
  const terms = inverseTerms(roots);
  const inverse = form.diagonal.map((d) => 1 / d);
  const groups = groupsOf(layout);
  const left = new Uint8Array(inverse.length).fill(1);
  for (const group of groups) {
    const [l] = group as [number];
    const cells = cellsOf(layout, group);
    const heavy = group.some((m) => (roots.factors[m] as RankRoot).growth > OUTWEIGHS);
    const alone = group.length === 1;
    const work = cells.length * group.reduce((sum, m) => sum + (layout.spread[m] as Int32Array).length, 0);
    if (!alone && !(heavy && work <= IN_FULL)) continue;
    const own = slopes.map((slope) => slope && { slope, ranks: ranksAt(slope, layout, group) });
    if (alone) {
      const rank = form.ranks[layout.order[l] as number] as RankOne;
      const term = terms[l] as (typeof terms)[number];
      addSingle(into, own, { term, own: rank.vector, growth: (roots.factors[l] as RankRoot).growth, inverse });
    } else addInFull(into, own, { roots, group, cells });
    for (const i of cells) left[i] = 0;
  }
  if (left.some((here) => here === 1)) addThin(into, { slopes, left, inverse, terms, layout });
  return into;
}

/** Terms that touch, directly or through each other, by place. */
function groupsOf({ component }: RankLayout): number[][] {
  const groups = new Map<number, number[]>();
  for (const [l, c] of component.entries()) groups.set(c, [...(groups.get(c) ?? []), l]);
  return [...groups.values()];
}

function cellsOf({ spread }: RankLayout, group: readonly number[]): Int32Array {
  const [only] = group;
  if (group.length === 1) return spread[only as number] as Int32Array;
  return Int32Array.from(new Set(group.flatMap((l) => [...(spread[l] as Int32Array)]))).sort();
}

const rankLists = new WeakMap<RanksSlope, Map<number, RankOne[]>>();

/** The ranks of a slope at the places of some terms. */
function ranksAt(slope: RanksSlope, layout: RankLayout, group: readonly number[]): RankOne[] {
  let lists = rankLists.get(slope);
  if (!lists) {
    lists = new Map();
    for (const rank of slope.ranks) {
      const at = layout.positionOf.get(rank.places) as number;
      const list = lists.get(at);
      if (list) list.push(rank);
      else lists.set(at, [rank]);
    }
    rankLists.set(slope, lists);
  }
  const known = lists;
  return group.flatMap((l) => known.get(l) ?? []);
}

/** M = P^-1 Omega_a P^-T of the cells of touching terms, entry by entry. */
function addInFull(
  into: Traces,
  slopes: readonly ({ readonly slope: RanksSlope; readonly ranks: readonly RankOne[] } | null)[],
  { roots, group, cells }: { readonly roots: RankRoots; readonly group: readonly number[]; readonly cells: Int32Array },
): void {
  const n = cells.length;
  const q = slopes.length;
  const placeOf = new Map([...cells].map((i, place) => [i, place] as const));
  const local = (places: Int32Array) => places.map((i) => placeOf.get(i) as number);
  const own: RankRoots = {
    roots: Float64Array.from(cells, (i) => roots.roots[i] as number),
    factors: group.map((l) => {
      const factor = roots.factors[l] as RankRoot;
      return { ...factor, places: local(factor.places) };
    }),
  };
  const squares = slopes.map((one) => {
    if (!one) return null;
    const square = new Float64Array(n * n);
    for (let i = 0; i < n; i++) square[i * n + i] = one.slope.diagonal?.[cells[i] as number] ?? 0;
    for (const { factor, vector, places } of one.ranks) {
      const at = local(places);
      for (let a = 0; a < at.length; a++)
        for (let b = 0; b < at.length; b++) {
          const entry = (at[a] as number) * n + (at[b] as number);
          square[entry] = (square[entry] as number) + factor * (vector[a] as number) * (vector[b] as number);
        }
    }
    whitenRanks(own, square, n);
    const turned = new Float64Array(n * n);
    for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) turned[j * n + i] = square[i * n + j] as number;
    whitenRanks(own, turned, n);
    return turned;
  });
  for (const [a, first] of squares.entries()) {
    if (!first) continue;
    for (let i = 0; i < n; i++) into.traces[a] = (into.traces[a] as number) + (first[i * n + i] as number);
    for (let b = 0; b <= a; b++) {
      const second = squares[b];
      if (!second) continue;
      let sum = 0;
      for (let e = 0; e < first.length; e++) sum += (first[e] as number) * (second[e] as number);
      into.products[a * q + b] = (into.products[a * q + b] as number) + sum;
      if (a !== b) into.products[b * q + a] = (into.products[b * q + a] as number) + sum;
    }
  }
}

/** The cells that are left, by sums of thin terms. */
function addThin(
  into: Traces,
  of: {
    readonly slopes: readonly (RanksSlope | null)[];
    readonly left: Uint8Array;
    readonly inverse: Float64Array;
    readonly terms: ReturnType<typeof inverseTerms>;
    readonly layout: RankLayout;
  },
): void {
  const { slopes, left, inverse, terms, layout } = of;
  const q = slopes.length;
  const known = { inverse, terms, layout };
  const sides = slopes.map(
    (slope) =>
      slope &&
      rankSideOf(
        {
          diagonal: slope.diagonal ? slope.diagonal.map((f, i) => (left[i] ? f : 0)) : null,
          ranks: slope.ranks.filter(({ places }) => left[places[0] as number] === 1),
        },
        known,
      ),
  );
  for (const [a, first] of sides.entries()) {
    if (!first) continue;
    into.traces[a] = (into.traces[a] as number) + first.trace;
    for (let b = 0; b <= a; b++) {
      const second = sides[b];
      if (!second) continue;
      const value = pairTrace(first, second, known);
      into.products[a * q + b] = (into.products[a * q + b] as number) + value;
      if (a !== b) into.products[b * q + a] = (into.products[b * q + a] as number) + value;
    }
  }
}
