import { freeParameters, type Structure } from '../model/structure';
import { ascentStep, type Climb, moved, shareOfSpread } from './ascent-step';
import { type Height, heightAt, likelihoodAt } from './likelihood';

/** Rounds at most, and how many of them keep to the expected information before the observed one is tried. */
const ROUNDS = 200;
const SCORING_ROUNDS = 8;
const HALVINGS = 40;
/** The rule of arrival: relative change of every parameter, and the score in units of its own standard deviation. */
const CHANGE = 1e-10;
const SCORE = 1e-8;
/** Where the height alone is asked for, such a score is near enough: the height is then right to half its square. */
const SCORE_FOR_HEIGHT = 1e-6;
/** A part whose share of the variance falls below this is on its way to 0. */
const VANISHED = 1e-13;
/** The exponent is sought between minus and plus this: beyond, likelihoods of few cells grow without bound by fitting k cells exactly. */
export const WIDEST_EXPONENT = 8;
/** How far a likelihood may seem to fall by rounding alone. */
const FLAT = 1e-13;

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
 * Climbs a likelihood from one start by Fisher scoring on ln phi, ln tau^2 and delta, halving steps that fall; where scoring is slow, by Newton's
 * steps on differences of the analytic score. Where all variances can grow together they do, after every step, to their best common factor.
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
  for (let rounds = 1; rounds <= ROUNDS; rounds++) {
    const gone = vanishing(model.structure, theta);
    if (gone >= 0) return { ended: 'boundary', parameter: gone, rounds };
    if (!at || Math.abs(theta[model.structure.exponentAt] ?? 0) > WIDEST_EXPONENT)
      return { ended: 'lost', theta, logLikelihood, rounds };
    const rise = shareOfSpread(at);
    if (model.heightOnly && rise <= SCORE_FOR_HEIGHT) return { ended: 'maximum', theta, logLikelihood, rounds };
    const step = ascentStep({ model, theta, at, newton: rounds > SCORING_ROUNDS });
    const next: Place | null = step && halved({ model, theta, logLikelihood, step });
    const settled = rise <= SCORE;
    if (!next)
      return settled
        ? { ended: 'maximum', theta, logLikelihood, rounds }
        : { ended: 'lost', theta, logLikelihood, rounds };
    const still = free.every((i) => changed(theta[i] as number, next.theta[i] as number) < CHANGE);
    ({ theta, logLikelihood } = next);
    if (still && settled) return { ended: 'maximum', theta, logLikelihood, rounds };
    at = likelihoodAt({ ...model, theta });
  }
  return { ended: 'lost', theta, logLikelihood, rounds: ROUNDS };
}

/** True where every part's variance is free to grow, so that one factor over all of Omega is free as well. */
export function scalesTogether({ parameters, scaleAt, betweenAt }: Structure): boolean {
  const grows = (at: number) => parameters[at]?.fixed === null || parameters[at]?.fixed === 0;
  const any = [scaleAt, betweenAt].some((at) => parameters[at]?.fixed === null);
  return any && scaleAt >= 0 && grows(scaleAt) && (betweenAt < 0 || grows(betweenAt));
}

/** A point with all variances multiplied by their best common factor, where there is one to choose; null where it cannot be computed. */
export function bestScale(model: Climb, theta: Float64Array): Place | null {
  const at = heightAt({ ...model, theta });
  if (!at) return null;
  if (!scalesTogether(model.structure) || !(at.scaleRatio > 0)) return { theta, logLikelihood: at.logLikelihood };
  return { theta: grown(model.structure, theta, at), logLikelihood: at.rescaled };
}

function grown({ scaleAt, betweenAt }: Structure, theta: Float64Array, { scaleRatio }: Height): Float64Array {
  const next = theta.slice();
  for (const i of [scaleAt, betweenAt]) if (i >= 0) next[i] = (theta[i] as number) * scaleRatio;
  return next;
}

function halved(model: { model: Climb; theta: Float64Array; logLikelihood: number; step: Float64Array }): Place | null {
  const { theta, logLikelihood } = model;
  const slack = FLAT * (Math.abs(logLikelihood) + model.model.rows.cells);
  let step = model.step;
  for (let halving = 0; halving <= HALVINGS; halving++) {
    const there = bestScale(model.model, moved(model.model.structure, theta, step));
    if (there && there.logLikelihood >= logLikelihood - slack) return there;
    step = step.map((d) => d / 2);
  }
  return null;
}

function changed(before: number, after: number): number {
  const size = Math.max(Math.abs(before), Math.abs(after));
  return size === 0 ? 0 : Math.abs(after - before) / size;
}

/** Index of a free part that has all but left the variance; -1 where none has. */
function vanishing(structure: Structure, theta: Float64Array): number {
  const { parameters, scaleAt, betweenAt, sampling } = structure;
  if (betweenAt < 0) return -1;
  const average = sampling.reduce((sum, a) => sum + a / sampling.length, 0);
  const within = (scaleAt < 0 ? 1 : (theta[scaleAt] as number)) * average;
  const between = theta[betweenAt] as number;
  const least = VANISHED * (within + between);
  if (parameters[betweenAt]?.fixed === null && between < least) return betweenAt;
  return parameters[scaleAt]?.fixed === null && within < least ? scaleAt : -1;
}
