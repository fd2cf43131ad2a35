import { log, pow } from '../numbers/elementary';
import { done, type Outcome, problem, refuse, refuseAll } from '../protocol/outcome';
import type { Correlation, Part, Rival, Variance } from '../protocol/plan';
import { below } from '../protocol/pointer';
import type { Troubles } from '../protocol/problems';
import type { Cells } from '../table/cells';
import { composed } from '../table/declarations';
import { freedomOf } from '../table/matrix';
import { countedPart } from './counted-part';
import { designOf } from './design';
import { groupsOfCells } from './groups-of-cells';
import { byCodePoint, learnTerms } from './learn-terms';
import type { MeanDependent } from './mean-dependent';
import type { Structure } from './structure';
import { joinAll } from './structure-join';
import {
  classPart,
  type Link,
  levelPart,
  logLinearPart,
  type SamplingPart,
  shapedPart,
  type VariancePart,
} from './variance-part';

/** A rival's word as a variance value; a variance value is itself. The errors of "given" have a free scale. */
export function varianceOf(rival: Rival): Variance {
  if (typeof rival !== 'string') return rival;
  const part: Part =
    rival === 'given'
      ? { kind: 'given', scale: 'free', freedom: null, correlation: null }
      : { kind: rival, correlation: null };
  return { parts: [part], fixed: {} };
}

/**
 * The variance structure of a plan on its cells.
 *
 *     Omega = sum over parts of D^(1/2) R D^(1/2)
 *     D: phi | phi/m_g | phi s_g^2 | phi S | phi m_g^-delta | phi z_g^delta | exp(z_g' gamma) | phi_c | phi_c/m_g | tau^2 | omega^2 inside groups
 *
 * variance: one sampling part, at most one between part, any number of shared ones, as the form of the plan was checked; cells: with the roles
 * that they need.
 * Refuses a proxy that is not above 0 (`transform-undefined`, as its log would be), a cell whose variance runs over or under (the same, naming
 * the power), terms of a log-linear part that depend on each other (`dependent-columns`), and a correlation set outside its range
 * (`out-of-range`).
 *
 * at: pointer to the variance value, "/variance" in a plan.
 */
export function structureOf(model: {
  readonly variance: Rival;
  readonly cells: Cells;
  readonly at?: string;
}): Outcome<Structure> {
  const { cells, at = '/variance' } = model;
  const { parts, fixed } = varianceOf(model.variance);
  const made: VariancePart[] = [];
  for (const [index, part] of parts.entries()) {
    const place = below(at, 'parts', index);
    const own = partOf({ part, cells, at: place, exponent: fixed['delta'] ?? 1 });
    if (!own.ok) return own;
    made.push(own.value);
  }
  const joined = joinAll({ parts: made, fixed: composedNames(fixed) });
  const structure = { ...joined, meanDependent: meanDependentOf(parts, cells) };
  const outside = structure.parameters.flatMap(({ name, role, fixed: found, low, high }) =>
    role === 'correlation' && found !== null && !(found > low && found < high) && found !== 0
      ? [problem('out-of-range', { found, low, high }, below(at, 'fixed', name))]
      : [],
  );
  if (outside.length > 0) return refuseAll(outside);
  const large = largestFullBlock(structure);
  return large > MOST_TOGETHER
    ? refuse('block-too-large', { cells: large, most: MOST_TOGETHER }, below(at, 'parts'))
    : done(structure);
}

/** Cells of a block that is factored as a whole, at most. */
const MOST_TOGETHER = 4000;

/** Cells of the largest block without a form of its own; 0 without such a block. */
function largestFullBlock({ links }: Structure): number {
  const sizes = links?.blocks.map((cells, b) => (links.kinds[b] === null ? cells.length : 0)) ?? [];
  return sizes.reduce((most, size) => Math.max(most, size), 0);
}

function meanDependentOf(parts: readonly Part[], cells: Cells): MeanDependent | null {
  const part = parts.find(isCounted);
  return part ? countedPart(part, cells).meanDependent : null;
}

