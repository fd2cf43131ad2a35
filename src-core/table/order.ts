import { pairAt } from '../numbers/decimals';
import { fromNumber, subtract } from '../numbers/double-double';
import { problem } from '../protocol/outcome';
import type { Column } from './column';
import type { Frame } from './frame';
import { groupsOf } from './groups';

/** An order inside groups. */
export interface Order {
  readonly order: Column;
  readonly by: readonly Column[];
}

/**
 * For each row the row of its own group whose order is s less, -1 where there is none.
 *
 *     t - s, by value: never merely the row before
 *
 * A row without a group or an order has none. Where an order repeats, the first row stands: `noteRepeatedOrder` makes it a fault.
 *
 * Example: years 2019, 2021, 2022 in one group and s = 1 give -1, -1, 1.
 */
export function earlierRows(rows: number, { order, by, steps }: Order & { readonly steps: number }): Int32Array {
  const groups = groupsOf(rows, by);
  const { values, gaps } = order.numbers();
  const places = new Map<string, Map<number, number>>();
  for (const [row, group] of groups.entries()) {
    if (group === null || gaps[row] !== null) continue;
    const byTime = places.get(group) ?? new Map<number, number>();
    places.set(group, byTime);
    const time = values.high[row] as number;
    if (!byTime.has(time)) byTime.set(time, row);
  }
  return Int32Array.from(groups, (group, row) => {
    if (group === null || gaps[row] !== null) return -1;
    const [time] = subtract(pairAt(values, row), fromNumber(steps));
    return Number.isNaN(time) ? -1 : (places.get(group)?.get(time) ?? -1);
  });
}

/**
 * Notes the first value of an order that stands twice inside a group, with the labels of all rows that hold it there.
 *
 * rows: those looked at, in data order.
 */
export function noteRepeatedOrder(
  frame: Frame,
  { order, by, rows, at }: Order & { readonly rows: readonly number[]; readonly at: string },
): void {
  const groups = groupsOf(frame.rows, by);
  const { values, gaps } = order.numbers();
  const holding = new Map<string, number[]>();
  for (const row of rows) {
    const group = groups[row];
    const time = values.high[row] as number;
    if (group === null || group === undefined || gaps[row] !== null || Number.isNaN(time)) continue;
    const key = `${time} ${values.low[row]} ${group}`;
    const found = holding.get(key);
    if (found) found.push(row);
    else holding.set(key, [row]);
  }
  const repeated = [...holding.values()].find(({ length }) => length > 1);
  const first = repeated?.[0];
  if (!repeated || first === undefined) return;
  const facts = {
    column: order.name,
    found: order.texts[first] as string,
    group: Object.fromEntries(by.map(({ name, texts }) => [name, texts[first] as string])),
    labels: repeated.map((row) => frame.labels[row] as string),
  };
  frame.problems.push(problem('order-repeats', facts, at));
}
