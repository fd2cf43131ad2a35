import { choleskyInPlace } from '../algebra/cholesky';
import { log } from '../numbers/elementary';

/** One block of Omega in a likelihood, in units of the roots of the middle variances: S = L L'. Rows: n of a given width, row after row. */
export interface LinkedBlock {
  /** ln det S. */
  readonly logDeterminant: number;
  /** L^-1 times rows, in place. */
  readonly whiten: (rows: Float64Array, width: number) => void;
  /** M_a = L^-1 (dS/dtheta_a) L^-T of each free parameter; null where it is 0. Made when asked for. */
  readonly slopes: () => readonly (LinkedSlope | null)[];
  /** tr(M_a M_b) of every pair: q x q, row after row. */
  readonly traces: () => Float64Array;
}

/** M_a of one block. */
export interface LinkedSlope {
  readonly trace: number;
  /** M_a times rows, as new rows or into those given, which may hold anything. */
  readonly times: (rows: Float64Array, width: number, into?: Float64Array) => Float64Array;
}

/**
 * A block by its dense Cholesky factor; null where it is not positive definite.
 *
 * matrix: n x n, made over into the factor; slopes: its derivatives by the free parameters, n x n or null, made over too; units: what each is counted
 * in; roots: of the middle variances, by cell.
 */
export function denseBlock(of: {
  readonly cells: Int32Array;
  readonly matrix: Float64Array;
  readonly slopes: () => readonly (Float64Array | null)[];
  readonly units: () => Float64Array;
  readonly roots: Float64Array;
}): LinkedBlock | null {
  const { cells, matrix, roots } = of;
  const n = cells.length;
  const factor = choleskyInPlace(scaled(matrix, { cells, roots, unit: 1 }), n);
  if (!factor) return null;
  let logDeterminant = 0;
  for (let i = 0; i < n; i++) logDeterminant += 2 * log(factor[i * n + i] as number);
  if (!(Math.abs(logDeterminant) < Infinity)) return null;
  let dense: readonly (Float64Array | null)[] | null = null;
  const denseSlopes = () =>
    (dense ??= of
      .slopes()
      .map(
        (slope, a) =>
          slope && betweenFactors(factor, scaled(slope, { cells, roots, unit: of.units()[a] as number }), n),
      ));
  let made: readonly (LinkedSlope | null)[] | null = null;
  return {
    logDeterminant,
    whiten: (rows, width) => forwardRows(factor, rows, width),
    slopes: () => (made ??= denseSlopes().map((slope) => slope && slopeOf(slope, n))),
    traces: () => tracesOf(denseSlopes(), traceOfProduct),
  };
}

function slopeOf(slope: Float64Array, n: number): LinkedSlope {
  return {
    trace: traceOf(slope, n),
    times: (rows, width, into = new Float64Array(rows.length)) => product(slope, { rows, width, into }),
  };
}

/** Every entry times the unit, over the roots of its two cells; in place. */
function scaled(
  matrix: Float64Array,
  { cells, roots, unit }: { readonly cells: Int32Array; readonly roots: Float64Array; readonly unit: number },
): Float64Array {
  const n = cells.length;
  for (let i = 0; i < n; i++) {
    const root = roots[cells[i] as number] as number;
    for (let j = 0; j < n; j++)
      matrix[i * n + j] = ((matrix[i * n + j] as number) * unit) / root / (roots[cells[j] as number] as number);
  }
  return matrix;
}

/** L^-1 S L^-T, symmetric; in place of S. */
function betweenFactors(factor: Float64Array, matrix: Float64Array, n: number): Float64Array {
  forwardRows(factor, matrix, n);
  for (let i = 0; i < n; i++)
    for (let j = i + 1; j < n; j++) {
      const above = matrix[i * n + j] as number;
      matrix[i * n + j] = matrix[j * n + i] as number;
      matrix[j * n + i] = above;
    }
  forwardRows(factor, matrix, n);
  return matrix;
}

/** Solves L Z = rows in place: n rows of a given width. Four rows are taken off at a time, in their order. */
function forwardRows(factor: Float64Array, rows: Float64Array, width: number): void {
  const n = rows.length / width;
  for (let i = 0; i < n; i++) {
    const own = i * width;
    let j = 0;
    for (; j + 3 < i; j += 4) {
      const at = i * n + j;
      const [a, b] = [factor[at] as number, factor[at + 1] as number];
      const [d, e] = [factor[at + 2] as number, factor[at + 3] as number];
      if (a === 0 && b === 0 && d === 0 && e === 0) continue;
      const from = j * width;
      for (let c = 0; c < width; c++) {
        let left = (rows[own + c] as number) - a * (rows[from + c] as number);
        left -= b * (rows[from + width + c] as number);
        left -= d * (rows[from + 2 * width + c] as number);
        rows[own + c] = left - e * (rows[from + 3 * width + c] as number);
      }
    }
    for (; j < i; j++) {
      const share = factor[i * n + j] as number;
      if (share === 0) continue;
      const other = j * width;
      for (let c = 0; c < width; c++) rows[own + c] = (rows[own + c] as number) - share * (rows[other + c] as number);
    }
    const pivot = factor[i * n + i] as number;
    for (let c = 0; c < width; c++) rows[own + c] = (rows[own + c] as number) / pivot;
  }
}

function product(
  matrix: Float64Array,
  { rows, width, into }: { readonly rows: Float64Array; readonly width: number; readonly into: Float64Array },
): Float64Array {
  const n = rows.length / width;
  into.fill(0);
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) {
      const share = matrix[i * n + j] as number;
      for (let c = 0; c < width; c++)
        into[i * width + c] = (into[i * width + c] as number) + share * (rows[j * width + c] as number);
    }
  return into;
}

function traceOf(matrix: Float64Array, n: number): number {
  let trace = 0;
  for (let i = 0; i < n; i++) trace += matrix[i * n + i] as number;
  return trace;
}

/** tr(M_a M_b) of every pair of slopes, q x q, row after row; 0 where one of them is. */
export function tracesOf<Slope>(
  slopes: readonly (Slope | null)[],
  traceOfPair: (first: Slope, second: Slope) => number,
): Float64Array {
  const q = slopes.length;
  const traces = new Float64Array(q * q);
  for (const [a, first] of slopes.entries())
    for (let b = 0; b <= a; b++) {
      const second = slopes[b];
      if (!first || !second) continue;
      const trace = traceOfPair(first, second);
      traces[a * q + b] = trace;
      traces[b * q + a] = trace;
    }
  return traces;
}

function traceOfProduct(first: Float64Array, second: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < first.length; i++) sum += (first[i] as number) * (second[i] as number);
  return sum;
}
