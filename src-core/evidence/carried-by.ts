import type { Fitted } from '../estimate/fitted';
import type { Decimals } from '../numbers/decimals';
import type { Plan } from '../protocol/plan';
import type { CarriedBy } from '../protocol/result';
import type { Cells } from '../table/cells';

/**
 * How many cells, and how many groups of each label column, the variation of each term rests on.
 *
 * A column that one value fills in half of the cells or more (a category's 0, as a rule) varies by the others alone: those are its cells, and its
 * groups are the fewer of those that hold such a cell and those that hold the common value. Any other column rests on every cell and group,
 * and so does the intercept. plan: its clusters are groups as well, several columns together joined by " × ". Label columns that tell every cell apart, or none, make no groups and are left out.
 *
 * Example: a law in force in 3 of 14 districts, over 6 years: 18 cells; by district 3 groups, constant within; by year 6 groups.
 */
export function carriedByOf(of: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan?: Pick<Plan, 'inference'>;
}): CarriedBy[] {
  const { design } = of.fitted;
  const labels = of.plan ? groupingsOf(of.cells, of.plan) : groupingColumns(of.cells);
  return design.names.map((term, j) => {
    const column = design.columns[j] as Decimals;
    const common = design.termOf[j] === -1 ? null : commonValue(column);
    const carries = Array.from(column.high, (_, g) => common === null || !same(column, g, common));
    return {
      term,
      cells: carries.filter(Boolean).length,
      by: labels.map(({ name, groups, count }) => ({
        column: name,
        groups: common === null ? count : fewerGroups(groups, carries),
        constantWithin: constantWithin(column, groups),
      })),
    };
  });
}

export interface Grouping {
  readonly name: string;
  /** An index from 0 for every cell, in order of first sight. */
  readonly groups: Int32Array;
  readonly count: number;
  readonly values: readonly string[];
}

/** Label columns whose values pair cells without putting all into one. */
export function groupingColumns(cells: Cells): Grouping[] {
  return cells.labelColumns
    .map((name) => ({ name, ...groupsOf(cells.texts(name)) }))
    .filter(({ count }) => count > 1 && count < cells.count);
}

/** The label columns that pair cells, and the clusters of the plan's inference where they are none of these. */
export function groupingsOf(cells: Cells, { inference }: Pick<Plan, 'inference'>): Grouping[] {
  const labels = groupingColumns(cells);
  const ways = inference.kind === 'clustered' || inference.kind === 'wild' ? [inference.by] : [];
  if (inference.kind === 'clustered' && inference.alsoBy) ways.push(inference.alsoBy);
  const clusters = ways
    .filter((by) => !(by.length === 1 && labels.some(({ name }) => name === by[0])))
    .map((by) => {
      const columns = by.map((column) => cells.texts(column));
      const keys = Array.from({ length: cells.count }, (_, g) => JSON.stringify(columns.map((texts) => texts[g])));
      return { name: by.join(' × '), ...groupsOf(keys) };
    })
    .filter(({ count }) => count > 1 && count < cells.count);
  return [...labels, ...clusters];
}

function groupsOf(texts: readonly string[]): Omit<Grouping, 'name'> {
  const seen = new Map<string, number>();
  const groups = Int32Array.from(texts, (text) => {
    const known = seen.get(text) ?? seen.size;
    seen.set(text, known);
    return known;
  });
  return { groups, count: seen.size, values: [...seen.keys()] };
}

/** Index of the first cell with the value that half of the cells or more share; null without one. */
function commonValue(column: Decimals): number | null {
  const counts = new Map<number, number>();
  for (const value of column.high) counts.set(value, (counts.get(value) ?? 0) + 1);
  for (const [value, count] of counts) if (2 * count >= column.high.length) return column.high.indexOf(value);
  return null;
}

function same(column: Decimals, a: number, b: number): boolean {
  return column.high[a] === column.high[b] && column.low[a] === column.low[b];
}

function fewerGroups(groups: Int32Array, carries: readonly boolean[]): number {
  const holding = [new Set<number>(), new Set<number>()] as const;
  for (const [g, group] of groups.entries()) holding[carries[g] ? 1 : 0].add(group);
  return Math.min(holding[0].size, holding[1].size);
}

function constantWithin(column: Decimals, groups: Int32Array): boolean {
  const first = new Map<number, number>();
  for (const [g, group] of groups.entries()) {
    const known = first.get(group);
    if (known === undefined) first.set(group, g);
    else if (!same(column, g, known)) return false;
  }
  return true;
}