function isCounted(part: Part): part is Extract<Part, { kind: 'binomial' | 'counts' }> {
  return part.kind === 'binomial' || part.kind === 'counts';
}

/** Classes and levels are told apart in normal form C, and so are the names that hold them. */
function composedNames(fixed: Variance['fixed']): Record<string, number> {
  return Object.fromEntries(Object.entries(fixed).map(([name, value]) => [composed(name), value]));
}

interface Asked<P extends Part = Part> {
  readonly part: P;
  readonly cells: Cells;
  readonly at: string;
}

function partOf(asked: Asked & { readonly exponent: number }): Outcome<VariancePart> {
  const { part, cells, at } = asked;
  const link = linkOf(part, cells);
  const ones = () => new Float64Array(cells.count).fill(1);
  switch (part.kind) {
    case 'between':
      return done(levelPart({ kind: 'between', parameter: { name: 'tau2', role: 'between' }, base: ones(), link }));
    case 'shared': {
      const name = `omega2: ${part.by.join(' × ')}`;
      return done(levelPart({ kind: 'shared', parameter: { name, role: 'shared' }, base: ones(), link }));
    }
    case 'matrix':
      return done(matrixPart(part, cells));
    case 'per-class':
      return done(classesOf({ part, cells, at }, link));
    case 'log-linear':
      return logLinearOf({ part, cells, at }, link);
    default: {
      const sampling = samplingOf(part, cells, at);
      if (!sampling.ok) return sampling;
      const lost = outOfRange({ part, sampling: sampling.value, cells, exponent: asked.exponent });
      return lost ? refuse('transform-undefined', lost, at) : done(shapedPart(sampling.value, link));
    }
  }
}

function linkOf(part: Part, cells: Cells): Link | null {
  if (part.kind === 'shared') return { kind: 'shared', group: groupsOfCells(part.by, cells) };
  const correlation: Correlation | null = 'correlation' in part ? part.correlation : null;
  if (correlation === null) return null;
  const group = groupsOfCells(correlation.by, cells);
  return correlation.kind === 'serial'
    ? { kind: 'serial', group, order: cells.numbers(correlation.order).values }
    : { kind: 'exchangeable', group };
}

function matrixPart(part: Extract<Part, { kind: 'matrix' }>, cells: Cells): VariancePart {
  const entries = cells.matrices.get(part.file);
  if (!entries) throw new RangeError(`the data stage did not read the matrix ${part.file}`);
  const freedom = freedomOf(part.freedom, (column) => Array.from(cells.numbers(column).values.high));
  return levelPart({
    kind: 'matrix',
    parameter: part.scale === 'free' ? { name: 'phi', role: 'scale' } : null,
    base: Float64Array.from({ length: cells.count }, (_, g) => entries[g * cells.count + g] as number),
    link: { kind: 'matrix', entries, inverted: freedom === null || freedom > cells.count },
  });
}

function classesOf({ part, cells }: Asked<Extract<Part, { kind: 'per-class' }>>, link: Link | null): VariancePart {
  const texts = cells.texts(part.column).map(composed);
  const classes = [...new Set(texts)].sort(byCodePoint);
  const places = new Map(classes.map((text, c) => [text, c]));
  return classPart({
    names: classes.map((text) => `phi: ${text}`),
    classOf: Int32Array.from(texts, (text) => places.get(text) as number),
    base: part.perSize ? sizesOf(cells).map((m) => 1 / m) : new Float64Array(cells.count).fill(1),
    link,
  });
}

function logLinearOf(
  { part, cells, at }: Asked<Extract<Part, { kind: 'log-linear' }>>,
  link: Link | null,
): Outcome<VariancePart> {
  const place = below(at, 'terms');
  const known = learnTerms({ terms: part.terms, intercept: true, cells, at: place });
  if (!known.ok) return known;
  const design = designOf(known.value, cells, place);
  if (!design.ok) return design;
  return done(
    logLinearPart({
      names: design.value.names.map((name) => `gamma: ${composed(name)}`),
      columns: design.value.columns.map(({ high }) => high),
      link,
    }),
  );
}

