import type { Fitted } from '../estimate/fitted';
import { normalUpperQuantile } from '../numbers/distributions';
import { findRoot, maximise1d } from '../numbers/roots';
import type { Plan } from '../protocol/plan';
import type { Coefficient, ExponentSupport, ScanPoint } from '../protocol/result';
import type { Cells } from '../table/cells';
import { type ExponentFit, exponentFit, sizeLogsOf } from './exponent-fit';
import { judgeOf } from './judge';

const POINTS = 31;
const HIGHEST = 1.5;
/** Points on which a range over the supported exponents is looked for before it is refined. */
const DENSE = 13;
const FINE = 1e-10;
/** How near, as a share of the stretch, a climb comes to its top: the height is then right to about the square of this. */
const CLIMB = 1e-3;

export interface ExponentScan {
  readonly scan: ScanPoint[];
  readonly support: ExponentSupport | null;
  /** The coefficients at the ends of the support. */
  readonly ends: readonly { readonly delta: number; readonly coefficients: readonly Coefficient[] }[];
}

/**
 * Every coefficient as the size exponent runs from 0 to 1.5, and the exponents that the data support.
 *
 *     v_g = phi m_g^-delta;  supported: 2 (l(best) - l(delta)) <= the chi-square quantile on 1 at the plan's level
 *
 * l is the method's own likelihood, the full one for least squares, with the scale profiled out; its ends are solved for, not read off the grid.
 * A term's range runs over the whole support, and so does the statement that its interval excludes zero. Intervals are the plan's robust ones
 * where it asks for those, else model-based with t on G - k.
 * Nothing where no size stands, where all sizes are equal, and where no residual is left to judge by.
 *
 * Source: Carroll & Ruppert 1988; METHODS of the program, 6.
 */
export function exponentScanOf(of: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
}): ExponentScan {
  const { fitted, cells, plan } = of;
  const sizes = cells.effectiveSize;
  const nothing: ExponentScan = { scan: [], support: null, ends: [] };
  if (!sizes || sizes.every((m) => m === sizes[0])) return nothing;
  const course = courseOf({ fitted, sizes, cells, plan });
  if (!course.at(0)) return nothing;
  const scan: ScanPoint[] = [];
  for (let i = 0; i < POINTS; i++) {
    const point = course.at(i / 20);
    if (!point) return nothing;
    const { delta, logLikelihood, restrictedLogLikelihood } = point;
    scan.push({ delta, coefficients: [...course.coefficients(delta)], logLikelihood, restrictedLogLikelihood });
  }
  const support = supportOf({ course, scan, plan });
  const ends = support
    ? [support.low, support.high].map((delta) => ({ delta, coefficients: course.coefficients(delta) }))
    : [];
  return { scan, support, ends };
}

/** Fits along delta, each computed once. */
interface Course {
  readonly at: (delta: number) => ExponentFit | null;
  readonly coefficients: (delta: number) => readonly Coefficient[];
  readonly likelihood: (delta: number) => number;
  readonly slope: (delta: number) => number;
}

function courseOf(of: { fitted: Fitted; sizes: Float64Array; cells: Cells; plan: Plan }): Course {
  const known = new Map<number, ExponentFit | null>();
  const told = new Map<number, readonly Coefficient[]>();
  const sizes = sizeLogsOf(of.sizes);
  const restricted = of.fitted.estimate.method === 'restricted';
  const judge = judgeOf(of.cells, scanPlan(of.plan));
  const at = (delta: number): ExponentFit | null => {
    const found = known.has(delta) ? known.get(delta) : exponentFit({ fitted: of.fitted, sizes, delta });
    known.set(delta, found ?? null);
    return found ?? null;
  };
  return {
    at,
    coefficients: (delta) => {
      const point = at(delta);
      const found = told.get(delta) ?? (point && judge(point.fitted(), null)) ?? [];
      told.set(delta, found);
      return found;
    },
    likelihood: (delta) => {
      const point = at(delta);
      if (!point) return Number.NaN;
      return restricted ? point.restrictedLogLikelihood : point.logLikelihood;
    },
    slope: (delta) => {
      const point = at(delta);
      if (!point) return Number.NaN;
      return restricted ? point.restrictedSlope : point.slope;
    },
  };
}

/** The plan under which a point of the scan is judged: its own structure, no target but it. */
function scanPlan(plan: Plan): Plan {
  const { inference } = plan;
  return {
    ...plan,
    variance: { parts: [{ kind: 'size-power', exponent: 1, correlation: null }], fixed: {} },
    target: 'structure',
    inference: inference.kind === 'robust' ? inference : { kind: 'model', level: inference.level },
  };
}

