const GOLDEN = 0.3819660112501051; // (3 - root 5) / 2

/** Where a function is highest, and how high. */
export interface Highest {
  readonly at: number;
  readonly value: number;
}

/**
 * The highest point of a function with one hill between two points, its ends included.
 *
 * of: may be -Infinity, a NaN counts as that; tolerance: absolute, on the point; about the root of the digits of `of` is the best to be had.
 *
 * Example: maximise1d({ of: (x) => -(x - 1) * (x - 1), low: 0, high: 3 }).at = 1.
 * Source: Brent 1973, chapter 5.
 */
export function maximise1d(asked: {
  readonly of: (x: number) => number;
  readonly low: number;
  readonly high: number;
  readonly tolerance?: number;
}): Highest {
  const of = (x: number): number => {
    const value = asked.of(x);
    return Number.isNaN(value) ? -Infinity : value;
  };
  const tolerance = asked.tolerance ?? 1e-10;
  const ends = [asked.low, asked.high].map((at) => ({ at, value: of(at) }));
  const inner = climb({ of, low: asked.low, high: asked.high, tolerance });
  return ends.reduce((best, end) => (end.value > best.value ? end : best), inner);
}

function climb(asked: { of: (x: number) => number; low: number; high: number; tolerance: number }): Highest {
  const { of, tolerance } = asked;
  let { low, high } = asked;
  const start = low + GOLDEN * (high - low);
  let best: Highest = { at: start, value: of(start) };
  let second = best;
  let third = best;
  let step = 0;
  let stepBefore = 0;
  for (let round = 0; round < 200; round++) {
    const middle = (low + high) / 2;
    const fine = 1.5e-8 * Math.abs(best.at) * 1e-2 + tolerance / 3;
    if (Math.abs(best.at - middle) <= 2 * fine - (high - low) / 2) break;
    const guess = Math.abs(stepBefore) > fine ? vertex(best, second, third) : null;
    const fits =
      guess !== null && Math.abs(guess) < Math.abs(stepBefore) / 2 && best.at + guess > low && best.at + guess < high;
    stepBefore = fits ? step : (best.at < middle ? high : low) - best.at;
    step = fits ? guess : GOLDEN * stepBefore;
    const at = best.at + (Math.abs(step) >= fine ? step : step > 0 ? fine : -fine);
    const tried = { at, value: of(at) };
    if (tried.value >= best.value) {
      if (at >= best.at) low = best.at;
      else high = best.at;
      [third, second, best] = [second, best, tried];
    } else {
      if (at < best.at) low = at;
      else high = at;
      if (tried.value >= second.value || second.at === best.at) [third, second] = [second, tried];
      else if (tried.value >= third.value || third.at === best.at || third.at === second.at) third = tried;
    }
  }
  return best;
}

/** The step from the best of three points to the top of the parabola through them; null where there is none. */
function vertex(best: Highest, second: Highest, third: Highest): number | null {
  const r = (best.at - second.at) * (best.value - third.value);
  const q = (best.at - third.at) * (best.value - second.value);
  const above = (best.at - third.at) * q - (best.at - second.at) * r;
  const below = 2 * (q - r);
  const step = below === 0 ? Number.NaN : -above / below;
  return Math.abs(step) < Infinity ? step : null;
}
