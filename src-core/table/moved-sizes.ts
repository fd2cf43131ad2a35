import { fromDoubles } from '../numbers/decimals';
import type { Plan } from '../protocol/plan';
import type { Cells } from './cells';
import { composed } from './declarations';

/** Within how many a plan's sizes are known: what it states, or half the base to which its size column is rounded; null where they are exact. */
export function sizesWithin({ data, roles }: Pick<Plan, 'data' | 'roles'>): number | null {
  const { size } = roles;
  if (size === null) return null;
  const found = Object.entries(data.limits).find(([name]) => composed(name) === composed(size))?.[1];
  const rounded = found && 'rounding' in found ? found.rounding / 2 : null;
  const within = data.sizeWithin;
  if (within !== null && rounded !== null) return Math.max(within, rounded);
  return (within ?? rounded) || null;
}

/**
 * The least and the greatest size of every cell within a distance of the stated one.
 *
 *     n - r to n + r; at least 1 person (or n, where that is less), and no fewer than the persons counted
 */
export function sizeEnds(cells: Cells, within: number): { readonly low: Float64Array; readonly high: Float64Array } {
  const { counts, size, plan } = cells;
  const sizes = size as Float64Array;
  const counted = plan.roles.count !== null && plan.roles.exposure === null ? counts : null;
  const low = sizes.map((n, g) => Math.max(n - within, Math.min(n, 1), counted?.[g] ?? 0));
  return { low, high: sizes.map((n) => n + within) };
}

/** The cells with other sizes, and what is made of them: effective sizes, the share that counts are of them, a term on their column. */
export function withSizes(cells: Cells, sizes: Float64Array): Cells {
  const { size, effectiveSize, counts, outcome, plan } = cells;
  const { roles } = plan;
  const before = size as Float64Array;
  const isShare = roles.count !== null && roles.exposure === null;
  return {
    ...cells,
    size: sizes,
    effectiveSize: effectiveSize?.map((m, g) => (m / (before[g] as number)) * (sizes[g] as number)) ?? null,
    outcome:
      isShare && counts
        ? {
            high: outcome.high.map((y, g) =>
              sizes[g] === before[g] ? y : (counts[g] as number) / (sizes[g] as number),
            ),
            low: outcome.low.map((rest, g) => (sizes[g] === before[g] ? rest : 0)),
          }
        : outcome,
    numbers: (name) => {
      const column = cells.numbers(name);
      return composed(name) === composed(roles.size ?? '') ? { ...column, values: fromDoubles(sizes) } : column;
    },
  };
}