function supportOf(of: { course: Course; scan: readonly ScanPoint[]; plan: Plan }): ExponentSupport | null {
  const { course, scan, plan } = of;
  const deltas = scan.map(({ delta }) => delta);
  const best = bestOf(course, deltas);
  const reach = normalUpperQuantile((1 - plan.inference.level) / 2);
  const floor = course.likelihood(best) - (reach * reach) / 2;
  const above = (delta: number): number => course.likelihood(delta) - floor;
  const edge = (from: number, inner: number): number =>
    findRoot({ of: above, low: from, high: inner, tolerance: FINE }) ?? inner;
  // From outside in: the support reaches to the outermost exponents that the likelihood does not rule out.
  const lowest = deltas.findIndex((delta) => above(delta) >= 0);
  const highest = deltas.findLastIndex((delta) => above(delta) >= 0);
  const low = lowest === 0 ? 0 : edge(outside(deltas, best, lowest, -1), inside(deltas, best, lowest));
  const high =
    highest === deltas.length - 1 ? HIGHEST : edge(outside(deltas, best, highest, 1), inside(deltas, best, highest));
  const cut = { low: lowest === 0, high: highest === deltas.length - 1 };
  return {
    best,
    low,
    high,
    edge: cut.low && cut.high ? 'both' : cut.low ? 'low' : cut.high ? 'high' : null,
    ranges: rangesOf(course, low, high),
  };
}

/** The grid point inside the support, or the best exponent where no grid point lies in it. */
function inside(deltas: readonly number[], best: number, place: number): number {
  return place < 0 ? best : (deltas[place] as number);
}

/** The grid point next to it on the outer side. */
function outside(deltas: readonly number[], best: number, place: number, side: -1 | 1): number {
  if (place >= 0) return deltas[place + side] as number;
  const beyond = side < 0 ? deltas.findLast((delta) => delta < best) : deltas.find((delta) => delta > best);
  return beyond ?? best;
}

/** Where the likelihood is highest between 0 and 1.5: the slope's root beside the highest grid point, or the end that it climbs to. */
function bestOf(course: Course, deltas: readonly number[]): number {
  const place = deltas.reduce(
    (best, delta, i) => (course.likelihood(delta) > course.likelihood(deltas[best] as number) ? i : best),
    0,
  );
  const top = deltas[place] as number;
  const left = deltas[place - 1] ?? top;
  const right = deltas[place + 1] ?? top;
  return findRoot({ of: course.slope, low: left, high: right, tolerance: FINE }) ?? top;
}

function rangesOf(course: Course, low: number, high: number): ExponentSupport['ranges'] {
  const points = Array.from({ length: DENSE }, (_, i) =>
    i === DENSE - 1 ? high : low + ((high - low) * i) / (DENSE - 1),
  );
  return course.coefficients(low).map(({ term }, j) => {
    const own = (delta: number): Coefficient | undefined => course.coefficients(delta)[j];
    const estimate = (delta: number): number => own(delta)?.estimate ?? Number.NaN;
    const largest = highestOver(estimate, points);
    const smallest = -highestOver((delta) => -estimate(delta), points);
    // How far the interval stays from zero, on the side on which the estimate lies at the low end.
    const sign = estimate(low) < 0 ? -1 : 1;
    const margin = (delta: number): number => {
      const bound = sign > 0 ? own(delta)?.low : own(delta)?.high;
      return bound === null || bound === undefined ? Number.NEGATIVE_INFINITY : sign * bound;
    };
    return { term, low: smallest, high: largest, excludesZero: staysAboveZero(margin, points) };
  });
}

/** The highest value over a stretch: the highest point of a dense row, climbed from where it lies inside. */
function highestOver(of: (x: number) => number, points: readonly number[]): number {
  const values = points.map(of);
  const place = values.reduce((best, value, i) => (value > (values[best] as number) ? i : best), 0);
  const top = values[place] as number;
  const left = points[place - 1];
  const right = points[place + 1];
  if (left === undefined || right === undefined || !(top < Infinity)) return top;
  return Math.max(top, maximise1d({ of, low: left, high: right, tolerance: CLIMB * (right - left) }).value);
}

/** Whether a function stays above 0 over a stretch; between its lowest point and the next ones it is followed where it could still dip that far. */
function staysAboveZero(of: (x: number) => number, points: readonly number[]): boolean {
  const values = points.map(of);
  const place = values.reduce((least, value, i) => (value < (values[least] as number) ? i : least), 0);
  const lowest = values[place] as number;
  const beside = Math.max(values[place - 1] ?? lowest, values[place + 1] ?? lowest);
  if (!(lowest > 0)) return false;
  return beside - lowest < lowest || -highestOver((x) => -of(x), points) > 0;
}
