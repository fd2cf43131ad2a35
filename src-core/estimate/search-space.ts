import { largestOf } from '../algebra/powers-of-two';
import { atLevel, freeParameters, isVariance, levelsOf, type Parameter, type Structure } from '../model/structure';
import { exp, log, pow } from '../numbers/elementary';

/** A part whose share of the variance falls below this is on its way to 0; so is a correlation of neighbours. */
const VANISHED = 1e-13;
/** A correlation this near an open end of its range has run to it. */
const AT_END = 1e-11;
/** The exponent is sought between minus and plus this: beyond, likelihoods of few cells grow without bound by fitting k cells exactly. */
export const WIDEST_EXPONENT = 8;

/**
 * theta_i after a step on the scale of the search: ln of a variance, atanh of a correlation rescaled to its range, else itself.
 *
 *     (rho - low) / (high - rho) times exp(2 step), taken from the nearer end so that a correlation close to it keeps its digits
 */
export function movedBy(parameter: Parameter, value: number, step: number): number {
  if (isVariance(parameter)) return value * exp(step);
  if (parameter.role !== 'correlation') return value + step;
  const { low, high } = parameter;
  const odds = ((value - low) / (high - value)) * exp(2 * step);
  return odds < 1 ? low + ((high - low) * odds) / (1 + odds) : high - (high - low) / (1 + odds);
}

/** d theta_i / d u, u the scale of the search. */
export function slopeOfMove(parameter: Parameter, value: number): number {
  if (isVariance(parameter)) return value;
  if (parameter.role !== 'correlation') return 1;
  return (2 * (value - parameter.low) * (parameter.high - value)) / (parameter.high - parameter.low);
}

/** True where every part's variance is free to grow, or 0, so that one factor over all of Omega is free as well. */
export function growsTogether(structure: Structure): boolean {
  const { parameters, parts } = structure;
  let any = false;
  for (const placed of parts) {
    const levels = levelsOf(structure, placed).map((i) => parameters[i] as Parameter);
    if (levels.length === 0) return false;
    for (const { fixed, role } of levels) {
      if (fixed !== null && !(fixed === 0 && role !== 'gamma')) return false;
      any ||= fixed === null;
    }
    if (placed.part.kind === 'log-linear' && !constantFirst(placed.part.keys)) return false;
  }
  return any;
}

/** The first gamma scales all of its part only where its column is the constant. */
function constantFirst(keys: readonly ArrayLike<number>[]): boolean {
  const [first] = keys;
  return first !== undefined && Array.from(first).every((z) => z === 1);
}

/** theta with all variances multiplied by a factor. */
export function grown(structure: Structure, theta: Float64Array, factor: number): Float64Array {
  const next = theta.slice();
  for (const placed of structure.parts)
    for (const i of levelsOf(structure, placed)) next[i] = atLevel(structure.parameters[i], theta[i] as number, factor);
  return next;
}

/**
 * The same structure where nothing idle is free: the correlation of a part whose variance is set to 0 says nothing, and stands at its middle
 * value.
 */
export function withoutIdle(structure: Structure): Structure {
  const { parameters, parts } = structure;
  const idle = new Set<number>();
  for (const placed of parts) {
    if (placed.rhoAt < 0 || parameters[placed.rhoAt]?.fixed !== null) continue;
    const levels = levelsOf(structure, placed);
    if (levels.length > 0 && placed.part.kind !== 'log-linear' && levels.every((i) => parameters[i]?.fixed === 0))
      idle.add(placed.rhoAt);
  }
  if (idle.size === 0) return structure;
  return {
    ...structure,
    parameters: parameters.map((parameter, i) => (idle.has(i) ? { ...parameter, fixed: parameter.inside } : parameter)),
  };
}

/**
 * The parameters that may end at 0: each variance that another part can stand in for (a shared one cannot: its cells would differ by nothing),
 * and a correlation from 0 on.
 */
export function canVanish(structure: Structure): number[] {
  return freeParameters(structure).filter((i) => {
    const parameter = structure.parameters[i] as Parameter;
    if (parameter.role === 'correlation') return parameter.low === 0;
    if (parameter.role === 'shared') return true;
    if (parameter.role === 'between') return samplingStays(structure);
    if (parameter.role !== 'scale' && parameter.role !== 'class') return false;
    const { exponentAt, betweenAt, parameters } = structure;
    return betweenAt >= 0 && parameters[betweenAt]?.fixed !== 0 && parameters[exponentAt]?.fixed !== null;
  });
}

function samplingStays({ parameters }: Structure): boolean {
  return parameters.every(({ role, fixed }) => (role !== 'scale' && role !== 'class') || fixed !== 0);
}

/** Index of a free parameter that has all but left: a variance's share, or the correlation of neighbours; -1 where none has. */
export function vanishing(structure: Structure, theta: Float64Array): number {
  const able = canVanish(structure);
  if (able.length === 0) return -1;
  const total = structure.variancesAt(theta);
  const slopes = structure.derivativesAt(theta);
  const found = able.find((i) => {
    const { role, inside } = structure.parameters[i] as Parameter;
    const value = theta[i] as number;
    if (role === 'correlation') return pow(value, log(0.3) / log(inside)) < VANISHED;
    return largestShare(slopes[i] as Float64Array, (g) => value / (total[g] as number)) < VANISHED;
  });
  return found ?? -1;
}

/** The largest variance that a parameter gives to a cell, against the largest of all cells; 1 where it is in none. */
export function sizeAmongAll(structure: Structure, theta: Float64Array, i: number): number {
  const largest = largestOf(structure.variancesAt(theta));
  return largestShare(structure.derivativesAt(theta)[i] as Float64Array, () => (theta[i] as number) / largest);
}

function largestShare(slopes: Float64Array, unitOf: (g: number) => number): number {
  let most = -1;
  for (const [g, slope] of slopes.entries()) if (slope !== 0) most = Math.max(most, unitOf(g) * slope);
  return most < 0 ? 1 : most;
}

/** Index of a parameter that has left what is searched: a correlation at an open end, an exponent beyond the widest; -1 where none has. */
export function leftRange({ parameters }: Structure, theta: Float64Array): number {
  return parameters.findIndex((parameter, i) => {
    if (parameter.fixed !== null) return false;
    const value = theta[i] as number;
    if (parameter.role === 'exponent') return Math.abs(value) > WIDEST_EXPONENT;
    if (parameter.role !== 'correlation') return false;
    const least = AT_END * (parameter.high - parameter.low);
    return parameter.high - value < least || (parameter.low < 0 && value - parameter.low < least);
  });
}
