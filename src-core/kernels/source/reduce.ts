// Tall columns reduced to their triangle: blocks of rows, one after another, under a running triangle (see the twin for the formulas).
import { dot, dotsOfFour, scale, takeFour, takeOne, weigh } from './sums';

/** Rows that are reduced at once, and rows of a chunk: the unit of work, whatever the number of threads. */
export const BLOCK: i32 = 256;
export const CHUNK: i32 = 8192;

// A few numbers of the thread's own: each thread has an instance of its own, and says where.
let taus: usize = 0;
let shares: usize = 0;
let corner: usize = 0;

/** Where this instance keeps its few numbers, 256 bytes. */
export function settleAt(place: usize): void {
  taus = place;
  shares = place + 32;
  corner = place + 96;
}

// @ts-ignore: decorator
@inline
export function eightPlaces(): usize {
  return shares;
}

// @ts-ignore: decorator
@inline
function corners(p: i32, q: i32): usize {
  return corner + ((<usize>((p << 2) + q)) << 3);
}

/** Reduces a block of `rows` rows, columns `rows` apart in `block` (k, the response, one of zeros), into the triangle: k rows of k + 2. */
function reduceBlock(triangle: usize, block: usize, rows: i32, k: i32): void {
  const stride = (<usize>rows) << 3;
  const pitch = (<usize>(k + 2)) << 3;
  for (let j = 0; j < k; j += 4) {
    const m = min<i32>(4, k - j);
    const first = block + <usize>j * stride;
    for (let p = 0; p < m; p++) {
      const mirror = first + <usize>p * stride;
      const row = triangle + <usize>(j + p) * pitch;
      const tau = makeMirror(mirror, rows, row + ((<usize>(j + p)) << 3));
      store<f64>(taus + ((<usize>p) << 3), tau);
      for (let c = j + p + 1; c < j + m; c++)
        reflect(mirror, block + <usize>c * stride, rows, tau, row + ((<usize>c) << 3));
      if (m < 4) reflect(mirror, block + <usize>k * stride, rows, tau, row + ((<usize>k) << 3));
    }
    if (m < 4) continue;
    joinMirrors(first, stride, rows);
    for (let c = j + 4; c <= k; c += 2)
      reflectFour(first, stride, rows, block + <usize>c * stride, triangle + <usize>j * pitch + ((<usize>c) << 3), pitch);
  }
}

function makeMirror(column: usize, rows: i32, at: usize): f64 {
  const squares = dot(column, column, rows);
  if (squares == 0) {
    memory.fill(column, 0, (<usize>rows) << 3);
    return 0;
  }
  const first = load<f64>(at);
  const length = sqrt<f64>(first * first + squares);
  const arrives = first < 0 ? length : -length;
  const turned = first - arrives;
  scale(column, rows, 1 / turned);
  store<f64>(at, arrives);
  return -turned / arrives;
}

function reflect(mirror: usize, column: usize, rows: i32, tau: f64, at: usize): void {
  const share = tau * (load<f64>(at) + dot(mirror, column, rows));
  store<f64>(at, load<f64>(at) - share);
  takeOne(mirror, column, rows, share);
}

/** The upper triangle that joins four mirrors to one step. */
function joinMirrors(first: usize, stride: usize, rows: i32): void {
  for (let q = 0; q < 4; q++) {
    const tau = load<f64>(taus + ((<usize>q) << 3));
    store<f64>(corners(q, q), tau);
    for (let p = 0; p < q; p++)
      store<f64>(shares + ((<usize>p) << 3), dot(first + <usize>p * stride, first + <usize>q * stride, rows));
    for (let p = 0; p < q; p++) {
      let sum: f64 = 0;
      for (let r = p; r < q; r++) sum += load<f64>(corners(p, r)) * load<f64>(shares + ((<usize>r) << 3));
      store<f64>(corners(p, q), -tau * sum);
    }
  }
}

function reflectFour(first: usize, stride: usize, rows: i32, column: usize, at: usize, pitch: usize): void {
  dotsOfFour(first, stride, column, column + stride, rows, shares);
  for (let side: usize = 0; side < 2; side++) {
    const own = shares + side * 32;
    const top = at + side * 8;
    for (let p: usize = 0; p < 4; p++) store<f64>(own + p * 8, load<f64>(own + p * 8) + load<f64>(top + p * pitch));
    for (let q = 3; q >= 0; q--) {
      let sum: f64 = 0;
      for (let p = 0; p <= q; p++) sum += load<f64>(corners(p, q)) * load<f64>(own + ((<usize>p) << 3));
      store<f64>(own + ((<usize>q) << 3), sum);
      const place = top + <usize>q * pitch;
      store<f64>(place, load<f64>(place) - sum);
    }
  }
  takeFour(first, stride, column, column + stride, rows, shares);
}

