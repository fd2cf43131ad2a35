import type { PartKind } from '../protocol/plan';
import { isVariance, type Parameter, type PlacedPart, partVariances, type Structure, scalesAll } from './structure';
import { linksOf } from './structure-links';
import { rhoOf } from './structure-rho';
import { levelPart, type SamplingPart, shapedPart, type VariancePart } from './variance-part';

/**
 * Joins parts to a structure.
 *
 * parts: in the plan's order, one sampling part among them, all on the same cells; fixed: parameters set by the user, under their result names.
 */
export function joinAll(made: {
  readonly parts: readonly VariancePart[];
  readonly fixed: Readonly<Record<string, number>>;
}): Structure {
  const set = (name: string) => (Object.hasOwn(made.fixed, name) ? (made.fixed[name] as number) : null);
  const parameters: Parameter[] = [];
  const parts: PlacedPart[] = [];
  for (const [partAt, part] of made.parts.entries()) {
    const at = parameters.length;
    for (const { name, role } of part.parameters)
      parameters.push({ ...rangeOf(role), name, role, part: part.kind, partAt, fixed: set(name) });
    const rho = rhoOf(part.link);
    if (rho) {
      const name = `rho: ${part.kind}`;
      parameters.push({ ...rho, name, role: 'correlation', part: part.kind, partAt, fixed: set(name) });
    }
    parts.push({ part, at, rhoAt: rho ? parameters.length - 1 : -1 });
  }
  return assemble(parts, parameters);
}

/** A structure with other parts in the places of its own, its parameters as they stand. */
export function joinPlaced(structure: Structure, parts: readonly PlacedPart[]): Structure {
  return { ...assemble(parts, structure.parameters), meanDependent: structure.meanDependent };
}

/** The same structure on some of the cells, or on all in another order; each cell's variance, and what it shares with others, as before. */
export function takeStructure(structure: Structure, rows: ArrayLike<number>): Structure {
  return joinPlaced(
    structure,
    structure.parts.map((placed) => ({ ...placed, part: placed.part.take(rows) })),
  );
}

/** The same structure with other variances in its sampling part, which is a level times a known column; they depend on no mean from there on. */
export function withSampling(structure: Structure, base: Float64Array): Structure {
  const parts = structure.parts.map((placed) => {
    const { kind, link, parameters } = placed.part;
    if (added.has(kind)) return placed;
    return { ...placed, part: levelPart({ kind, parameter: parameters[0] ?? null, base, link }) };
  });
  return assemble(parts, structure.parameters);
}

/**
 * Joins a sampling part and, where there is one, the between part, cells being independent.
 *
 * cells: G; fixed: parameters set by the user, under their result names; the names must be this structure's (checked with the plan's form).
 */
export function joinParts(made: {
  readonly cells: number;
  readonly sampling: SamplingPart;
  /** Where the between part stands among the parts: tau^2 keeps the plan's order. */
  readonly between: 'none' | 'first' | 'last';
  readonly fixed: Readonly<Record<string, number>>;
}): Structure {
  const { cells, between, fixed } = made;
  const sampling = shapedPart(made.sampling, null);
  const tau2 = levelPart({
    kind: 'between',
    parameter: { name: 'tau2', role: 'between' },
    base: new Float64Array(cells).fill(1),
    link: null,
  });
  const parts = between === 'none' ? [sampling] : between === 'first' ? [tau2, sampling] : [sampling, tau2];
  return joinAll({ parts, fixed });
}

function rangeOf(role: Parameter['role']): Pick<Parameter, 'low' | 'high' | 'inside'> {
  if (isVariance({ role })) return { low: 0, high: Number.POSITIVE_INFINITY, inside: 1 };
  return { low: Number.NEGATIVE_INFINITY, high: Number.POSITIVE_INFINITY, inside: role === 'exponent' ? 1 : 0 };
}

const added: ReadonlySet<PartKind> = new Set(['between', 'shared']);

function assemble(parts: readonly PlacedPart[], parameters: readonly Parameter[]): Structure {
  const place = (role: Parameter['role']) => parameters.findIndex((parameter) => parameter.role === role);
  const sampling = parts.find(({ part }) => !added.has(part.kind)) as PlacedPart;
  const count = sampling.part.cells;
  const unit = Float64Array.from(parameters, ({ role, fixed, inside }) =>
    role === 'exponent' ? (fixed ?? inside) : inside,
  );
  const [first] = parts;
  return {
    count,
    parameters,
    parts,
    sampling: partVariances(sampling, unit),
    samplingAt: (theta) => partVariances(sampling, theta),
    scaleAt: place('scale'),
    betweenAt: place('between'),
    exponentAt: place('exponent'),
    commonScale: scalesAll(parameters),
    variancesAt: (theta) => {
      const total = partVariances(first as PlacedPart, theta).slice();
      for (const placed of parts.slice(1)) {
        const own = partVariances(placed, theta);
        for (let g = 0; g < count; g++) total[g] = (total[g] as number) + (own[g] as number);
      }
      return total;
    },
    derivativesAt: (theta) => derivativesOf(parts, theta, count),
    links: linksOf(parts, count),
    byDiagonal: parts.some(({ part: { link } }) => link?.kind === 'matrix' && !link.inverted),
    meanDependent: null,
  };
}

function derivativesOf(parts: readonly PlacedPart[], theta: Float64Array, count: number): Float64Array[] {
  return parts.flatMap(({ part, at, rhoAt }) => [
    ...part.slopesAt(theta.subarray(at, at + part.parameters.length)),
    ...(rhoAt < 0 ? [] : [new Float64Array(count)]),
  ]);
}
