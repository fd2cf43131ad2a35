/** A stretch of the line on which a function changes sign. */
export interface Bracket {
  readonly low: number;
  readonly high: number;
}

/**
 * The point at which a continuous function is 0, between two points at which it has different signs.
 *
 * of: finite values; low, high: the ends, in either order; tolerance: absolute, on the point (never finer than the doubles allow).
 * Null where the signs at the ends do not differ, or a value is not a number.
 *
 * Example: findRoot({ of: (x) => x * x - 2, low: 0, high: 2, tolerance: 1e-15 }) = 1.414213562373095 to 1e-15.
 * Source: Brent 1973, chapter 4.
 */
export function findRoot(asked: {
  readonly of: (x: number) => number;
  readonly low: number;
  readonly high: number;
  readonly tolerance: number;
}): number | null {
  const { of, tolerance } = asked;
  let before = { x: asked.low, y: of(asked.low) };
  let best = { x: asked.high, y: of(asked.high) };
  if (before.y === 0) return before.x;
  if (best.y === 0) return best.x;
  if (!(before.y > 0 ? best.y < 0 : before.y < 0 && best.y > 0)) return null;
  let opposite = before;
  let step = best.x - before.x;
  let stepBefore = step;
  for (let round = 0; round < 500; round++) {
    if (best.y > 0 === opposite.y > 0) {
      opposite = before;
      step = stepBefore = best.x - before.x;
    }
    if (Math.abs(opposite.y) < Math.abs(best.y)) [before, best, opposite] = [best, opposite, best];
    const fine = 2 * Number.EPSILON * Math.abs(best.x) + tolerance / 2;
    const half = (opposite.x - best.x) / 2;
    if (Math.abs(half) <= fine || best.y === 0) return best.x;
    const guess =
      Math.abs(stepBefore) >= fine && Math.abs(before.y) > Math.abs(best.y)
        ? interpolated(before, best, opposite)
        : null;
    if (
      guess !== null &&
      2 * Math.abs(guess) < Math.min(3 * Math.abs(half) - fine, Math.abs(stepBefore)) &&
      guess * half > 0
    ) {
      stepBefore = step;
      step = guess;
    } else step = stepBefore = half;
    before = best;
    const x = best.x + (Math.abs(step) > fine ? step : half > 0 ? fine : -fine);
    best = { x, y: of(x) };
    if (Number.isNaN(best.y)) return null;
  }
  return best.x;
}

interface Point {
  readonly x: number;
  readonly y: number;
}

/** The step from the best point that a line, or a parabola through three points lying on its side, proposes. */
function interpolated(before: Point, best: Point, opposite: Point): number {
  const half = (opposite.x - best.x) / 2;
  const ratio = best.y / before.y;
  if (before.x === opposite.x) return (2 * half * ratio) / (ratio - 1);
  const q = before.y / opposite.y;
  const r = best.y / opposite.y;
  const above = ratio * (2 * half * q * (q - r) - (best.x - before.x) * (r - 1));
  return -above / ((q - 1) * (r - 1) * (ratio - 1));
}

/**
 * Widens a stretch upwards until a function changes sign on it.
 *
 * of: the function; from: the lower end; first: the first step, above 0, doubled each time; limit: no point beyond it is tried.
 * Null where the sign never changes up to the limit.
 *
 * Example: bracketUp({ of: (x) => x - 10, from: 0, first: 1, limit: 100 }) = { low: 7, high: 15 }.
 */
export function bracketUp(asked: {
  readonly of: (x: number) => number;
  readonly from: number;
  readonly first: number;
  readonly limit: number;
}): Bracket | null {
  const { of, from, limit } = asked;
  const start = of(from);
  if (start === 0) return { low: from, high: from };
  let low = from;
  for (let step = asked.first; low < limit; step *= 2) {
    const high = Math.min(limit, low + step);
    const value = of(high);
    if (start > 0 ? value <= 0 : value >= 0) return { low, high };
    low = high;
  }
  return null;
}

export { type Highest, maximise1d } from './maximum';
