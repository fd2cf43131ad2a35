import type { Part, Variance } from './plan';
import { interceptName, levelName, termName } from './term-names';

/** The parts that stand for sampling error; between and shared parts come on top of one of them. */
export type SamplingPart = Exclude<Part, { kind: 'between' | 'shared' }>;

export function isSampling(part: Part): part is SamplingPart {
  return part.kind !== 'between' && part.kind !== 'shared';
}

/** One variance parameter that a structure has by its kinds. `open`: a name that goes on with a class or level known from data alone. */
export interface NamedParameter {
  readonly name: string;
  readonly open: boolean;
  readonly part: Part;
  readonly role: 'scale' | 'exponent' | 'log-linear' | 'between' | 'shared' | 'correlation';
}

/**
 * The variance parameters of a structure under their result names, in the order of its parts; those set in `fixed` included.
 *
 * `phi` · `phi: CLASS` (open: `phi: `) · `delta` · `gamma: TERM` (open for the levels of a category) · `tau2` · `omega2: BY`, columns
 * joined by " × " · `rho: KIND`, after the other parameters of the part that carries it.
 */
export function namedParameters(variance: Pick<Variance, 'parts'>): NamedParameter[] {
  return variance.parts.flatMap((part) => [...ownParameters(part), ...correlationOf(part)]);
}

function ownParameters(part: Part): NamedParameter[] {
  const phi: NamedParameter = { name: 'phi', open: false, part, role: 'scale' };
  switch (part.kind) {
    case 'constant':
    case 'per-size':
      return [phi];
    case 'given':
    case 'matrix':
    case 'binomial':
    case 'counts':
      return part.scale === 'free' ? [phi] : [];
    case 'size-power':
    case 'proxy':
      return part.exponent === 'estimate' ? [phi, { name: 'delta', open: false, part, role: 'exponent' }] : [phi];
    case 'per-class':
      return [{ name: 'phi: ', open: true, part, role: 'scale' }];
    case 'log-linear':
      return [
        { name: `gamma: ${interceptName}`, open: false, part, role: 'log-linear' },
        ...part.terms.map((term): NamedParameter => {
          const open = 'as' in term;
          return {
            name: `gamma: ${open ? levelName(term.column, '') : termName(term)}`,
            open,
            part,
            role: 'log-linear',
          };
        }),
      ];
    case 'between':
      return [{ name: 'tau2', open: false, part, role: 'between' }];
    case 'shared':
      return [{ name: `omega2: ${part.by.join(' × ')}`, open: false, part, role: 'shared' }];
  }
}

function correlationOf(part: Part): NamedParameter[] {
  if (!('correlation' in part) || part.correlation === null) return [];
  return [{ name: `rho: ${part.kind}`, open: false, part, role: 'correlation' }];
}

/** Whether a name in `fixed` means this parameter, or one of those that an open name stands for. */
export function means(name: string, parameter: NamedParameter): boolean {
  return parameter.open
    ? name.length > parameter.name.length && name.startsWith(parameter.name)
    : name === parameter.name;
}

/** The parameters that are left to be estimated; an open name counts as unknown, since its classes are known from data alone. */
export function unknownParameters(variance: Variance): NamedParameter[] {
  const known = Object.keys(variance.fixed);
  return namedParameters(variance).filter(
    (parameter) => parameter.open || !known.some((name) => means(name, parameter)),
  );
}

/**
 * Whether nothing is unknown but one scale that multiplies all of Omega: then least squares on whitened data settles it.
 *
 * A free scale of the sampling part is no scale of Omega beside a between or shared part, even a known one.
 */
export function onlyScaleUnknown(variance: Variance): boolean {
  const unknown = unknownParameters(variance);
  const [only] = unknown;
  if (only === undefined) return true;
  return unknown.length === 1 && only.role === 'scale' && !only.open && variance.parts.every(isSampling);
}
