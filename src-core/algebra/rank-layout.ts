/** Where the rank-one terms of a block stand to each other: known from their places alone, and kept while their sizes change. */
export interface RankLayout {
  /** The terms, those of fewer places first; what follows goes by place in this order. */
  readonly order: readonly number[];
  /** Terms before it that share places with a term, directly or through each other. */
  readonly earlier: readonly (readonly number[])[];
  /** The places that a term spreads over by what stands before it. */
  readonly spread: readonly Int32Array[];
  /** All terms whose spreads share a place with a term's own, itself among them, ascending. */
  readonly beside: readonly (readonly number[])[];
  /** True for a term with few others beside it, and all of those beside each other. */
  readonly close: readonly boolean[];
  /** Terms with one number do not touch terms with another. */
  readonly component: Int32Array;
  /** The term that has exactly this list of places. */
  readonly positionOf: ReadonlyMap<Int32Array, number>;
}

/** More neighbours than this are not few. */
const FEW = 8;

/** The layout of terms on a block of `count` cells, by their places. */
export function rankLayoutOf(count: number, places: readonly Int32Array[]): RankLayout {
  const order = [...places.keys()].sort(
    (a, b) => (places[a] as Int32Array).length - (places[b] as Int32Array).length || a - b,
  );
  const sorted = order.map((t) => places[t] as Int32Array);
  const { earlier, spread } = spreadsOf(count, sorted);
  const beside = besideOf(count, spread);
  return {
    order,
    earlier,
    spread,
    beside,
    close: beside.map((own) => own.length <= FEW && own.every((l) => own.every((m) => beside[l]?.includes(m)))),
    component: componentsOf(earlier),
    positionOf: new Map(sorted.map((own, l) => [own, l] as const)),
  };
}

function spreadsOf(count: number, sorted: readonly Int32Array[]): Pick<RankLayout, 'earlier' | 'spread'> {
  const at: number[][] = Array.from({ length: count }, () => []);
  const earlier: number[][] = [];
  const spread: Int32Array[] = [];
  for (const [l, places] of sorted.entries()) {
    const { terms, seen } = touching(places, { at, spread });
    earlier.push(terms);
    const own = seen.size === places.length ? places : Int32Array.from(seen).sort();
    spread.push(own);
    for (const i of own) (at[i] as number[]).push(l);
  }
  return { earlier, spread };
}

/** The terms that share a place with some places, or with a term that does, in their order; and all their places. */
function touching(
  places: Int32Array,
  { at, spread }: { readonly at: readonly (readonly number[])[]; readonly spread: readonly Int32Array[] },
): { readonly terms: number[]; readonly seen: ReadonlySet<number> } {
  const seen = new Set<number>(places);
  const terms = new Set<number>();
  const open: number[] = [...places];
  for (let i = open.pop(); i !== undefined; i = open.pop())
    for (const l of at[i] ?? []) {
      if (terms.has(l)) continue;
      terms.add(l);
      for (const j of spread[l] ?? []) {
        if (seen.has(j)) continue;
        seen.add(j);
        open.push(j);
      }
    }
  return { terms: [...terms].sort((a, b) => a - b), seen };
}

function besideOf(count: number, spread: readonly Int32Array[]): number[][] {
  const at: number[][] = Array.from({ length: count }, () => []);
  for (const [l, places] of spread.entries()) for (const i of places) (at[i] as number[]).push(l);
  return spread.map((places) => {
    const found = new Set<number>();
    for (const i of places) for (const l of at[i] as number[]) found.add(l);
    return [...found].sort((a, b) => a - b);
  });
}

function componentsOf(earlier: readonly (readonly number[])[]): Int32Array {
  const component = new Int32Array(earlier.length);
  const root = (l: number): number => (component[l] === l ? l : root(component[l] as number));
  for (const [l, before] of earlier.entries()) {
    component[l] = l;
    for (const m of before) component[root(m)] = l;
  }
  return component.map((_, l) => root(l));
}

/** Places that the terms of a block spread over, all together: what one product with its factor costs. */
export function thicknessOf({ spread }: Pick<RankLayout, 'spread'>): number {
  return spread.reduce((sum, places) => sum + places.length, 0);
}