function samplingOf(part: Part, cells: Cells, at: string): Outcome<SamplingPart> {
  if (part.kind === 'constant') return done(plain('constant', 'free', new Float64Array(cells.count).fill(1)));
  if (part.kind === 'per-size')
    return done(
      plain(
        'per-size',
        'free',
        sizesOf(cells).map((m) => 1 / m),
      ),
    );
  if (part.kind === 'given') {
    if (!cells.error) throw new RangeError('errors are needed: the form of the plan was not checked');
    return done(
      plain(
        'given',
        part.scale,
        cells.error.map((s) => s * s),
      ),
    );
  }
  if (isCounted(part)) return done(plain(part.kind, part.scale, countedPart(part, cells).base));
  if (part.kind === 'size-power') return done(powers(part, sizesOf(cells), -1));
  if (part.kind !== 'proxy') throw new RangeError(`${part.kind} is no sampling part`);
  const { values, texts } = cells.numbers(part.column);
  const wrong = values.high.findIndex((z) => !(z > 0));
  if (wrong < 0) return done(powers(part, values.high, 1));
  const row = cells.rows[wrong] as number;
  const found = texts[wrong] as string;
  return refuse(
    'transform-undefined',
    { file: cells.plan.data.file, row, column: part.column, found, transform: 'log' },
    `${at}/column`,
  );
}

/** The first cell whose a_g is 0 or not finite. */
function outOfRange(of: {
  readonly part: Part;
  readonly sampling: SamplingPart;
  readonly cells: Cells;
  readonly exponent: number;
}): Troubles['transform-undefined'] | null {
  const { part, sampling, cells, exponent } = of;
  const wrong = sampling.at(exponent).findIndex((a) => !(a > 0 && a < Infinity));
  if (wrong < 0) return null;
  const { size, error, count, outcome } = cells.plan.roles;
  const delta = 'exponent' in part && typeof part.exponent === 'number' ? part.exponent : exponent;
  const [column, power] = isCounted(part)
    ? [count ?? outcome, -1]
    : part.kind === 'given'
      ? [error, 2]
      : part.kind === 'proxy'
        ? [part.column, delta]
        : [size, -delta];
  return {
    file: cells.plan.data.file,
    row: cells.rows[wrong] as number,
    column: column as string,
    found: cells.numbers(column as string).texts[wrong] as string,
    transform: `power ${power}`,
  };
}

function sizesOf(cells: Cells): Float64Array {
  if (!cells.effectiveSize) throw new RangeError('sizes are needed: the form of the plan was not checked');
  return cells.effectiveSize;
}

function plain(kind: SamplingPart['kind'], scale: 'fixed' | 'free', sampling: Float64Array): SamplingPart {
  return { kind, scale, at: () => sampling, slopeAt: null };
}

/**
 * base^(sign delta), each distinct base raised once; exponents 0 and 1 exact, so that they equal the constant and the per-size structure to the
 * last digit.
 */
function powers(
  part: { kind: 'size-power' | 'proxy'; exponent: number | 'estimate' },
  base: Float64Array,
  sign: 1 | -1,
): SamplingPart {
  const { kind, exponent } = part;
  const distinct = [...new Set(base)];
  const places = new Map(distinct.map((x, i) => [x, i]));
  const placeOf = Int32Array.from(base, (x) => places.get(x) as number);
  const logs = base.map(log);
  const at = (delta: number) => {
    if (delta === 0) return new Float64Array(base.length).fill(1);
    if (delta === 1) return sign === 1 ? base.slice() : base.map((x) => 1 / x);
    const powers = distinct.map((x) => pow(x, sign * delta));
    return Float64Array.from(placeOf, (i) => powers[i] as number);
  };
  if (exponent !== 'estimate') return plain(kind, 'free', at(exponent));
  return { kind, scale: 'free', at, slopeAt: (delta) => at(delta).map((a, g) => sign * (logs[g] as number) * a) };
}
