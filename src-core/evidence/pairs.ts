import type { Plan } from '../protocol/plan';
import type { Cells } from '../table/cells';

/** One way in which cells stand together: B_gh = 1 for two cells of a pair, 0 on the diagonal. */
export interface Pairs {
  /** Columns whose equal values make a group; empty for a neighbour list, and for one series. */
  readonly by: readonly string[];
  /** Pairs are consecutive cells of a group in this column's order; null for all pairs of a group. */
  readonly order: string | null;
  /** The file of the neighbour list. */
  readonly neighbours: string | null;
  /** Cells that stand together pairwise, each cell in one group; null where pairs are listed. */
  readonly groups: readonly (readonly number[])[] | null;
  /** Partners of each cell; null where pairs come from groups. */
  readonly partners: readonly (readonly number[])[] | null;
  /** Sum of B: each pair counted both ways. */
  readonly total: number;
}

/**
 * Every pairing of the used cells that the plan offers, those without a pair left out: each label column that groups cells (some but
 * not all of them together), each order of a serial part and of a derived lag or change (consecutive cells of its group, whatever the
 * step; each order once), then the neighbour list.
 */
export function pairingsOf(cells: Cells, plan: Plan): Pairs[] {
  const byLabel = cells.labelColumns.map((column) => byGroups(column, groupsOf(cells, [column])));
  const orders = ordersOf(plan).map(({ by, order }) => byOrder({ cells, by, order }));
  const list = plan.tests?.neighbours ?? null;
  const neighbours = cells.neighbours && list !== null ? [byList(cells.neighbours, cells.count, list)] : [];
  return [...byLabel, ...orders, ...neighbours].filter(
    (pairs) => pairs.total > 0 && (pairs.groups === null || pairs.groups.length > 1),
  );
}

/** B x. */
export function partnerSums(pairs: Pairs, x: Float64Array): Float64Array {
  const sums = new Float64Array(x.length);
  for (const group of pairs.groups ?? []) {
    const total = group.reduce((sum, g) => sum + (x[g] as number), 0);
    for (const g of group) sums[g] = group.length > 1 ? total - (x[g] as number) : 0;
  }
  for (const [g, partners] of (pairs.partners ?? []).entries())
    sums[g] = partners.reduce((sum, h) => sum + (x[h] as number), 0);
  return sums;
}

function byGroups(column: string, groups: readonly (readonly number[])[]): Pairs {
  const total = groups.reduce((sum, group) => sum + group.length * (group.length - 1), 0);
  return { by: [column], order: null, neighbours: null, groups, partners: null, total };
}

function byOrder(series: { cells: Cells; by: readonly string[]; order: string }): Pairs {
  const { cells, by, order } = series;
  const { high, low } = cells.numbers(order).values;
  const before = (g: number, h: number) =>
    (high[g] as number) - (high[h] as number) || (low[g] as number) - (low[h] as number) || g - h;
  const links: (readonly [number, number])[] = [];
  for (const group of groupsOf(cells, by)) {
    const inOrder = [...group].sort(before);
    for (let i = 1; i < inOrder.length; i++) links.push([inOrder[i - 1] as number, inOrder[i] as number]);
  }
  return { ...byList(links, cells.count, null), by, order };
}

function byList(links: readonly (readonly [number, number])[], count: number, neighbours: string | null): Pairs {
  const partners: number[][] = Array.from({ length: count }, () => []);
  for (const [g, h] of links) {
    partners[g]?.push(h);
    partners[h]?.push(g);
  }
  return { by: [], order: null, neighbours, groups: null, partners, total: 2 * links.length };
}

/** Cells by equal texts in all the columns, groups by first appearance; no columns: one group. */
function groupsOf(cells: Cells, columns: readonly string[]): number[][] {
  const texts = columns.map((column) => cells.texts(column));
  const groups = new Map<string, number[]>();
  for (let g = 0; g < cells.count; g++) {
    const key = JSON.stringify(texts.map((column) => column[g]));
    const group = groups.get(key);
    if (group) group.push(g);
    else groups.set(key, [g]);
  }
  return [...groups.values()];
}

function ordersOf(plan: Plan): { by: readonly string[]; order: string }[] {
  const serial = plan.variance.parts.flatMap((part) =>
    'correlation' in part && part.correlation?.kind === 'serial' ? [part.correlation] : [],
  );
  const derived = plan.data.derive.flatMap((rule) => (rule.as === 'lag' || rule.as === 'change' ? [rule] : []));
  const seen = new Set<string>();
  return [...serial, ...derived]
    .map(({ by, order }) => ({ by, order }))
    .filter(({ by, order }) => {
      const key = JSON.stringify([order, ...by]);
      return !seen.has(key) && seen.add(key);
    });
}
