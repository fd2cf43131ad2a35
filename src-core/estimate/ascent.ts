import { solve } from '../algebra/dense';
import { freeParameters, type Structure } from '../model/structure';
import { exp } from '../numbers/elementary';
import { type Height, heightAt, type Likelihood, likelihoodAt, scoreAt } from './likelihood';
import type { LikelihoodRows } from './likelihood-rows';

/** Rounds at most, and how many of them keep to the expected information before the observed one is tried. */
const ROUNDS = 200;
const SCORING_ROUNDS = 8;
const HALVINGS = 40;
/** Longest step on ln phi or ln tau^2, and on delta. */
const LONGEST = 2;
const LONGEST_EXPONENT = 0.5;
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
/** Step of the differences of the score. */
const DIFFERENCE = 1e-4;

export interface Climb {
  readonly rows: LikelihoodRows;
  readonly structure: Structure;
  readonly restricted: boolean;
  /** True where the maximum's height is asked for and not its place: the last digits of the place are left out. */
  readonly heightOnly?: boolean;
}

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
    const here = at;
    const score = inSteps(model.structure, theta, here);
    const within = (share: number) =>
      free.every((_, a) => Math.abs(score[a] as number) <= share * spreadOf(model.structure, theta, here, a));
    if (model.heightOnly && within(SCORE_FOR_HEIGHT)) return { ended: 'maximum', theta, logLikelihood, rounds };
    const step = direction({ model, theta, at: here, newton: rounds > SCORING_ROUNDS });
    const next: Place | null = step && halved({ model, theta, logLikelihood, step });
    const settled = within(SCORE);
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

function isLogged(structure: Structure, i: number): boolean {
  return structure.parameters[i]?.role !== 'exponent';
}

/** d(theta / unit)/du of each free parameter, u being ln theta or theta. */
function stretch(structure: Structure, theta: Float64Array, { units }: Pick<Likelihood, 'units'>): Float64Array {
  return Float64Array.from(freeParameters(structure), (i, a) =>
    isLogged(structure, i) ? (theta[i] as number) / (units[a] as number) : 1,
  );
}

/** The score by the parameters of the steps. */
function inSteps(structure: Structure, theta: Float64Array, at: Pick<Likelihood, 'units' | 'score'>): Float64Array {
  const by = stretch(structure, theta, at);
  return at.score.map((value, a) => value * (by[a] as number));
}

function spreadOf(structure: Structure, theta: Float64Array, at: Likelihood, a: number): number {
  const by = stretch(structure, theta, at)[a] as number;
  return by * Math.sqrt(Math.max(0, (at.information[a] as Float64Array)[a] as number));
}

function direction(model: { model: Climb; theta: Float64Array; at: Likelihood; newton: boolean }): Float64Array | null {
  const { theta, at } = model;
  const { structure } = model.model;
  const by = stretch(structure, theta, at);
  const score = inSteps(structure, theta, at);
  const expected = at.information.map((row, a) => row.map((value, b) => value * (by[a] as number) * (by[b] as number)));
  const observed = model.newton ? observedInformation(model.model, theta) : null;
  const newton = observed && solve(observed, score);
  const rises = (step: Float64Array) => step.reduce((sum, d, a) => sum + d * (score[a] as number), 0) >= 0;
  const step =
    newton && rises(newton)
      ? newton
      : (solve(expected, score) ?? score.map((s, a) => s / ((expected[a] as Float64Array)[a] as number)));
  if (!step.every(Number.isFinite)) return null;
  const limits = freeParameters(structure).map((i) => longest(structure, i));
  const over = step.reduce((most, d, a) => Math.max(most, Math.abs(d) / (limits[a] as number)), 1);
  return step.map((d) => d / over);
}

/** Beside an exponent phi follows it, by as much as the unit of size asks for: the exponent alone is held back. */
function longest({ parameters, scaleAt, exponentAt }: Structure, i: number): number {
  if (i === exponentAt) return LONGEST_EXPONENT;
  return i === scaleAt && parameters[exponentAt]?.fixed === null ? Infinity : LONGEST;
}

/** Minus the differences of the score on the scale of the steps; null where a neighbour cannot be computed or it is not positive. */
function observedInformation(model: Climb, theta: Float64Array): Float64Array[] | null {
  const free = freeParameters(model.structure);
  const rows: Float64Array[] = [];
  for (const [a] of free.entries()) {
    const unit = free.map((_, b) => (a === b ? DIFFERENCE : 0));
    const [up, down] = [unit, unit.map((d) => -d)].map((step) => {
      const place = moved(model.structure, theta, Float64Array.from(step));
      const there = scoreAt({ ...model, theta: place });
      return there && inSteps(model.structure, place, there);
    });
    if (!up || !down) return null;
    rows.push(up.map((value, b) => ((down[b] as number) - value) / (2 * DIFFERENCE)));
  }
  const even = rows.map((row, a) => row.map((value, b) => (value + ((rows[b] as Float64Array)[a] as number)) / 2));
  return even.every((row) => row.every(Number.isFinite)) && even.every((row, a) => (row[a] as number) > 0)
    ? even
    : null;
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

function moved(structure: Structure, theta: Float64Array, step: Float64Array): Float64Array {
  const place = theta.slice();
  for (const [a, i] of freeParameters(structure).entries()) {
    const d = step[a] as number;
    place[i] = isLogged(structure, i) ? (theta[i] as number) * exp(d) : (theta[i] as number) + d;
  }
  return place;
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
