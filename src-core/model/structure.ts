import type { PartKind } from '../protocol/plan';

/** One variance parameter of a structure, under its result name (`phi`, `tau2`, `delta` ...). */
export interface Parameter {
  readonly name: string;
  readonly role: 'scale' | 'between' | 'exponent';
  /** The part of the plan that it belongs to. */
  readonly part: PartKind;
  /** Set by the user: known, not estimated. */
  readonly fixed: number | null;
}

/**
 * A variance structure on the used cells with independent errors: v_g as a function of its parameters.
 *
 *     v(theta) = phi a(delta) + tau^2
 *
 * a: the sampling part with its scale left out, length G, squared units of the outcome; phi is 1 and no parameter where the scale is fixed.
 */
export interface Structure {
  readonly parameters: readonly Parameter[];
  /** a_g; at exponent 1 where the exponent is estimated. */
  readonly sampling: Float64Array;
  /** Index of phi, or -1. */
  readonly scaleAt: number;
  /** Index of tau^2, or -1. */
  readonly betweenAt: number;
  /** Index of delta, or -1. */
  readonly exponentAt: number;
  /** True where one free phi multiplies all of Omega: it can be profiled out. */
  readonly commonScale: boolean;
  /** Length G. */
  readonly variancesAt: (theta: Float64Array) => Float64Array;
  /** dv/dtheta_i: one column of length G a parameter. */
  readonly derivativesAt: (theta: Float64Array) => readonly Float64Array[];
}

/** The sampling part of a structure, its scale left out. */
export interface SamplingPart {
  readonly kind: PartKind;
  readonly scale: 'fixed' | 'free';
  /** a_g for an exponent; parts without one ignore it. */
  readonly at: (exponent: number) => Float64Array;
  /** da_g/d delta; null where the exponent is no parameter. */
  readonly slopeAt: ((exponent: number) => Float64Array) | null;
}

/**
 * Joins a sampling part and, where there is one, the between part.
 *
 * cells: G; fixed: parameters set by the user, under their result names; the names must be this structure's (checked with the plan's form).
 */
export function joinParts(parts: {
  readonly cells: number;
  readonly sampling: SamplingPart;
  /** Where the between part stands among the parts: tau^2 keeps the plan's order. */
  readonly between: 'none' | 'first' | 'last';
  readonly fixed: Readonly<Record<string, number>>;
}): Structure {
  const { sampling, between, fixed } = parts;
  const set = (name: string) => (Object.hasOwn(fixed, name) ? (fixed[name] as number) : null);
  const parameters: Parameter[] = [];
  if (sampling.scale === 'free')
    parameters.push({ name: 'phi', role: 'scale', part: sampling.kind, fixed: set('phi') });
  if (sampling.slopeAt) parameters.push({ name: 'delta', role: 'exponent', part: sampling.kind, fixed: set('delta') });
  const tau2: Parameter = { name: 'tau2', role: 'between', part: 'between', fixed: set('tau2') };
  if (between === 'first') parameters.unshift(tau2);
  if (between === 'last') parameters.push(tau2);
  return assemble(parts.cells, sampling, parameters);
}

function assemble(cells: number, sampling: SamplingPart, parameters: readonly Parameter[]): Structure {
  const place = (role: Parameter['role']) => parameters.findIndex((parameter) => parameter.role === role);
  const [scaleAt, betweenAt, exponentAt] = [place('scale'), place('between'), place('exponent')];
  const parameterOr = (theta: Float64Array, at: number, otherwise: number) =>
    at < 0 ? otherwise : (theta[at] as number);
  const samplingAt = (theta: Float64Array) => sampling.at(parameterOr(theta, exponentAt, 1));
  return {
    parameters,
    sampling: sampling.at(exponentAt >= 0 ? (parameters[exponentAt]?.fixed ?? 1) : 1),
    scaleAt,
    betweenAt,
    exponentAt,
    commonScale: scalesAll(parameters, { scaleAt, betweenAt }),
    variancesAt: (theta) => {
      const scale = parameterOr(theta, scaleAt, 1);
      const tau2 = parameterOr(theta, betweenAt, 0);
      return samplingAt(theta).map((a) => scale * a + tau2);
    },
    derivativesAt: (theta) =>
      parameters.map(({ role }) => {
        if (role === 'between') return new Float64Array(cells).fill(1);
        if (role === 'scale') return samplingAt(theta);
        const slope = sampling.slopeAt as (exponent: number) => Float64Array;
        const scale = parameterOr(theta, scaleAt, 1);
        return slope(theta[exponentAt] as number).map((a) => scale * a);
      }),
  };
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
  return { ...structure, parameters, commonScale: scalesAll(parameters, structure) };
}

/** One free phi, and no between part or one that is set to 0. */
function scalesAll(
  parameters: readonly Parameter[],
  { scaleAt, betweenAt }: Pick<Structure, 'scaleAt' | 'betweenAt'>,
): boolean {
  return parameters[scaleAt]?.fixed === null && (betweenAt < 0 || parameters[betweenAt]?.fixed === 0);
}

/** Indices of the parameters that are estimated. */
export function freeParameters(structure: Structure): number[] {
  return structure.parameters.flatMap((parameter, i) => (parameter.fixed === null ? [i] : []));
}

/**
 * A point inside the parameters' range at which the parts weigh alike: tau^2 and phi give equal mean variances, delta is 1.
 * Parameters that the user fixed keep their value.
 */
export function interiorPoint(structure: Structure): Float64Array {
  const { parameters, sampling, scaleAt, betweenAt } = structure;
  const average = sampling.reduce((sum, a) => sum + a / sampling.length, 0);
  const theta = Float64Array.from(parameters, (parameter) => parameter.fixed ?? 1);
  const scale = parameters[scaleAt];
  const between = parameters[betweenAt];
  if (scale?.fixed === null && between && (between.fixed ?? 0) > 0)
    theta[scaleAt] = (between.fixed as number) / average;
  if (between?.fixed === null) theta[betweenAt] = ((scaleAt < 0 ? 1 : (theta[scaleAt] as number)) || 1) * average;
  return theta;
}
