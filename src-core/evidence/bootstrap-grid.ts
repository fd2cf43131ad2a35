import { choleskyOf, forwardInPlace } from '../algebra/cholesky';
import type { Covariance } from '../algebra/covariance';
import { reflectAll } from '../algebra/householder';
import { spanOf } from '../algebra/orthonormal';
import type { Fitted } from '../estimate/fitted';
import { growsTogether } from '../estimate/search-space';
import { freeParameters, omegaAt, type Parameter, type Structure } from '../model/structure';
import { log, pow } from '../numbers/elementary';
import { mean, plainDot, plainSquares } from '../numbers/sums';
import { solvedUnder } from './frame';

/** Points along each variance beside 0, by how many variances and correlations there are: 1, 2, 3. */
const POINTS = [24, 12, 7];
/** They lie between these multiples of the mean sampling variance, evenly on the logarithm. */
const LEAST = 0.004;
const MOST = 12;
/** Work that preparing the grid may take. */
const MOST_PREPARED = 1e9;
/** Correlations tried, in the share of the way from 0 to the open end of their range. */
const CORRELATIONS = [0, 0.25, 0.5, 0.75, 0.92];

/** A likelihood ratio looked at on a fixed grid of variances: the same for the data and for every draw. */
export interface GridRatio {
  readonly of: (response: Float64Array) => number;
  /** Whether the ratio is at least that, without looking further once it is. */
  readonly reaches: (response: Float64Array, ratio: number) => boolean;
  /** Work of one look, in multiplications. */
  readonly work: number;
}

/**
 * 2 (l on the grid - l on the part of it where `zero` is 0), a common factor at its best at every point.
 *
 * For structures whose unknowns are a scale and up to three variances and correlations; null for others, and where the grid holds a covariance that cannot
 * be inverted. What depends on a point alone is prepared once, so that a draw costs points times cells and blocks.
 *
 * sampling: a mean sampling variance, in whose multiples the grid is laid; theta: fixed values, and the scale that stays where no factor is free.
 */
export function gridRatioOf(of: {
  readonly fitted: Fitted;
  readonly structure: Structure;
  readonly zero: readonly string[];
  readonly restricted: boolean;
  readonly theta: Float64Array;
  readonly cancelled?: (() => boolean) | undefined;
}): GridRatio | null {
  const { fitted, structure, zero, restricted, theta } = of;
  const free = freeParameters(structure).map((i) => structure.parameters[i] as Parameter);
  const scale = structure.scaleAt >= 0 && structure.parameters[structure.scaleAt]?.fixed === null;
  const unknown = free.filter(({ role }) => role !== 'scale');
  const able = unknown.every(({ role }) => role === 'between' || role === 'shared' || role === 'correlation');
  const freeScale = scale && growsTogether(structure);
  if (!able || unknown.length === 0 || unknown.length > POINTS.length || (scale && !freeScale)) return null;
  const level = mean(structure.samplingAt(theta));
  if (!(level > 0)) return null;
  const points = pointsOf({ structure, unknown, theta, level });
  const cubes = structure.links?.blocks.reduce((sum, { length }) => sum + length * length * length, 0) ?? 0;
  if (points.length * cubes > MOST_PREPARED) return null;
  const { basis } = solvedUnder(fitted, new Float64Array(structure.count).fill(1));
  const looks = points.map((point) =>
    of.cancelled?.() ? null : lookAt(omegaAt(structure, point), { basis, restricted, freeScale }),
  );
  if (!looks.every((look) => look !== null)) return null;
  const gone = structure.parameters.flatMap(({ name }, i) => (zero.includes(name) ? [i] : []));
  const isNone = (p: number) => gone.every((i) => (points[p] as Float64Array)[i] === 0);
  const withNone = looks.filter((_, p) => isNone(p));
  const others = looks.filter((_, p) => !isNone(p));
  const blocks = structure.links?.blocks.reduce((sum, { length }) => sum + length * length, 0) ?? 0;
  return {
    work: points.length * (blocks + 2 * structure.count * (basis.length + 1)),
    of: (response) => {
      const none = highestOf(response, withNone);
      return Math.max(none, highestOf(response, others)) - none;
    },
    reaches: (response, ratio) => {
      const none = highestOf(response, withNone);
      return 0 >= ratio || others.some((look) => look(response) - none >= ratio);
    },
  };
}

