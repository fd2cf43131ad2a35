import { throughCovariance } from '../algebra/covariance';
import type { Fitted } from '../estimate/fitted';
import { numberOrNull } from '../inference/reference';
import { omegaAt } from '../model/structure';
import { noncentralTUpper, normalUpperQuantile, tUpperQuantile } from '../numbers/distributions';
import { pow } from '../numbers/elementary';
import { findRoot } from '../numbers/roots';
import type { Plan } from '../protocol/plan';
import type { Coefficient, Need, Reference, WhatItTakes } from '../protocol/result';
import { POWER } from './reading';

/** More cells than this are no advice. */
const MOST_CELLS = 1e12;
/** More persons per cell than so many times the present ones are none either. */
const MOST_PERSONS = 1e12;

/**
 * What more cells, or more persons in each, would buy: an interval half as wide, and the smallest difference that matters found with power .8.
 *
 *     V_j = B_j + S_j,  S_j = c' S c the sampling part's share of it, B_j what the other parts leave however many persons a cell has
 *     G' cells like these        V_j G / G',  freedom grown with them
 *     f times the persons        V_j [1 - s (1 - f^-delta)],  s = S_j / V_j;  never below V_j (1 - s)
 *     half as wide               cells: reach(G') root(G / G') <= reach(G) / 2;  persons: f^-delta = 1 - 3 / 4 s, null where s <= 3 / 4
 *     matters d                  P(|T'| > reach) >= .8, T' noncentral t with d over the error; persons: the error that this asks for in place of 1/2
 *
 * Weights held, so that re-weighted cells can do a little better. delta: 1 where sampling variances fall as 1 / size, the exponent of size-power; null
 * persons where they do not follow size. Coefficients: with errors and references under the plan's inference. Null figures where an error is
 * undefined or 0.
 *
 * Source: METHODS of the program, 3; the noncentral t of Johnson, Kotz & Balakrishnan 1995, chapter 31.
 */
export function whatItTakesOf(of: {
  readonly fitted: Fitted;
  readonly plan: Plan;
  readonly coefficients: readonly Coefficient[];
}): WhatItTakes[] {
  const { fitted, plan, coefficients } = of;
  const { level } = plan.inference;
  const shares = samplingShares(fitted, plan);
  const delta = fallOf(fitted, plan);
  return coefficients.map(({ term, se, reference }, j): WhatItTakes => {
    const share = shares[j] ?? null;
    const nothing = { term, samplingShare: share, floor: null, halfWidth: null, matters: null };
    if (se === null || !(se > 0) || reference === null) return nothing;
    const now: Now = { se, share, delta, reference, level, cells: fitted.response.high.length };
    const difference = plan.matters[term] ?? null;
    return {
      term,
      samplingShare: share,
      floor: share === null ? null : se * Math.sqrt(Math.max(0, 1 - share)),
      halfWidth: { se: se / 2, cells: cellsForHalf(now), persons: personsFor(now, 0.5) },
      matters: difference === null || !(difference > 0) ? null : { difference, ...needFor(now, difference) },
    };
  });
}

interface Now {
  readonly se: number;
  readonly share: number | null;
  readonly delta: number | null;
  readonly reference: Reference;
  readonly level: number;
  readonly cells: number;
}

/** S_j / V_j; null where the sampling part cannot be taken off, or V_j is undefined. */
function samplingShares(fitted: Fitted, plan: Plan): (number | null)[] {
  const { structure, theta, pulls, omega, errors } = fitted;
  const { parts } = plan.variance;
  if (!errors.every((error) => error > 0 && error < Infinity)) return pulls.map(() => null);
  if (parts.length === 1) return pulls.map(() => 1);
  const sampling = parts.find(({ kind }) => kind !== 'between' && kind !== 'shared');
  const levels = structure.parameters.flatMap(({ role }, i) => (role === 'scale' || role === 'class' ? [i] : []));
  if (levels.length > 0) {
    const without = theta.slice();
    for (const i of levels) without[i] = 0;
    const rest = omegaAt(structure, without);
    return pulls.map((pull) =>
      shareOf(throughCovariance([pull], rest)[0]?.[0] as number, throughCovariance([pull], omega)[0]?.[0] as number),
    );
  }
  const tied = !sampling || sampling.kind === 'matrix' || ('correlation' in sampling && sampling.correlation !== null);
  if (tied || sampling.kind === 'log-linear') return pulls.map(() => null);
  const variances = structure.samplingAt(theta);
  return pulls.map((pull) => {
    const whole = throughCovariance([pull], omega)[0]?.[0] as number;
    const own = pull.reduce((sum, c, g) => sum + c * c * (variances[g] as number), 0);
    return shareOf(whole - own, whole);
  });
}