/** The triangle of every chunk from one to another, and the largest |x| of each of its columns (pitch k + 2, behind the triangle's k rows). */
export function reduceChunks(
  columns: usize,
  stride: usize,
  k: i32,
  factors: usize,
  triangles: usize,
  block: usize,
  rows: i32,
  from: i32,
  to: i32,
): void {
  const pitch = (<usize>(k + 2)) << 3;
  const size = pitch * <usize>(k + 1);
  memory.fill(block + (<usize>((k + 1) * BLOCK) << 3), 0, (<usize>BLOCK) << 3);
  for (let chunk = from; chunk < to; chunk++) {
    const triangle = triangles + <usize>chunk * size;
    memory.fill(triangle, 0, size);
    const largest = triangle + <usize>k * pitch;
    const end = min<i32>(rows, (chunk + 1) * CHUNK);
    for (let row = chunk * CHUNK; row < end; row += BLOCK) {
      const at = (<usize>row) << 3;
      for (let c = 0; c <= k; c++) {
        const here = largest + ((<usize>c) << 3);
        const found = weigh(
          columns + <usize>c * stride + at,
          factors == 0 ? 0 : factors + at,
          BLOCK,
          block + (<usize>(c * BLOCK) << 3),
        );
        store<f64>(here, max<f64>(load<f64>(here), found));
      }
      reduceBlock(triangle, block, BLOCK, k);
    }
  }
}

/** One triangle of all chunks, in their order, and the largest of the largest; block: room for k rounded up to 8 rows of k + 2. */
export function joinTriangles(triangles: usize, count: i32, k: i32, block: usize): void {
  const pitch = (<usize>(k + 2)) << 3;
  const size = pitch * <usize>(k + 1);
  const rows = (k + 7) & ~7;
  for (let chunk = 1; chunk < count; chunk++) {
    const triangle = triangles + <usize>chunk * size;
    memory.fill(block, 0, (<usize>(rows * (k + 2))) << 3);
    for (let i = 0; i < k; i++)
      for (let c = i; c <= k; c++)
        store<f64>(
          block + (<usize>(c * rows + i) << 3),
          load<f64>(triangle + <usize>i * pitch + ((<usize>c) << 3)),
        );
    reduceBlock(triangles, block, rows, k);
    for (let c = 0; c <= k; c++) {
      const at = <usize>k * pitch + ((<usize>c) << 3);
      store<f64>(triangles + at, max<f64>(load<f64>(triangles + at), load<f64>(triangle + at)));
    }
  }
}

/**
 * The triangle of each group of rows from one to another, gathered out of k columns stride apart: k + 1 rows of k + 2 a group, the column of the
 * response zeros.
 *
 * order: the rows' places, group by group; starts: where each group begins in it, and its end; both as doubles. block: as for `reduceChunks`.
 */
export function reduceGroups(
  columns: usize,
  stride: usize,
  k: i32,
  order: usize,
  starts: usize,
  triangles: usize,
  block: usize,
  from: i32,
  to: i32,
): void {
  const size = (<usize>((k + 1) * (k + 2))) << 3;
  for (let group = from; group < to; group++) {
    const triangle = triangles + <usize>group * size;
    memory.fill(triangle, 0, size);
    const first = <i32>load<f64>(starts + ((<usize>group) << 3));
    const end = <i32>load<f64>(starts + ((<usize>group) << 3), 8);
    for (let row = first; row < end; row += BLOCK) {
      const count = min<i32>(BLOCK, end - row);
      const rows = (count + 7) & ~7;
      memory.fill(block, 0, (<usize>(rows * (k + 2))) << 3);
      for (let c = 0; c < k; c++) {
        const column = columns + <usize>c * stride;
        const into = block + (<usize>(c * rows) << 3);
        for (let i = 0; i < count; i++) {
          const place = <usize>load<f64>(order + ((<usize>(row + i)) << 3));
          store<f64>(into + ((<usize>i) << 3), load<f64>(column + (place << 3)));
        }
      }
      reduceBlock(triangle, block, rows, k);
    }
  }
}