type Look = (response: Float64Array) => number;

function highestOf(response: Float64Array, looks: readonly Look[]): number {
  let highest = Number.NEGATIVE_INFINITY;
  for (const look of looks) highest = Math.max(highest, look(response));
  return highest;
}

/**
 * Twice the log-likelihood of a response at one Omega, up to a constant; null where Omega cannot be factored.
 *
 *     - f ln(r'Omega^-1 r / f) - f - ln det Omega [- ln |X'Omega^-1 X|]   a factor free, f = G [- k];   - r'Omega^-1 r - ...   known
 */
function lookAt(
  { diagonal, blocks }: Covariance,
  of: { readonly basis: readonly Float64Array[]; readonly restricted: boolean; readonly freeScale: boolean },
): ((response: Float64Array) => number) | null {
  const count = diagonal.length;
  const inBlock = new Uint8Array(count);
  let offset = 0;
  const factors: { readonly cells: Int32Array; readonly factor: Float64Array; readonly part: Float64Array }[] = [];
  for (const { cells, matrix } of blocks ?? []) {
    const factor = choleskyOf(matrix, cells.length);
    if (!factor) return null;
    for (const [i, g] of cells.entries()) {
      inBlock[g] = 1;
      offset += 2 * log(factor[i * cells.length + i] as number);
    }
    factors.push({ cells, factor, part: new Float64Array(cells.length) });
  }
  const alone = Int32Array.from([...diagonal.keys()].filter((g) => inBlock[g] === 0));
  const roots = diagonal.map(Math.sqrt);
  for (const g of alone) {
    if (!((diagonal[g] as number) > 0)) return null;
    offset += log(diagonal[g] as number);
  }
  const whitened = (x: Float64Array, into: Float64Array): Float64Array => {
    for (const g of alone) into[g] = (x[g] as number) / (roots[g] as number);
    for (const { cells, factor, part } of factors) {
      for (let i = 0; i < cells.length; i++) part[i] = x[cells[i] as number] as number;
      forwardInPlace(factor, part, cells.length);
      for (let i = 0; i < cells.length; i++) into[cells[i] as number] = part[i] as number;
    }
    return into;
  };
  const moved = of.basis.map((column) => whitened(column, new Float64Array(count)));
  const span = spanOf(moved);
  if (of.restricted)
    for (const [j, column] of reflectAll(moved).triangle.entries()) offset += 2 * log(Math.abs(column[j] as number));
  const freedom = count - (of.restricted ? of.basis.length : 0);
  const work = new Float64Array(count);
  return (response) => {
    whitened(response, work);
    let left = plainSquares(work);
    for (const vector of span) {
      const share = plainDot(vector, work);
      left -= share * share;
    }
    return -offset - (of.freeScale ? freedom * log(left / freedom) + freedom : left);
  };
}

/** Every combination of the unknowns' values, the others at theta. A correlation of a part at 0 stands at its first value alone. */
function pointsOf(of: {
  readonly structure: Structure;
  readonly unknown: readonly Parameter[];
  readonly theta: Float64Array;
  readonly level: number;
}): Float64Array[] {
  const { structure, unknown, theta, level } = of;
  const count = POINTS[unknown.length - 1] as number;
  const step = pow(MOST / LEAST, 1 / (count - 1));
  const sizes = [0, ...Array.from({ length: count }, (_, i) => level * LEAST * pow(step, i))];
  let points = [theta];
  for (const parameter of unknown) {
    const i = structure.parameters.indexOf(parameter);
    const values = parameter.role === 'correlation' ? CORRELATIONS.map((share) => share * parameter.high) : sizes;
    points = points.flatMap((point) => values.map((value) => point.with(i, value)));
  }
  return points.filter((point) => !isRepeat(structure, point));
}

function isRepeat({ parts, parameters }: Structure, point: Float64Array): boolean {
  return parts.some(({ at, part, rhoAt }) => {
    const vanished = part.parameters.length > 0 && part.parameters.every((_, i) => point[at + i] === 0);
    return rhoAt >= 0 && parameters[rhoAt]?.fixed === null && vanished && point[rhoAt] !== 0;
  });
}
