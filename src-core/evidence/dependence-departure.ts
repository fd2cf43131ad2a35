import { largestOf, powerOfTwoBelow } from '../algebra/powers-of-two';
import { normalUpperQuantile } from '../numbers/distributions';
import { plainDot, plainSquares } from '../numbers/sums';
import type { NoDeparture } from '../protocol/evidence';
import type { SmallestDeparture } from '../protocol/result';
import { largestCorrelation } from './correlated-draws';
import { errorsFrom } from './departure-errors';
import { overCells, overGroups } from './dependence-draws';
import { largeSamplePower } from './dependence-power';
import { MOST_SIMULATED, oftenEnough } from './draws';
import type { Frame } from './frame';
import type { Moments } from './moran';
import { type Pairs, partnerSums } from './pairs';
import { LEVEL, POWER } from './reading';
import { smallest } from './search';

interface Known {
  readonly frame: Frame;
  readonly pairs: Pairs;
  readonly moments: Moments & { readonly variance: number };
  readonly cancelled: () => boolean;
}

/** No correlation above this is tried. */
const LARGEST = 0.999;
const NEAR = 0.01;
/** Up to this many groups their sums alone are drawn. */
const FEW_GROUPS = 40;

/**
 * The smallest common correlation of paired cells that the test would find with power .8.
 *
 *     Omega' = D^(1/2) (I + rho B) D^(1/2), D the fitted variances;  errors: root of diag C Omega' C'
 *
 * By 2,000 draws: of the group sums alone where there are at most 40 groups, else of the cells, up to 200 of them; beyond, by a normal
 * form of I. Bisection to 1 %.
 */
export function dependenceDeparture(known: Known): SmallestDeparture | NoDeparture {
  const { frame, pairs } = known;
  if (known.cancelled()) return 'cancelled';
  const roughly = smallest({
    found: (rho) => largeSamplePower(known, rho) >= POWER,
    guess: 0.1,
    limit: limitOf(known),
    near: nearEnough,
  });
  const rho = frame.count <= MOST_SIMULATED || hasFewGroups(pairs) ? bySimulation(known, roughly ?? 0.3) : roughly;
  if (known.cancelled()) return 'cancelled';
  if (rho === null) return 'out-of-reach';
  const roots = frame.fitted.variances.map((v) => Math.sqrt(v));
  const errors = errorsFrom(frame.fitted, (pull) => {
    const spread = pull.map((c, g) => c * (roots[g] as number));
    const unit = powerOfTwoBelow(largestOf(spread));
    const scaled = spread.map((c) => c / unit);
    return unit * Math.sqrt(Math.max(0, plainSquares(scaled) + rho * plainDot(scaled, partnerSums(pairs, scaled))));
  });
  return { measure: 'common-correlation', size: rho, errors };
}

function hasFewGroups({ groups }: Pairs): boolean {
  return groups !== null && groups.length <= FEW_GROUPS;
}

function nearEnough(low: number, high: number): boolean {
  return high - low <= NEAR * high;
}

/** I + rho B stays positive definite below it. */
function limitOf({ frame, pairs }: Known): number {
  const { partners } = pairs;
  if (!partners) return LARGEST;
  if (frame.count <= MOST_SIMULATED) return Math.min(LARGEST, largestCorrelation(partners));
  return 1 / Math.max(2, ...partners.map((cells) => cells.length));
}

function bySimulation(known: Known, guess: number): number | null {
  const { moments, cancelled } = known;
  const reach = normalUpperQuantile(LEVEL / 2) * Math.sqrt(moments.variance);
  const statisticsAt = hasFewGroups(known.pairs) ? overGroups(known) : overCells(known);
  return smallest({
    found: (rho) => {
      if (cancelled()) return true;
      const { draws, statistic } = statisticsAt(rho);
      return oftenEnough(draws, (draw) => Math.abs(statistic(draw) - moments.expectation) > reach);
    },
    guess,
    limit: limitOf(known),
    near: nearEnough,
  });
}
