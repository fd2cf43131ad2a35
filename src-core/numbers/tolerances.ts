/** Below this share of its own length, what is left of a column after the earlier ones counts as nothing. */
export function rankTolerance(cells: number, terms: number): number {
  return Math.max(cells, 10 * terms) * Number.EPSILON;
}

/** A column takes part in a dependence when its share of it is above this. */
export const SHARE_OF_DEPENDENCE = 1e-8;

/** A cell counts as determining a coefficient alone when its leverage comes this close to 1: what is left is rounding. */
export const LEVERAGE_OF_ONE = 1e-10;

/** Half a unit in the last place of 1, 2^-53: a term below this share of its series is lost in rounding. */
export const HALF_LAST_PLACE = 1.1102230246251565e-16;

/** No series or continued fraction here needs more steps: reached only by freedom above 1e14. */
export const MOST_STEPS = 1e8;

/** From this freedom on, the limiting distribution itself: the tails differ by less than 1e-12 of themselves even where they are 1e-300. */
export const FREEDOM_WITHOUT_END = 1e18;

/** A tail of Student's or Fisher's distribution beyond this point is a power of the point to every digit. */
export const POWER_TAIL_FROM = 1e120;

/** What is left of a diagonal entry in a Cholesky factor counts as nothing below this share of it. */
export const NOT_DEFINITE = 1e-14;

/** The same in double-double: entries are known to a double's digits, whatever is computed of them. */
export const NOT_DEFINITE_WIDE = 2e-15;
