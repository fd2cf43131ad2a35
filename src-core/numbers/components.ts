/**
 * Connected components of `count` things under ties between them: for each thing the first (lowest) of its component.
 *
 * ties: lists of indices that belong together; lists that share an index join.
 *
 * Example: `componentsOf(5, [[1, 3], [3, 4]])` is [0, 1, 2, 1, 1].
 * Source: Tarjan & van Leeuwen 1984 (path halving).
 */
export function componentsOf(count: number, ties: Iterable<ArrayLike<number>>): Int32Array {
  const above = Int32Array.from({ length: count }, (_, i) => i);
  const firstOf = (i: number): number => {
    let at = i;
    while (above[at] !== at) {
      above[at] = above[above[at] as number] as number;
      at = above[at] as number;
    }
    return at;
  };
  for (const tie of ties)
    for (let i = 1; i < tie.length; i++) {
      const [one, other] = [firstOf(tie[0] as number), firstOf(tie[i] as number)];
      above[Math.max(one, other)] = Math.min(one, other);
    }
  return above.map((_, i) => firstOf(i));
}
