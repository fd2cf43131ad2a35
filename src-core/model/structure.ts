import type { BlockForm, RanksSlope, SerialSlope } from '../algebra/block-form';
import { type Covariance, formedBlock, independent } from '../algebra/covariance';
import { log } from '../numbers/elementary';
import { mean } from '../numbers/sums';
import type { PartKind } from '../protocol/plan';
import type { MeanDependent } from './mean-dependent';
import type { VariancePart } from './variance-part';

/** One variance parameter of a structure, under its result name (`phi`, `tau2`, `delta` ...). */
export interface Parameter {
  readonly name: string;
  /** scale, class, between, shared: variances, 0 at the least; gamma: a coefficient of a log variance. */
  readonly role: 'scale' | 'class' | 'between' | 'shared' | 'exponent' | 'gamma' | 'correlation';
  /** The part of the plan that it belongs to, and the part's place. */
  readonly part: PartKind;
  readonly partAt: number;
  /** Set by the user: known, not estimated. */
  readonly fixed: number | null;
  /** Its range; a variance and a correlation from 0 on may end at 0, every other end is open. */
  readonly low: number;
  readonly high: number;
  /** A middle value, at which structures are judged: 1 for an exponent and for variances, 0 for a gamma, .3 between neighbours in order for a correlation. */
  readonly inside: number;
}

/** A part with the places of its parameters. */
export interface PlacedPart {
  readonly part: VariancePart;
  /** Index of its first parameter; its own ones stand together. */
  readonly at: number;
  /** Index of its correlation's parameter, -1 without one. */
  readonly rhoAt: number;
}

/** What ties cells together. */
export interface Links {
  /** Cells of each connected component of two or more, ascending. */
  readonly blocks: readonly Int32Array[];
  /** Omega of the cells of block b: n x n, row after row; into: where it is to stand, of zeros. */
  readonly blockAt: (theta: Float64Array, b: number, into?: Float64Array) => Float64Array;
  /**
   * dOmega/dtheta_i of the cells of block b, one n x n a parameter; null where it is 0 throughout. room: where each is to stand, of zeros; null where
   * it is not wanted.
   */
  readonly blockDerivativesAt: (
    theta: Float64Array,
    b: number,
    room?: (parameter: number) => Float64Array | null,
  ) => readonly (Float64Array | null)[];
  /** What each block is made of whatever theta; null: of nothing but its full matrix. */
  readonly kinds: readonly (BlockForm['kind'] | null)[];
  /** What block b is made of, where that makes work on it linear in its cells; null where it is its full matrix. */
  readonly formAt: (theta: Float64Array, b: number) => BlockForm | null;
  /** Its derivatives in the same terms, where there is a form: one a parameter; null where it is 0 throughout. */
  readonly formSlopesAt: (theta: Float64Array, b: number) => readonly (RanksSlope | SerialSlope | null)[];
  /** All blocks of ranks as one, cell after cell; null where there are fewer than two. */
  readonly together: {
    readonly cells: Int32Array;
    readonly formAt: (theta: Float64Array) => BlockForm | null;
    readonly formSlopesAt: (theta: Float64Array) => readonly (RanksSlope | SerialSlope | null)[];
  } | null;
}

/**
 * A variance structure on the used cells: Omega as a function of its parameters, a sum of parts.
 *
 *     Omega(theta) = sum over parts of D^(1/2) R D^(1/2)
 */
export interface Structure {
  /** G. */
  readonly count: number;
  readonly parameters: readonly Parameter[];
  readonly parts: readonly PlacedPart[];
  /** Variances of the sampling part at scale 1 (every class, exp of the constant gamma), exponent 1 where that is estimated, gammas 0. */
  readonly sampling: Float64Array;
  /** Variances of the sampling part at theta, its scale included. */
  readonly samplingAt: (theta: Float64Array) => Float64Array;
  /** Index of phi, or -1: none where every class has its own, or where the scale is the constant gamma. */
  readonly scaleAt: number;
  /** Index of tau^2, or -1. */
  readonly betweenAt: number;
  /** Index of delta, or -1. */
  readonly exponentAt: number;
  /** True where one free phi multiplies all of Omega: it can be profiled out. */
  readonly commonScale: boolean;
  /** Omega_gg, length G. */
  readonly variancesAt: (theta: Float64Array) => Float64Array;
  /** dOmega_gg/dtheta_i: one column of length G a parameter. */
  readonly derivativesAt: (theta: Float64Array) => readonly Float64Array[];
  /** Null: cells are independent at every theta. */
  readonly links: Links | null;
  /** True where Omega holds a matrix of too few degrees of freedom to be inverted: weights go by its diagonal. */
  readonly byDiagonal: boolean;
  /** The sampling part's variances follow from fitted means and are not settled yet; null otherwise. */
  readonly meanDependent: null | MeanDependent;
}

