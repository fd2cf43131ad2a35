import { normalUpperQuantile } from '../numbers/distributions';
import { findRoot, maximise1d } from '../numbers/roots';
import type { Coefficient, ExponentSupport, ScanPoint } from '../protocol/result';
import type { ExponentFit } from './exponent-fit';

const HIGHEST = 1.5;
/** Points on which a range over the supported exponents is looked for before it is refined. */
const DENSE = 13;
const FINE = 1e-10;
/** How near, as a share of the stretch, a climb comes to its top: the height is then right to about the square of this. */
const CLIMB = 1e-3;

/** Fits along delta, each computed once. */
export interface Course {
  readonly at: (delta: number) => ExponentFit | null;
  readonly coefficients: (delta: number) => readonly Coefficient[];
  readonly likelihood: (delta: number) => number;
  readonly slope: (delta: number) => number;
}

/**
 * The exponents that the data support, and each coefficient's range over them.
 *
 * scan: the grid, in rising order; level: of the intervals. Ends are solved for between grid points; the edge says where 0 or 1.5 cuts them.
 */
export function supportOf(of: {
  readonly course: Course;
  readonly scan: readonly ScanPoint[];
  readonly level: number;
}): ExponentSupport {
  const { course, scan, level } = of;
  const deltas = scan.map(({ delta }) => delta);
  const best = bestOf(course, deltas);
  const reach = normalUpperQuantile((1 - level) / 2);
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