function shareOf(rest: number, whole: number): number | null {
  return numberOrNull(Math.min(1, Math.max(0, 1 - rest / whole)));
}

/** The power to which sampling variances fall as cells grow; null where they do not follow size. */
function fallOf({ structure, theta }: Fitted, { variance }: Plan): number | null {
  for (const part of variance.parts) {
    switch (part.kind) {
      case 'per-size':
      case 'given':
      case 'matrix':
      case 'binomial':
      case 'counts':
        return 1;
      case 'per-class':
        return part.perSize ? 1 : null;
      case 'size-power': {
        const delta = part.exponent === 'estimate' ? (theta[structure.exponentAt] as number) : part.exponent;
        return delta > 0 ? delta : null;
      }
    }
  }
  return null;
}

/** How many times the persons per cell make the error this share of what it is; null where no number does. */
function personsFor({ share, delta }: Now, ofError: number): number | null {
  if (share === null || delta === null || !(share > 0)) return null;
  const left = 1 - (1 - ofError * ofError) / share;
  if (!(left > 0)) return null;
  const times = pow(left, -1 / delta);
  return times <= MOST_PERSONS ? times : null;
}

/** Freedom counts cells: it grows with them, cell by cell where it is G - k, else in proportion. */
function referenceAt({ reference, cells }: Now, more: number): number | null {
  const { freedom } = reference;
  if (freedom === null) return null;
  return Number.isInteger(freedom) && freedom < cells ? freedom + (more - cells) : (freedom * more) / cells;
}

function reachAt(now: Now, more: number): number {
  const freedom = referenceAt(now, more);
  const tail = (1 - now.level) / 2;
  return freedom === null ? normalUpperQuantile(tail) : tUpperQuantile(tail, freedom);
}

function cellsForHalf(now: Now): number | null {
  const wanted = reachAt(now, now.cells) / 2;
  return fewest(now, (more) => reachAt(now, more) * Math.sqrt(now.cells / more) <= wanted);
}

/** Cells and persons that find a difference with power .8, and the error that does at the present freedom. */
function needFor(now: Now, difference: number): Need {
  const power = (more: number, error: number): number => {
    const freedom = referenceAt(now, more) ?? Infinity;
    const reach = reachAt(now, more);
    const away = difference / error;
    return noncentralTUpper(reach, freedom, away) + noncentralTUpper(reach, freedom, -away);
  };
  const cells = fewest(now, (more) => power(more, now.se * Math.sqrt(now.cells / more)) >= POWER);
  const away = findRoot({
    of: (x) => power(now.cells, difference / x) - POWER,
    low: 0.01,
    high: 1000,
    tolerance: 1e-10,
  });
  if (away === null) return { se: null, cells, persons: null };
  const se = difference / away;
  return { se, cells, persons: personsFor(now, se / now.se) };
}

/** The fewest cells at which something holds that more cells only help; from those that leave one degree of freedom. */
function fewest(now: Now, holds: (cells: number) => boolean): number | null {
  const { freedom } = now.reference;
  const counted = freedom !== null && Number.isInteger(freedom) && freedom < now.cells;
  let low = counted ? now.cells - freedom + 1 : 1;
  if (holds(low)) return low;
  let high = Math.max(low + 1, now.cells);
  while (!holds(high)) {
    if (high >= MOST_CELLS) return null;
    low = high;
    high *= 2;
  }
  while (high - low > 1) {
    const middle = Math.floor((low + high) / 2);
    if (holds(middle)) high = middle;
    else low = middle;
  }
  return high;
}
