import { freeParameters, isVariance, type Parameter } from '../model/structure';
import { ascentStep, type Climb, moved, observedInformation, scoreInSteps, shareOfSpread } from './ascent-step';
import { heightAt, likelihoodAt } from './likelihood';
import type { Likelihood } from './likelihood-place';
import { grown, growsTogether, leftRange, vanishing } from './search-space';

/** Rounds at most, and how many of them keep to the expected information whatever comes of it. */
const ROUNDS = 200;
const SCORING_ROUNDS = 8;
const HALVINGS = 40;
/** A round that leaves more than this of the score is slow: then the observed information is taken, and kept while it serves. */
const SLOW = 0.2;
/** A score below its own standard deviation is near enough for that. */
const NEAR = 1;
/** The rule of arrival: relative change of every parameter, and the score in units of its own standard deviation. */
const CHANGE = 1e-10;
const SCORE = 1e-8;
/** Where the height alone is asked for, such a score is near enough: the height is then right to half its square. */
const SCORE_FOR_HEIGHT = 1e-6;
/** How far a likelihood may seem to fall by rounding alone. */
const FLAT = 1e-13;
/** Where the score is below this share of its spread a step gains less than rounding may hide, if weights are uneven: the score leads on alone. */
const BY_SCORE = 1e-5;
const HIDDEN = 1e3;
/** So many rounds in a row that move nothing, or near the top bring the score no lower, and the climb is lost in rounding. */
const STUCK = 6;

/** A point and the likelihood there. */
export interface Place {
  readonly theta: Float64Array;
  readonly logLikelihood: number;
}

export type Arrival =
  | { readonly ended: 'maximum'; readonly theta: Float64Array; readonly logLikelihood: number; readonly rounds: number }
  | { readonly ended: 'boundary'; readonly parameter: number; readonly rounds: number }
  | { readonly ended: 'lost'; readonly theta: Float64Array; readonly logLikelihood: number; readonly rounds: number };

/**
 * Climbs a likelihood from one start by Fisher scoring on the logarithms of variances, delta, gammas and atanh of correlations, halving steps
 * that fall; where scoring is slow, by Newton's steps on differences of the analytic score. Where all variances can grow together they do, after
 * every step, to their best common factor.
 *
 * Ends at a maximum, on the way to a boundary (a part's share of the variance vanishes) or lost after the rounds allowed.
 *
 * Source: Harville 1977 for scoring under the restricted likelihood.
 */
export function climb(model: Climb, start: Float64Array): Arrival {
  const first = bestScale(model, start);
  if (!first) return { ended: 'lost', theta: start, logLikelihood: -Infinity, rounds: 0 };
  let { theta, logLikelihood } = first;
  let at = likelihoodAt({ ...model, theta });
  const free = freeParameters(model.structure);
  let observed: Observed = null;
  let before = Infinity;
  let lowest = Infinity;
  let stuck = 0;
  for (let rounds = 1; rounds <= ROUNDS; rounds++) {
    const gone = vanishing(model.structure, theta);
    if (gone >= 0) return { ended: 'boundary', parameter: gone, rounds };
    if (!at || leftRange(model.structure, theta) >= 0 || model.hooks?.cancelled())
      return { ended: 'lost', theta, logLikelihood, rounds };
    const rise = shareOfSpread(at);
    if (model.heightOnly && rise <= SCORE_FOR_HEIGHT) return { ended: 'maximum', theta, logLikelihood, rounds };
    observed = informationFor({ model, theta, at, rounds, rise, before, observed });
    before = rise;
    const step = ascentStep({ model, theta, at, observed });
    const next: Place | null = step && halved({ model, theta, logLikelihood, step, rise });
    const settled = rise <= SCORE;
    if (!next)
      return settled
        ? { ended: 'maximum', theta, logLikelihood, rounds }
        : { ended: 'lost', theta, logLikelihood, rounds };
    const still = free.every((i) => {
      const parameter = model.structure.parameters[i] as Parameter;
      return changed(parameter, theta[i] as number, next.theta[i] as number) < CHANGE;
    });
    ({ theta, logLikelihood } = next);
    if (still && settled) return { ended: 'maximum', theta, logLikelihood, rounds };
    stuck = still || (rise <= BY_SCORE && rise >= lowest) ? stuck + 1 : 0;
    if (stuck >= STUCK) return { ended: settled ? 'maximum' : 'lost', theta, logLikelihood, rounds };
    lowest = Math.min(lowest, rise);
    at = likelihoodAt({ ...model, theta });
  }
  return { ended: 'lost', theta, logLikelihood, rounds: ROUNDS };
}

type Observed = readonly Float64Array[] | null;

/** The observed information where scoring is slow: taken anew where the one at hand is slow itself; null far from a maximum. */
function informationFor(of: {
  readonly model: Climb;
  readonly theta: Float64Array;
  readonly at: Likelihood;
  readonly rounds: number;
  readonly rise: number;
  readonly before: number;
  readonly observed: Observed;
}): Observed {
  if (of.rise > NEAR && of.rounds <= SCORING_ROUNDS) return null;
  if (of.rise <= SLOW * of.before) return of.observed;
  const { model, theta, at } = of;
  return observedInformation(model, theta, scoreInSteps(model.structure, theta, at));
}

/** A point with all variances multiplied by their best common factor, where there is one to choose; null where it cannot be computed. */
export function bestScale(model: Climb, theta: Float64Array): Place | null {
  const at = heightAt({ ...model, theta });
  if (!at) return null;
  if (!growsTogether(model.structure) || !(at.scaleRatio > 0)) return { theta, logLikelihood: at.logLikelihood };
  return { theta: grown(model.structure, theta, at.scaleRatio), logLikelihood: at.rescaled };
}

function halved(model: {
  readonly model: Climb;
  readonly theta: Float64Array;
  readonly logLikelihood: number;
  readonly step: Float64Array;
  readonly rise: number;
}): Place | null {
  const { theta, logLikelihood } = model;
  const hidden = model.rise <= BY_SCORE ? HIDDEN : 1;
  const slack = hidden * FLAT * (Math.abs(logLikelihood) + model.model.rows.cells);
  let step = model.step;
  for (let halving = 0; halving <= HALVINGS; halving++) {
    const there = bestScale(model.model, moved(model.model.structure, theta, step));
    if (there && there.logLikelihood >= logLikelihood - slack) return there;
    step = step.map((d) => d / 2);
  }
  return null;
}

/** By how much a parameter changed: relative to its size; of a correlation or a gamma, which may be 0, to 1 at the least. */
function changed({ role }: Parameter, before: number, after: number): number {
  const least = isVariance({ role }) ? 0 : 1;
  const size = Math.max(Math.abs(before), Math.abs(after), least);
  return size === 0 ? 0 : Math.abs(after - before) / size;
}
