import { solve } from '../algebra/dense';
import { freeParameters, type Structure } from '../model/structure';
import { exp } from '../numbers/elementary';
import { type Likelihood, scoreAt } from './likelihood';
import type { LikelihoodRows } from './likelihood-rows';

/** Longest step on ln phi or ln tau^2, and on delta. */
const LONGEST = 2;
const LONGEST_EXPONENT = 0.5;
/** Step of the differences of the score. */
const DIFFERENCE = 1e-4;

/** A likelihood to climb. */
export interface Climb {
  readonly rows: LikelihoodRows;
  readonly structure: Structure;
  readonly restricted: boolean;
  /** True where the maximum's height is asked for and not its place: the last digits of the place are left out. */
  readonly heightOnly?: boolean;
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

/** The largest score in units of its own standard deviation: 0 at a maximum, whatever the parameters are counted in. */
export function shareOfSpread({ score, information }: Likelihood): number {
  return score.reduce((most, value, a) => {
    const spread = Math.sqrt(Math.max(0, (information[a] as Float64Array)[a] as number));
    return value === 0 ? most : Math.max(most, Math.abs(value) / spread);
  }, 0);
}

/**
 * A step uphill from theta on ln phi, ln tau^2 and delta, no longer than a likelihood can be trusted over.
 *
 *     I step = score,  I the expected information (Fisher scoring), or by differences of the score where newton asks for it and it is positive
 *
 * Null where no direction can be computed.
 */
export function ascentStep(model: {
  readonly model: Climb;
  readonly theta: Float64Array;
  readonly at: Likelihood;
  readonly newton: boolean;
}): Float64Array | null {
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

/** theta after a step. */
export function moved(structure: Structure, theta: Float64Array, step: Float64Array): Float64Array {
  const place = theta.slice();
  for (const [a, i] of freeParameters(structure).entries()) {
    const d = step[a] as number;
    place[i] = isLogged(structure, i) ? (theta[i] as number) * exp(d) : (theta[i] as number) + d;
  }
  return place;
}
