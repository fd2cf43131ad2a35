import { solve } from '../algebra/dense';
import { freeParameters } from '../model/structure';
import type { Place } from './ascent';
import { type Climb, moved, observedInformation, scoreInSteps, shareOfSpread } from './ascent-step';
import { likelihoodAt } from './likelihood';

/** Newton's steps at most: each leaves about the eighth power of ten of the error before it. */
const STEPS = 4;
/** A step of no more than this, in logarithms of variances and the like, is rounding. */
const ROUNDING = 1e-15;

/**
 * The last digits of a maximum: Newton's steps on the analytic score, kept while the score comes nearer to 0.
 *
 * The likelihood itself is flat there to the square root of a double's digits; its score is not.
 */
export function polished(model: Climb, place: Place): Place {
  const { structure } = model;
  if (freeParameters(structure).length === 0) return place;
  const observed = observedInformation(model, place.theta);
  if (!observed) return place;
  let best = place;
  let at = likelihoodAt({ ...model, theta: best.theta });
  for (let i = 0; i < STEPS && at; i++) {
    const step = solve(observed, scoreInSteps(structure, best.theta, at));
    if (!step?.every(Number.isFinite)) return best;
    const theta = moved(structure, best.theta, Float64Array.from(step));
    const there = likelihoodAt({ ...model, theta });
    if (!there || !(shareOfSpread(there) < shareOfSpread(at))) return best;
    best = { theta, logLikelihood: there.logLikelihood };
    at = there;
    if (step.every((d) => Math.abs(d) <= ROUNDING)) return best;
  }
  return best;
}