/**
 * The same structure with one parameter set to a value, as for a profile likelihood; null frees it again.
 *
 * name: a parameter of the structure; another one is a bug and throws. The order of the parameters stays.
 *
 * Example: `withFixed(structure, 'tau2', 0)` is the structure without its between part, as far as the likelihood goes.
 */
export function withFixed(structure: Structure, name: string, value: number | null): Structure {
  if (!structure.parameters.some((parameter) => parameter.name === name)) throw new RangeError(`no parameter ${name}`);
  const parameters = structure.parameters.map((parameter) =>
    parameter.name === name ? { ...parameter, fixed: value } : parameter,
  );
  return { ...structure, parameters, commonScale: scalesAll(parameters) };
}

/** One free phi, and nothing else that has a level of its own but parts that are set to 0. */
export function scalesAll(parameters: readonly Parameter[]): boolean {
  const levels = parameters.filter(isVariance);
  const free = levels.filter(({ fixed }) => fixed === null);
  return free.length === 1 && free[0]?.role === 'scale' && levels.every(({ fixed }) => fixed === null || fixed === 0);
}

/** True for a parameter that is a variance: 0 at the least, searched on its logarithm. */
export function isVariance({ role }: Pick<Parameter, 'role'>): boolean {
  return role === 'scale' || role === 'class' || role === 'between' || role === 'shared';
}

/** Indices of the parameters that are estimated. */
export function freeParameters(structure: Structure): number[] {
  return structure.parameters.flatMap((parameter, i) => (parameter.fixed === null ? [i] : []));
}

/** Omega at theta. */
export function omegaAt(structure: Structure, theta: Float64Array): Covariance {
  const diagonal = structure.variancesAt(theta);
  const { links } = structure;
  if (!links) return independent(diagonal);
  const blocks = links.blocks.map((cells, b) => {
    const form = links.formAt(theta, b);
    return form ? formedBlock(cells, form) : { cells, matrix: links.blockAt(theta, b) };
  });
  return { diagonal, blocks };
}

/** Variances of one part at theta. */
export function partVariances({ part, at }: PlacedPart, theta: Float64Array): Float64Array {
  return part.variancesAt(theta.subarray(at, at + part.parameters.length));
}

/**
 * A point inside the parameters' range at which the parts weigh alike: every part has the same mean variance, exponents are 1, gammas 0 but the
 * constant, correlations .3. Parameters that the user fixed keep their value, and the others follow a part that is fixed.
 */
export function interiorPoint(structure: Structure): Float64Array {
  const { parameters, parts } = structure;
  const theta = Float64Array.from(parameters, ({ fixed, inside }) => fixed ?? inside);
  const level = levelOfAll(structure, theta);
  for (const placed of parts) {
    const own = mean(partVariances(placed, theta));
    if (!(own > 0) || own === level) continue;
    for (const i of levelsOf(structure, placed))
      if (parameters[i]?.fixed === null) theta[i] = atLevel(parameters[i], theta[i] as number, level / own);
  }
  return theta;
}

/** The mean variance of the first part that is fixed, else of the sampling part as it stands, else of the first that is not at 0. */
function levelOfAll(structure: Structure, theta: Float64Array): number {
  const { parameters, parts } = structure;
  const means = parts.map((placed) => mean(partVariances(placed, theta)));
  const settled = parts.findIndex(
    (placed, p) => (means[p] as number) > 0 && levelsOf(structure, placed).every((i) => parameters[i]?.fixed !== null),
  );
  const sampling = parts.findIndex(({ part }) => part.kind !== 'between' && part.kind !== 'shared');
  const place = [settled, sampling].find((p) => p >= 0 && (means[p] as number) > 0);
  return means[place ?? means.findIndex((own) => own > 0)] as number;
}

/** Indices of the parameters that set a part's size: its variances, or its constant gamma (the first). */
export function levelsOf({ parameters }: Structure, { part, at }: PlacedPart): number[] {
  const own = part.parameters.map((_, i) => at + i);
  const levels = own.filter((i) => isVariance(parameters[i] as Parameter));
  return part.kind === 'log-linear' ? own.slice(0, 1) : levels;
}

/** A level after the variances that it sets have been multiplied by a factor. */
export function atLevel(parameter: Pick<Parameter, 'role'> | undefined, value: number, factor: number): number {
  return parameter?.role === 'gamma' ? value + log(factor) : value * factor;
}
