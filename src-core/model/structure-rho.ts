import { pairAt } from '../numbers/decimals';
import { subtract } from '../numbers/double-double';
import { pow } from '../numbers/elementary';
import { median } from '../numbers/order';
import type { Parameter } from './structure';
import type { Link } from './variance-part';

/** A group's cells in the order of the link, and the steps between neighbours in it (none where order says nothing). */
export interface Chain {
  readonly cells: readonly number[];
  readonly gaps: Float64Array;
}

/**
 * Groups of two or more cells, each in the link's order; groups in the order of their first cell. count: G.
 *
 * Of a matrix: the cells that its entries join, one to the next.
 */
export function chainsOf(link: Link, count: number): Chain[] {
  if (link.kind === 'matrix')
    return joinedBy(link.entries, count).map((cells) => ({ cells, gaps: new Float64Array(0) }));
  const groups = new Map<number, number[]>();
  for (const [g, group] of link.group.entries()) {
    const found = groups.get(group);
    if (found) found.push(g);
    else groups.set(group, [g]);
  }
  return [...groups.values()].filter(({ length }) => length > 1).map((cells) => chainOf(cells, link));
}

/** Cells that can be reached from each other over entries that are not 0, ascending; two or more. */
function joinedBy(entries: Float64Array, count: number): number[][] {
  const seen = new Uint8Array(count);
  const groups: number[][] = [];
  for (let first = 0; first < count; first++) {
    if (seen[first] === 1) continue;
    seen[first] = 1;
    const group = [first];
    for (const g of group)
      for (let h = 0; h < count; h++)
        if (seen[h] === 0 && entries[g * count + h] !== 0) {
          seen[h] = 1;
          group.push(h);
        }
    if (group.length > 1) groups.push(group.sort((a, b) => a - b));
  }
  return groups;
}

function chainOf(cells: readonly number[], link: Exclude<Link, { kind: 'matrix' }>): Chain {
  if (link.kind !== 'serial') return { cells, gaps: new Float64Array(0) };
  const { order } = link;
  const step = (from: number, to: number) => subtract(pairAt(order, to), pairAt(order, from));
  const sorted = [...cells].sort((a, b) => {
    const [high, low] = step(b, a);
    return high + low;
  });
  const gaps = Float64Array.from({ length: cells.length - 1 }, (_, i) => {
    const [high, low] = step(sorted[i] as number, sorted[i + 1] as number);
    return high + low;
  });
  return { cells: sorted, gaps };
}

/** The correlation of neighbours in order at which a serial part is judged. */
const MIDDLE = 0.3;

/**
 * Range of a correlation's parameter, and a middle value; null where a link has none.
 *
 *     exchangeable  (-1 / (largest group - 1), 1)
 *     serial        (-1, 1) where all steps are whole numbers and some are odd, else [0, 1)
 */
export function rhoOf(link: Link | null): Pick<Parameter, 'low' | 'high' | 'inside'> | null {
  if (link === null || link.kind === 'matrix' || link.kind === 'shared') return null;
  const chains = chainsOf(link, link.group.length);
  if (link.kind === 'exchangeable') {
    const largest = chains.reduce((most, { cells }) => Math.max(most, cells.length), 2);
    return { low: -1 / (largest - 1), high: 1, inside: MIDDLE };
  }
  const gaps = chains.flatMap((chain) => [...chain.gaps]);
  const whole = gaps.every(Number.isInteger);
  const odd = gaps.some((gap) => gap % 2 === 1);
  const middle = gaps.length === 0 ? 1 : median(Float64Array.from(gaps));
  return { low: whole && odd ? -1 : 0, high: 1, inside: middle === 1 ? MIDDLE : pow(MIDDLE, 1 / middle) };
}
