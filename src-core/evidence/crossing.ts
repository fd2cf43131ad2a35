import type { Coefficient, Overturn } from '../protocol/result';

/** How far an estimate moved, in errors of the chosen fit; without an error, as a share of the estimate. NaN where it is undefined. */
export function shiftIn(own: Coefficient, to: number): number {
  const moved = Math.abs(to - own.estimate);
  if (own.se !== null && own.se > 0) return moved / own.se;
  return own.estimate === 0 ? moved : moved / Math.abs(own.estimate);
}

/**
 * Whether a change takes a coefficient across zero (the sign turns, or its interval takes zero in where the chosen one did not), else
 * across the smallest difference that matters (the interval or the estimate cleared it, and no longer does). An interval that is undefined says
 * nothing either way.
 */
export function crossing(own: Coefficient, changed: Coefficient, matters: number | null): Overturn['crosses'] {
  const sign = own.estimate < 0 ? -1 : 1;
  const before = awayFrom(own, sign);
  const after = awayFrom(changed, sign);
  if (own.estimate !== 0 && after.estimate <= 0) return 'zero';
  const falls = (mark: number): boolean =>
    before.nearest !== null && after.nearest !== null && before.nearest >= mark && after.nearest < mark;
  // From above 0 to 0 or below.
  if (falls(Number.MIN_VALUE)) return 'zero';
  if (matters === null) return null;
  if (falls(matters)) return 'matters';
  return before.estimate >= matters && after.estimate < matters ? 'matters' : null;
}

/** Estimate and nearer end of the interval, counted from zero on the side of the chosen estimate; null where there is no interval. */
function awayFrom({ estimate, low, high }: Coefficient, sign: 1 | -1): { estimate: number; nearest: number | null } {
  const end = sign > 0 ? low : high;
  return { estimate: sign * estimate, nearest: end === null ? null : sign * end };
}
