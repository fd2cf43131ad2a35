import type { Covariance } from '../algebra/covariance';
import { factorOf } from '../algebra/factored';
import { leveragesOf, projectOut } from '../algebra/orthonormal';
import { chiSquareUpperQuantile } from '../numbers/distributions';
import { plainSquares } from '../numbers/sums';
import type { NoDeparture } from '../protocol/evidence';
import type { SmallestDeparture } from '../protocol/result';
import { errorsThrough } from './departure-errors';
import { MOST_SIMULATED, oftenEnough } from './draws';
import type { Frame } from './frame';
import { upperOfSum } from './quadratic-form';
import { LEVEL, POWER } from './reading';
import { smallest } from './search';

const NEAR = 1.01;
const LARGEST_MULTIPLE = 1e6;

/** The fit in which sampling is all there is: whitened by the given errors. */
export interface Common {
  readonly basis: readonly Float64Array[];
  readonly errors: Float64Array;
  /** Omega with a tau^2 beside sampling. */
  readonly omegaWith: (tau2: number) => Covariance;
  /** True where Omega has blocks: by a matrix, or by a between part that correlates cells. */
  readonly linked: boolean;
  readonly q: number;
  /** tr M, M = W - W X (X'WX)^-1 X'W. */
  readonly traceM: number;
}

/**
 * The smallest tau^2 at which Q rejects with power .8: by draws up to 200 cells, beyond by a scaled chi-square of Q's moments, which correlated cells
 * do not have here.
 */
export function heterogeneityDeparture(known: {
  readonly frame: Frame;
  readonly common: Common;
  readonly guess: number;
  readonly cancelled: () => boolean;
}): SmallestDeparture | NoDeparture {
  const { frame, common, guess, cancelled } = known;
  if (cancelled()) return 'cancelled';
  const critical = chiSquareUpperQuantile(LEVEL, frame.freedom);
  const limit = guess * LARGEST_MULTIPLE;
  const near = (low: number, high: number) => high <= NEAR * low;
  const ratiosAt = (tau2: number) => common.errors.map((s) => 1 + tau2 / (s * s));
  const roughly = smallest({
    found: (tau2) => upperOfSum({ ...momentsOfQ(common, ratiosAt(tau2)), threshold: critical }) >= POWER,
    guess,
    limit,
    near,
  });
  const simulated = frame.count <= MOST_SIMULATED;
  if (!simulated && common.linked) return 'too-many-cells';
  const draws = simulated ? frame.draws() : [];
  const found = (tau2: number) => cancelled() || oftenFound({ draws, common, critical }, tau2);
  const tau2 = simulated ? smallest({ found, guess: roughly ?? guess, limit, near }) : roughly;
  if (cancelled()) return 'cancelled';
  if (tau2 === null) return 'out-of-reach';
  return { measure: 'tau2', size: tau2, errors: errorsThrough(frame.fitted, common.omegaWith(tau2)) };
}

function oftenFound(
  { draws, common, critical }: { draws: readonly Float64Array[]; common: Common; critical: number },
  tau2: number,
): boolean {
  const residuals = new Float64Array(common.errors.length);
  const { whitened } = factorOf(common.omegaWith(0));
  const { unwhiten } = factorOf(common.omegaWith(tau2));
  return oftenEnough(
    draws,
    (draw) => plainSquares(projectOut(common.basis, whitened(unwhiten(draw)), residuals)) > critical,
  );
}

/** Mean tr(MD) and variance 2 tr(MDMD) of Q under whitened variances d, M = I - QQ'. */
function momentsOfQ({ basis }: Common, ratios: Float64Array): { expected: number; spread: number } {
  const leverages = leveragesOf(basis, ratios.length);
  let expected = 0;
  let square = 0;
  for (const [g, d] of ratios.entries()) {
    const h = leverages[g] as number;
    expected += d * (1 - h);
    square += d * d * (1 - 2 * h);
  }
  for (const a of basis) {
    for (const b of basis) {
      let inside = 0;
      for (let g = 0; g < ratios.length; g++) inside += (a[g] as number) * (ratios[g] as number) * (b[g] as number);
      square += inside * inside;
    }
  }
  // tr(MDMD) >= tr(MD)^2 / (G - k): less is rounding.
  const least = (expected * expected) / (ratios.length - basis.length);
  return { expected, spread: 2 * Math.max(square, least) };
}
