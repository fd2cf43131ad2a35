/**
 * Adjusts the p values of one family, so that the chance of any false rejection stays below the level.
 *
 *     in rising order: the largest so far of (m - i + 1) p_i, at most 1
 *
 * p: in any order; the answer keeps it.
 *
 * Example: [0.01, 0.04, 0.03] gives [0.03, 0.06, 0.06].
 * Source: Holm 1979.
 */
export function holmAdjusted(p: readonly number[]): number[] {
  const order = [...p.keys()].sort((a, b) => (p[a] as number) - (p[b] as number) || a - b);
  const adjusted = new Array<number>(p.length).fill(1);
  let largest = 0;
  for (const [rank, i] of order.entries()) {
    largest = Math.max(largest, Math.min(1, (p.length - rank) * (p[i] as number)));
    adjusted[i] = largest;
  }
  return adjusted;
}
