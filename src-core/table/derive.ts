import { pairAt } from '../numbers/decimals';
import { add, divide, fromNumber, type Pair, subtract, ZERO } from '../numbers/double-double';
import { problem } from '../protocol/outcome';
import type { Derive } from '../protocol/plan';
import { type Column, type Numbers, once, type Undefined } from './column';
import { type Combined, combine, derivedColumn, type Ingredient } from './derived';
import type { Frame } from './frame';
import { groupsOf } from './groups';
import { earlierRows, type Order } from './order';

/** A place where numbers are needed of a column. */
export interface NumericPlace {
  readonly column: Column;
  readonly at: string;
}

/** What a derived column needs of others. */
export interface Needed {
  readonly numeric: readonly NumericPlace[];
  /** The order of a lag or change, whose values may not repeat inside a group. */
  readonly ordered: (Order & { readonly at: string }) | null;
}

/**
 * Derives a column over all rows and takes it in, in double-double throughout.
 *
 *     lag x_(t-s) · change x_t - x_(t-s) · ratio x / z · difference x - z · centred x - mean · group-mean · within-group-deviation x - mean of group
 *
 * t - s is looked up by value in the row's own group: where that step is not there the value is missing, whatever row comes before. Means are
 * unweighted, over the rows that have a value; a group without any has no mean. A value whose ingredient is missing is missing for the same reason.
 * Notes names that are unknown or taken. Returned: what must hold of the columns that it is made of.
 *
 * Example: with years 2019 and 2021 a lag of one step gives no value to either.
 */
export function deriveColumn(frame: Frame, derive: Derive, at: string): Needed {
  const sources = sourcesOf(frame, derive, at);
  const holder = frame.holder(derive.name);
  if (holder !== null) {
    frame.problems.push(problem('name-clash', { column: holder.name, files: [holder.file] }, `${at}/name`));
    return { numeric: sources?.numeric ?? [], ordered: null };
  }
  if (sources === null) {
    frame.complete = false;
    return { numeric: [], ordered: null };
  }
  const { rows, file } = frame;
  const numbers = once(() => combine(rows, recipeOf(derive, { ...sources, rows, at }), file));
  frame.take(derivedColumn({ name: derive.name, file, numbers }));
  return {
    numeric: sources.numeric,
    ordered: sources.order && { order: sources.order, by: sources.by, at: `${at}/order` },
  };
}

interface Sources {
  readonly numeric: readonly NumericPlace[];
  readonly of: Column;
  /** The column divided by or taken off. */
  readonly second: Column | null;
  readonly order: Column | null;
  readonly by: readonly Column[];
}

/** The columns that a derived one is made of; null where one of them is not there. */
function sourcesOf(frame: Frame, derive: Derive, at: string): Sources | null {
  const secondKey = derive.as === 'ratio' ? 'over' : 'minus';
  const names = {
    of: derive.of,
    [secondKey]: derive.as === 'ratio' ? derive.over : derive.as === 'difference' ? derive.minus : null,
    order: 'order' in derive ? derive.order : null,
  };
  const found = Object.entries(names).flatMap(([key, name]) =>
    name === null ? [] : [{ key, column: frame.find(name, `${at}/${key}`), at: `${at}/${key}` }],
  );
  const by = ('by' in derive ? derive.by : []).map((name, i) => frame.find(name, `${at}/by/${i}`));
  const groups = by.filter((column) => column !== null);
  const numeric = found.filter((place): place is typeof place & NumericPlace => place.column !== null);
  const named = (key: string) => numeric.find((place) => place.key === key)?.column ?? null;
  const of = named('of');
  if (of === null || numeric.length < found.length || groups.length < by.length) return null;
  return { numeric, of, second: named(secondKey), order: named('order'), by: groups };
}

type Recipe = (row: number) => Combined;

function recipeOf(derive: Derive, from: Sources & { readonly rows: number; readonly at: string }): Recipe {
  const { of, second, order, by, rows, at } = from;
  const ingredient = (column: Column, row: number): Ingredient => ({ column, numbers: column.numbers(), row });
  if (order !== null && 'steps' in derive) {
    const earlier = earlierRows(rows, { order, by, steps: derive.steps });
    const before = (row: number) => ingredient(of, earlier[row] as number);
    if (derive.as === 'lag') return (row) => ({ of: [before(row)], value: ([x]) => x as Pair });
    const blame = { at: `${at}/of`, transform: derive.as };
    return (row) => ({ of: [ingredient(of, row), before(row)], value: difference, blame });
  }
  if (second !== null) {
    const ratio = derive.as === 'ratio';
    const blame = { at: `${at}/${ratio ? 'over' : 'minus'}`, transform: derive.as };
    return (row) => ({
      of: [ingredient(of, row), ingredient(second, row)],
      value: ratio ? quotient : difference,
      blame,
    });
  }
  const means = meansOf(of.numbers(), groupsOf(rows, by));
  const blame = { at: `${at}/of`, transform: derive.as };
  if (derive.as === 'group-mean') {
    return (row) => ({
      of: [],
      value: () => means[row]?.mean ?? null,
      blame,
      lacking: ingredient(of, row),
      cause: means[row]?.cause ?? null,
    });
  }
  return (row) => {
    const { mean, cause } = means[row] as GroupMean;
    const value = ([x]: readonly Pair[]) => (mean === null ? null : subtract(x as Pair, mean));
    return { of: [ingredient(of, row)], value, blame, cause };
  };
}

function difference([x, z]: readonly Pair[]): Pair {
  return subtract(x as Pair, z as Pair);
}

function quotient([x, z]: readonly Pair[]): Pair {
  return divide(x as Pair, z as Pair);
}

interface GroupMean {
  readonly mean: Pair | null;
  /** A member that is undefined, and with it the mean. */
  readonly cause: Undefined | null;
}

/** The mean of each row's group over the rows that have a value. */
function meansOf(numbers: Numbers, groups: readonly (string | null)[]): GroupMean[] {
  const sums = new Map<string, { total: Pair; count: number; cause: Undefined | null }>();
  for (const [row, group] of groups.entries()) {
    if (group === null || numbers.gaps[row] !== null) continue;
    const sum = sums.get(group) ?? { total: ZERO, count: 0, cause: null };
    sums.set(group, sum);
    sum.cause ??= numbers.undefinedAt.get(row) ?? null;
    const value = pairAt(numbers.values, row);
    if (Number.isNaN(value[0])) continue;
    sum.total = add(sum.total, value);
    sum.count++;
  }
  const none: GroupMean = { mean: null, cause: null };
  const means = new Map<string, GroupMean>();
  for (const [group, { total, count, cause }] of sums)
    means.set(group, { mean: count === 0 ? null : divide(total, fromNumber(count)), cause });
  return groups.map((group) => (group === null ? none : (means.get(group) ?? none)));
}
