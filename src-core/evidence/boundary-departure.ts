import { chiSquareUpperQuantile, normalUpper } from '../numbers/distributions';
import { log } from '../numbers/elementary';
import { median } from '../numbers/order';
import type { NoDeparture } from '../protocol/evidence';
import type { SmallestDeparture } from '../protocol/result';
import type { AtShape, Rule } from './between-likelihood';
import { errorsUnder } from './departure-errors';
import { MOST_SIMULATED, oftenEnough } from './draws';
import type { Frame } from './frame';
import { LEVEL, POWER } from './reading';
import { smallest } from './search';

/** A structure phi a + tau^2 around tau^2 = 0. */
export interface Boundary {
  readonly rule: Rule;
  /** Of the fit; 1 where it is known. */
  readonly phi: number;
  readonly sampling: Float64Array;
  /** a + tau^2 / phi. */
  readonly shapeAt: (tau2: number) => Float64Array;
  readonly likelihoodAt: (shape: Float64Array) => AtShape;
}

const NEAR = 1.01;
const LARGEST_MULTIPLE = 1e6;
/** Where the likelihood of a draw is looked at, as multiples of the departure; steps of about root 2 keep the loss in the ratio small. */
const MULTIPLES = [1, 1.4, 0.7, 2, 0.5, 2.8, 0.35, 0.25, 4, 0.18, 0.125, 5.6, 0.09, 0.0625, 8];

/**
 * The smallest tau^2 that the likelihood ratio would find with power .8, the sampling part as fitted.
 *
 * Up to 200 cells by 2,000 draws, the likelihood maximised over multiples of the departure; beyond by the normal form of the root of
 * the ratio. Bisection to 1 %. Errors: root of diag C diag(phi a + tau^2) C'.
 */
export function boundaryDeparture(
  frame: Frame,
  boundary: Boundary,
  cancelled: () => boolean,
): SmallestDeparture | NoDeparture {
  if (cancelled()) return 'cancelled';
  const { phi, sampling } = boundary;
  const guess = phi * median(sampling);
  const limit = guess * LARGEST_MULTIPLE;
  const near = (low: number, high: number) => high <= NEAR * low;
  const critical = chiSquareUpperQuantile(2 * LEVEL, 1);
  const roughly = smallest({
    found: (tau2) => largeSamplePower({ boundary, critical }, tau2) >= POWER,
    guess,
    limit,
    near,
  });
  const simulated = frame.count <= MOST_SIMULATED;
  const draws = simulated ? frame.draws() : [];
  const found = (tau2: number) => cancelled() || oftenFound({ boundary, critical, draws }, tau2);
  const tau2 = simulated ? smallest({ found, guess: roughly ?? guess, limit, near }) : roughly;
  if (cancelled()) return 'cancelled';
  if (tau2 === null) return 'out-of-reach';
  const variances = boundary.shapeAt(tau2).map((a) => phi * a);
  return { measure: 'tau2', size: tau2, errors: errorsUnder(frame.fitted, variances) };
}

function oftenFound(
  known: { boundary: Boundary; critical: number; draws: readonly Float64Array[] },
  tau2: number,
): boolean {
  const { boundary, critical, draws } = known;
  const roots = boundary.shapeAt(tau2).map((a) => Math.sqrt(a));
  const none = boundary.likelihoodAt(boundary.shapeAt(0));
  const some = MULTIPLES.map((multiple) => boundary.likelihoodAt(boundary.shapeAt(multiple * tau2)));
  const response = new Float64Array(roots.length);
  return oftenEnough(draws, (draw) => {
    for (let g = 0; g < response.length; g++) response[g] = (draw[g] as number) * (roots[g] as number);
    const needed = none.twiceLogLikelihood(response) + critical;
    return some.some((at) => at.twiceLogLikelihood(response) > needed);
  });
}

/**
 * The root of the ratio as normal around the root of its expectation at the true tau^2.
 *
 *     E = sum [ln(d0 / d1) + d1 / d0 - 1],  V = 2 sum (d1 / d0 - 1)^2;  root ~ N(root E, V / 4 E)
 *
 * d1: the variances under the departure; d0: the best without a between part.
 */
function largeSamplePower(known: { boundary: Boundary; critical: number }, tau2: number): number {
  const { sampling, rule, shapeAt } = known.boundary;
  const true_ = shapeAt(tau2);
  const scale = rule.freeScale ? true_.reduce((sum, d, g) => sum + d / (sampling[g] as number), 0) / true_.length : 1;
  let expected = 0;
  let spread = 0;
  for (const [g, d] of true_.entries()) {
    const ratio = d / (scale * (sampling[g] as number));
    expected += ratio - 1 - log(ratio);
    spread += 2 * (ratio - 1) * (ratio - 1);
  }
  if (!(expected > 0)) return 0;
  return normalUpper((Math.sqrt(known.critical) - Math.sqrt(expected)) / Math.sqrt(spread / (4 * expected)));
}
