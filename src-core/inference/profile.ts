import { chiSquareQuantile } from '../numbers/distributions';
import { findRoot } from '../numbers/roots';

/** How often a step outward is doubled before a side is given up as open. */
const DOUBLINGS = 80;
/** How often the way to a point where the likelihood cannot be had is halved in search of one where it has fallen far enough. */
const HALVINGS = 8;
/** How finely an end is solved for, as a share of the larger end of the stretch on which it lies. */
const FINE = 1e-13;
/** The first step outward, in standard errors: a little further than the end of a usual interval. */
const STRIDE = 2.2;
/** A likelihood that falls further than this counts as having fallen this far, so that a fall to nothing stays a number. */
const DEEP = 1e3;

export interface Profile {
  /** Log-likelihood with the parameter held at a value and everything else at its best; -Infinity where it falls to nothing, null where it cannot be had. */
  readonly of: (value: number) => number | null;
  readonly estimate: number;
  /** The log-likelihood at the estimate. */
  readonly maximum: number;
  readonly level: number;
  /** Smallest and largest value that the parameter can take; infinite where there is none. */
  readonly floor: number;
  readonly ceiling: number;
  /** A first step outward, in the parameter's unit: of the order of its standard error. */
  readonly step: number;
}

export interface Ends {
  readonly low: number | null;
  readonly high: number | null;
}

/**
 * Interval of one variance parameter by its profile likelihood.
 *
 *     2 (l_max - l(value)) = chi-square quantile of the level on 1, to either side
 *
 * A side ends at the floor or ceiling where the likelihood there is still within reach; it is null where it never falls far enough, or cannot be
 * followed until it does.
 *
 * Example: thirteen vaccine trials on latitude, restricted: tau^2 from 0.005807 to 0.443216.
 * Source: Venzon & Moolgavkar 1988.
 */
export function profileInterval(profile: Profile): Ends {
  const reach = chiSquareQuantile(profile.level, 1);
  const excess: Excess = (value) => {
    const likelihood = profile.of(value);
    return likelihood === null ? null : Math.min(DEEP, 2 * (profile.maximum - likelihood) - reach);
  };
  return { low: endOf(profile, excess, -1), high: endOf(profile, excess, 1) };
}

/** By how much the fall of the likelihood exceeds the reach; null where it cannot be had. */
type Excess = (value: number) => number | null;

function endOf(profile: Profile, excess: Excess, side: -1 | 1): number | null {
  const { estimate, step } = profile;
  const bound = side < 0 ? profile.floor : profile.ceiling;
  if (estimate === bound) return bound;
  const past = (value: number) => (side < 0 ? value <= bound : value >= bound);
  let inside = estimate;
  let stride = STRIDE * step;
  for (let i = 0; i < DOUBLINGS; i++) {
    const outside = past(estimate + side * stride) ? bound : estimate + side * stride;
    if (Math.abs(outside) === Infinity) return null;
    const fall = excess(outside);
    if (fall === null) return beforeTheEdge(excess, inside, outside);
    if (fall > 0) return crossing(excess, inside, outside);
    if (outside === bound) return bound;
    inside = outside;
    stride *= 2;
  }
  return null;
}

/** The crossing between a point within reach and one where the likelihood cannot be had, if it lies where it can. */
function beforeTheEdge(excess: Excess, from: number, edge: number): number | null {
  let [inside, lost] = [from, edge];
  for (let i = 0; i < HALVINGS; i++) {
    const middle = (inside + lost) / 2;
    const fall = excess(middle);
    if (fall === null) lost = middle;
    else if (fall > 0) return crossing(excess, inside, middle);
    else inside = middle;
  }
  return null;
}

function crossing(excess: Excess, inside: number, outside: number): number | null {
  const low = Math.min(inside, outside);
  const high = Math.max(inside, outside);
  const of = (value: number) => excess(value) ?? Number.NaN;
  return findRoot({ of, low, high, tolerance: FINE * Math.max(Math.abs(low), Math.abs(high)) });
}
