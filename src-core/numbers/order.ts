/**
 * Positions in rising order of value; equal values keep their order, NaN stands last.
 *
 * Example: sortedIndices([3, 1, 2]) = [1, 2, 0].
 */
export function sortedIndices(values: ArrayLike<number>): number[] {
  const positions = Array.from({ length: values.length }, (_, g) => g);
  return positions.sort((a, b) => compare(values[a] as number, values[b] as number) || a - b);
}

/** The values in rising order, in a new list; NaN stands last. Example: sorted([3, 1, 2]) = [1, 2, 3]. */
export function sorted(values: ArrayLike<number>): Float64Array {
  return Float64Array.from(values).sort(compare);
}

/**
 * The quantile of values that already rise, linear between the order statistics.
 *
 *     x_(h), h = 1 + (n - 1) share
 *
 * values: sorted, at least one; share: from 0 to 1. Anything else is a caller's bug and throws.
 *
 * Example: quantile([1, 2, 3, 4], 0.25) = 1.75.
 * Source: Hyndman & Fan 1996, definition 7.
 */
export function quantile(values: ArrayLike<number>, share: number): number {
  if (values.length === 0 || !(share >= 0 && share <= 1))
    throw new RangeError(`no quantile ${share} of ${values.length}`);
  const place = (values.length - 1) * share;
  const below = Math.floor(place);
  const low = values[below] as number;
  const high = values[Math.min(below + 1, values.length - 1)] as number;
  return place === below ? low : low + (place - below) * (high - low);
}

/** The median of values in any order; an empty list throws. Example: median([3, 1, 2, 10]) = 2.5. */
export function median(values: ArrayLike<number>): number {
  const rising = sorted(values);
  const half = rising.length >> 1;
  if (rising.length === 0) throw new RangeError('an empty list has no median');
  if (rising.length % 2 === 1) return rising[half] as number;
  return (rising[half - 1] as number) / 2 + (rising[half] as number) / 2;
}

/**
 * Ranks from 1, equal values sharing the mean of theirs.
 *
 * Example: ranks([10, 20, 10]) = [1.5, 3, 1.5].
 */
export function ranks(values: ArrayLike<number>): Float64Array {
  const order = sortedIndices(values);
  const found = new Float64Array(values.length);
  for (let from = 0; from < order.length; ) {
    let to = from + 1;
    while (to < order.length && values[order[to] as number] === values[order[from] as number]) to++;
    for (let place = from; place < to; place++) found[order[place] as number] = (from + 1 + to) / 2;
    from = to;
  }
  return found;
}

function compare(a: number, b: number): number {
  if (a < b) return -1;
  if (a > b) return 1;
  return Number(Number.isNaN(a)) - Number(Number.isNaN(b));
}
