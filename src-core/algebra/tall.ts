import { chunksOf, paddedTo } from '../kernels/chunks';
import { scratchOf } from '../kernels/compiled';
import { allOf, FIRST_PLACE, type Room, roomFor } from '../kernels/kernels';
import type { Decimals } from '../numbers/decimals';

/** Between these a column or a root of a variance is worked on as it is: no square runs over or under, no half of a product is lost. */
const LARGEST = 1.2676506002282294e30; // 2^100
const SMALLEST = 1 / LARGEST;
/** Doubles between one column and the next beyond its rows: columns must not all lie on the same lines of the cache. */
const APART = 72;

/** A least-squares problem of many rows. variances: null for equal ones; powers of two outside the range above are not taken. */
export interface TallProblem {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly variances: Float64Array | null;
}

/** Where the parts of a tall problem lie in the kernels' memory. */
export interface TallPlaces {
  readonly room: Room;
  readonly cells: number;
  readonly rows: number;
  readonly k: number;
  readonly chunks: number;
  readonly stride: number;
  readonly columns: number;
  /** 1 / root v, and 1 / v in double-double; 0 where variances are equal. */
  readonly roots: number;
  readonly factors: number;
  readonly rests: number;
  readonly lows: number;
  readonly flags: number;
  readonly high: number;
  readonly low: number;
  readonly whitened: number;
  readonly triangles: number;
  readonly small: number;
  readonly block: number;
  /** After all of these. */
  readonly end: number;
}

/** R of the whitened design, and Q'y: k columns of k, the upper triangle filled. */
export interface TallReduced {
  readonly places: TallPlaces;
  readonly triangle: readonly Float64Array[];
  readonly along: Float64Array;
}

/** Copies a problem into the kernels' memory. */
export function placeTall(problem: TallProblem): TallPlaces {
  const { columns, y, variances } = problem;
  const cells = y.high.length;
  const all = [...columns, y];
  const flags = all.map(({ low }) => hasAny(low));
  const laid = layOut(cells, columns.length, { weighted: variances !== null, lows: flags.includes(true) });
  const room = roomFor(laid.end + roomOfBasis(laid));
  const places: TallPlaces = { ...laid, room };
  const { m } = room;
  const { stride, rows } = places;
  for (const [j, column] of all.entries()) {
    put(m, column.high, places.columns + j * stride, rows);
    if (flags[j]) put(m, column.low, places.lows + j * stride, rows);
    m[places.flags + j] = flags[j] ? 1 : 0;
  }
  if (variances) {
    put(m, variances, places.high, rows, 1);
    room.run.weights({ v: places.high, roots: places.roots, high: places.factors, low: places.rests }, allOf(rows));
  }
  return places;
}

/** Doubles behind the places that the basis takes: its columns, a small matrix, and inner products of every chunk. */
function roomOfBasis({ k, stride, chunks }: Pick<TallPlaces, 'k' | 'stride' | 'chunks'>): number {
  const wide = 4 * Math.ceil(k / 4);
  return wide * (k + stride + chunks * wide);
}

function hasAny(values: Float64Array): boolean {
  for (let g = 0; g < values.length; g++) if (values[g] !== 0) return true;
  return false;
}

function put(m: Float64Array, values: Float64Array, at: number, rows: number, pad = 0): void {
  m.set(values, at);
  m.fill(pad, at + values.length, at + rows);
}

function layOut(
  cells: number,
  k: number,
  has: { readonly weighted: boolean; readonly lows: boolean },
): Omit<TallPlaces, 'room'> {
  const rows = paddedTo(cells);
  const chunks = chunksOf(rows);
  const stride = rows + APART;
  let end = FIRST_PLACE;
  const take = (count: number) => {
    const at = end;
    end += Math.ceil(count / 8) * 8;
    return at;
  };
  const weights = () => (has.weighted ? take(rows) : 0);
  const places = {
    ...{ cells, rows, k, chunks, stride },
    columns: take((k + 1) * stride),
    roots: weights(),
    factors: weights(),
    rests: weights(),
    lows: has.lows ? take((k + 1) * stride) : 0,
    flags: take(k + 1),
    high: take(rows),
    low: take(rows),
    whitened: take(rows),
    triangles: take(chunks * (k + 1) * (k + 2)),
    small: take(chunks * 2 * (k + 1) + 4 * (k + 1)),
    block: take(2 * scratchOf(k)),
  };
  return { ...places, end };
}

/**
 * The triangle of a tall whitened design, by reflections of blocks of rows under a running triangle.
 *
 * Null where a column or the response is so large, small or empty that it has to be scaled first.
 *
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.2.
 */
export function reduceTall(places: TallPlaces): TallReduced | null {
  const { room, rows, k, chunks, columns, stride, triangles, block } = places;
  const { m, run } = room;
  const reduction = { columns, stride, k, factors: places.roots, triangles, block };
  run.reduce(reduction, allOf(rows));
  run.joinTriangles(reduction, chunks);
  const pitch = k + 2;
  const largest = m.subarray(triangles + k * pitch, triangles + k * pitch + k + 1);
  const fits = largest.every((size, j) => (size > SMALLEST && size < LARGEST) || (j === k && size === 0));
  if (!fits) return null;
  const triangle = Array.from({ length: k }, (_, j) => {
    const column = new Float64Array(k);
    for (let i = 0; i <= j; i++) column[i] = m[triangles + i * pitch + j] as number;
    return column;
  });
  const along = Float64Array.from({ length: k }, (_, i) => m[triangles + i * pitch + k] as number);
  return { places, triangle, along };
}
