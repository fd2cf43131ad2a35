import { solve } from '../algebra/dense';
import { freeParameters, isVariance, type Parameter, type Structure } from '../model/structure';
import type { Hooks } from '../protocol/source';
import { scoreAt } from './likelihood';
import type { Likelihood } from './likelihood-place';
import type { LikelihoodRows } from './likelihood-rows';
import { growsTogether, movedBy, slopeOfMove } from './search-space';

/** Longest step on the logarithm of a variance, on delta or a gamma, and on atanh of a correlation. */
const LONGEST = 2;
const LONGEST_EXPONENT = 0.5;
const LONGEST_CORRELATION = 1;
/** Step of the differences of the score, to both sides and to one. */
const DIFFERENCE = 1e-4;
const DIFFERENCE_ASIDE = 1e-6;

/** A likelihood to climb. */
export interface Climb {
  readonly rows: LikelihoodRows;
  readonly structure: Structure;
  readonly restricted: boolean;
  /** True where the maximum's height is asked for and not its place: the last digits of the place are left out. */
  readonly heightOnly?: boolean;
  /** A run that was cancelled ends at the next step, whatever was found. */
  readonly hooks?: Hooks;
}

/** d(theta / unit)/du of each free parameter, u the scale of the search. */
function stretch(structure: Structure, theta: Float64Array, { units }: Pick<Likelihood, 'units'>): Float64Array {
  return Float64Array.from(
    freeParameters(structure),
    (i, a) => slopeOfMove(structure.parameters[i] as Parameter, theta[i] as number) / (units[a] as number),
  );
}

/** The score by the parameters of the steps. */
export function scoreInSteps(
  structure: Structure,
  theta: Float64Array,
  at: Pick<Likelihood, 'units' | 'score'>,
): Float64Array {
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
 * A step uphill from theta on the scale of the search, no longer than a likelihood can be trusted over.
 *
 *     I step = score,  I the expected information (Fisher scoring), or the observed one where it is given and leads uphill
 *
 * Null where no direction can be computed.
 */
export function ascentStep(model: {
  readonly model: Climb;
  readonly theta: Float64Array;
  readonly at: Likelihood;
  /** By differences of the score, on the scale of the steps; null: the expected information alone. */
  readonly observed: readonly Float64Array[] | null;
}): Float64Array | null {
  const { theta, at } = model;
  const { structure } = model.model;
  const by = stretch(structure, theta, at);
  const score = scoreInSteps(structure, theta, at);
  const expected = at.information.map((row, a) => row.map((value, b) => value * (by[a] as number) * (by[b] as number)));
  const newton = model.observed && scaledSolve(model.observed, score);
  const rises = (step: Float64Array) => step.reduce((sum, d, a) => sum + d * (score[a] as number), 0) >= 0;
  const step =
    newton && rises(newton)
      ? newton
      : (scaledSolve(expected, score) ?? score.map((s, a) => s / ((expected[a] as Float64Array)[a] as number)));
  if (!step.every(Number.isFinite)) return null;
  const limits = freeParameters(structure).map((i) => longest(structure, i));
  const over = step.reduce((most, d, a) => Math.max(most, Math.abs(d) / (limits[a] as number)), 1);
  return step.map((d) => d / over);
}

/** The solution of a symmetric system, scaled to unit diagonal first; null where it has none. */
function scaledSolve(rows: readonly Float64Array[], right: Float64Array): Float64Array | null {
  const roots = rows.map((row, a) => Math.sqrt(row[a] as number));
  if (!roots.every((root) => root > 0 && root < Infinity)) return null;
  const scaled = rows.map((row, a) => row.map((value, b) => value / (roots[a] as number) / (roots[b] as number)));
  const solved = solve(
    scaled,
    right.map((value, a) => value / (roots[a] as number)),
  );
  return solved && Float64Array.from(solved, (value, a) => value / (roots[a] as number));
}

/** What grows with all of Omega follows an exponent or a gamma by as much as the unit of size asks for: those alone are held back. */
function longest(structure: Structure, i: number): number {
  const { parameters, exponentAt } = structure;
  const parameter = parameters[i] as Parameter;
  if (parameter.role === 'correlation') return LONGEST_CORRELATION;
  if (parameter.role === 'gamma')
    return growsTogether(structure) && parameters[i - 1]?.role !== 'gamma' ? Infinity : LONGEST;
  if (parameter.role === 'exponent') return LONGEST_EXPONENT;
  return isVariance(parameter) && parameter.role === 'scale' && parameters[exponentAt]?.fixed === null
    ? Infinity
    : LONGEST;
}

/**
 * Minus the differences of the score on the scale of the steps; null where a neighbour cannot be computed or it is not positive.
 *
 * from: the score at theta, where one difference to one side will do: a step's direction needs no more than a few digits.
 */
export function observedInformation(
  model: Climb,
  theta: Float64Array,
  from: Float64Array | null = null,
): Float64Array[] | null {
  const free = freeParameters(model.structure);
  const rows: Float64Array[] = [];
  const reach = from ? DIFFERENCE_ASIDE : DIFFERENCE;
  const scoreAfter = (a: number, step: number) => {
    const place = moved(
      model.structure,
      theta,
      Float64Array.from(free, (_, b) => (a === b ? step : 0)),
    );
    const there = scoreAt({ ...model, theta: place });
    return there && scoreInSteps(model.structure, place, there);
  };
  for (const a of free.keys()) {
    const up = scoreAfter(a, reach);
    const down = from ?? scoreAfter(a, -reach);
    if (!up || !down) return null;
    rows.push(up.map((value, b) => ((down[b] as number) - value) / (from ? reach : 2 * reach)));
  }
  const even = rows.map((row, a) => row.map((value, b) => (value + ((rows[b] as Float64Array)[a] as number)) / 2));
  return even.every((row) => row.every(Number.isFinite)) && even.every((row, a) => (row[a] as number) > 0)
    ? even
    : null;
}

/** theta after a step. */
export function moved(structure: Structure, theta: Float64Array, step: Float64Array): Float64Array {
  const place = theta.slice();
  for (const [a, i] of freeParameters(structure).entries())
    place[i] = movedBy(structure.parameters[i] as Parameter, theta[i] as number, step[a] as number);
  return place;
}
