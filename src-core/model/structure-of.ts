import { log, pow } from '../numbers/elementary';
import { done, type Outcome, problem, refuse, refuseAll } from '../protocol/outcome';
import type { Part, Rival, Variance } from '../protocol/plan';
import type { Problem, Troubles } from '../protocol/problems';
import type { Cells } from '../table/cells';
import { joinParts, type SamplingPart, type Structure } from './structure';

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
 *     v_g = phi a_g + tau^2,  a_g: 1 | 1/m_g | s_g^2 | m_g^-delta | z_g^delta
 *
 * variance: one sampling part, at most one between part, as the form of the plan was checked; cells: with the roles that they need.
 * Refuses parts that this version does not fit and correlations (`not-available`, at their place), all together; a proxy that is not above 0
 * (`transform-undefined`, as its log would be), and a cell whose variance runs over or under (the same, naming the power).
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
  const absent = absentParts(parts, at);
  if (absent.length > 0) return refuseAll(absent);
  const index = parts.findIndex((part) => part.kind !== 'between');
  const part = parts[index];
  if (!part) throw new RangeError('no sampling part: the form of the plan was not checked');
  const sampling = samplingOf(part, cells, `${at}/parts/${index}`);
  if (!sampling.ok) return sampling;
  const lost = outOfRange({ part, sampling: sampling.value, cells, exponent: fixed['delta'] ?? 1 });
  if (lost) return refuse('transform-undefined', lost, `${at}/parts/${index}`);
  const place = parts.findIndex(({ kind }) => kind === 'between');
  const between = place < 0 ? 'none' : place < index ? 'first' : 'last';
  return done(joinParts({ cells: cells.count, sampling: sampling.value, between, fixed }));
}

const fitted: ReadonlySet<string> = new Set(['constant', 'per-size', 'given', 'size-power', 'proxy', 'between']);

/** The parts of a structure that this version does not fit, and its correlations (`not-available`, each at its place); at: pointer to the structure. */
export function absentParts(parts: readonly Part[], at: string): Problem[] {
  return parts.flatMap((part, i) => absentOf(part, `${at}/parts/${i}`));
}

function absentOf(part: Part, at: string): Problem[] {
  if (!fitted.has(part.kind)) return [problem('not-available', { what: part.kind }, at)];
  if (!('correlation' in part) || part.correlation === null) return [];
  return [problem('not-available', { what: part.correlation.kind }, `${at}/correlation`)];
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
  const { size, error } = cells.plan.roles;
  const delta = 'exponent' in part && typeof part.exponent === 'number' ? part.exponent : exponent;
  const [column, power] =
    part.kind === 'given' ? [error, 2] : part.kind === 'proxy' ? [part.column, delta] : [size, -delta];
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
