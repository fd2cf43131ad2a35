/** Nothing is looked for beyond this many tries. */
const MOST_TRIES = 80;

/**
 * The smallest size at which `found` holds, to the nearness asked for: bracketed outwards from a guess, then halved.
 *
 * found: false below the answer, true above it (where it wavers, one of the crossings is taken); guess > 0; limit: sizes are looked for
 * below it only; near: true where the bracket is close enough. Returns the bracket's upper end, at which `found` holds.
 * Null: not found below the limit.
 *
 * Example: `smallest({ found: (x) => x >= 2, guess: 1, limit: 10, near: (a, b) => b - a < 0.01 })` is 2 to 2.01.
 */
export function smallest(search: {
  readonly found: (size: number) => boolean;
  readonly guess: number;
  readonly limit: number;
  readonly near: (low: number, high: number) => boolean;
}): number | null {
  const { found, limit, near } = search;
  const guess = Math.min(search.guess, limit);
  if (!(guess > 0 && guess < Infinity)) throw new RangeError(`${guess} is no size to begin with`);
  let step = 1.06;
  let low = guess;
  let high = guess;
  if (found(guess)) {
    for (let tries = 0; found((low = low / step)) && tries < MOST_TRIES; tries++) {
      high = low;
      step *= step;
    }
  } else {
    do {
      if (high >= limit) return null;
      low = high;
      high = Math.min(limit, high * step);
      step *= step;
    } while (!found(high));
  }
  for (let tries = 0; !near(low, high) && tries < MOST_TRIES; tries++) {
    const middle = (low + high) / 2;
    if (found(middle)) high = middle;
    else low = middle;
  }
  return high;
}
