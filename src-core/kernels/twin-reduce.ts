import { BLOCK, CHUNK, type Range } from './chunks';
import { dot, dotsOfFour, takeFour, takeOne, weigh } from './twin-sums';

/** Columns of a block, `rows` apart: k, the response, and one of zeros. */
interface Block {
  readonly at: number;
  readonly rows: number;
  readonly k: number;
  /** Its triangle: k rows of k + 2. */
  readonly triangle: number;
}

const taus = new Float64Array(4);
const shares = new Float64Array(4);
const corner = new Float64Array(16);

/**
 * Reduces a block of rows under a triangle into the triangle: reflections that mix row j of the triangle with the block.
 *
 *     H = I - tau (1; v)(1; v)',  four at a time as I - V T V'
 *
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.2; Schreiber & Van Loan 1989 for T.
 */
function reduceBlock(m: Float64Array, block: Block): void {
  const { at, rows, k, triangle } = block;
  const pitch = k + 2;
  for (let j = 0; j < k; j += 4) {
    const width = Math.min(4, k - j);
    const first = at + j * rows;
    for (let p = 0; p < width; p++) {
      const mirror = { v: first + p * rows, n: rows };
      const row = triangle + (j + p) * pitch;
      const tau = makeMirror(m, mirror, row + j + p);
      taus[p] = tau;
      for (let c = j + p + 1; c < j + width; c++) reflect(m, { ...mirror, tau }, at + c * rows, row + c);
      if (width < 4) reflect(m, { ...mirror, tau }, at + k * rows, row + k);
    }
    if (width < 4) continue;
    const four = { v: first, stride: rows, n: rows };
    joinMirrors(m, four);
    for (let c = j + 4; c <= k; c++) reflectFour(m, four, at + c * rows, { at: triangle + j * pitch + c, pitch });
  }
}

function makeMirror(m: Float64Array, { v, n }: { readonly v: number; readonly n: number }, at: number): number {
  const squares = dot(m, v, v, n);
  if (squares === 0) {
    m.fill(0, v, v + n);
    return 0;
  }
  const first = m[at] as number;
  const length = Math.sqrt(first * first + squares);
  const arrives = first < 0 ? length : -length;
  const turned = first - arrives;
  const factor = 1 / turned;
  for (let i = v; i < v + n; i++) m[i] = (m[i] as number) * factor;
  m[at] = arrives;
  return -turned / arrives;
}

function reflect(
  m: Float64Array,
  mirror: { readonly v: number; readonly n: number; readonly tau: number },
  column: number,
  at: number,
): void {
  const share = mirror.tau * ((m[at] as number) + dot(m, mirror.v, column, mirror.n));
  m[at] = (m[at] as number) - share;
  takeOne(m, mirror, column, share);
}

/** The upper triangle T that joins four mirrors to one step. */
function joinMirrors(m: Float64Array, { v, stride, n }: { v: number; stride: number; n: number }): void {
  for (let q = 0; q < 4; q++) {
    const tau = taus[q] as number;
    corner[5 * q] = tau;
    for (let p = 0; p < q; p++) shares[p] = dot(m, v + p * stride, v + q * stride, n);
    for (let p = 0; p < q; p++) {
      let sum = 0;
      for (let r = p; r < q; r++) sum += (corner[4 * p + r] as number) * (shares[r] as number);
      corner[4 * p + q] = -tau * sum;
    }
  }
}

function reflectFour(
  m: Float64Array,
  four: { readonly v: number; readonly stride: number; readonly n: number },
  column: number,
  top: { readonly at: number; readonly pitch: number },
): void {
  dotsOfFour(m, four, column, shares);
  for (let p = 0; p < 4; p++) shares[p] = (shares[p] as number) + (m[top.at + p * top.pitch] as number);
  for (let q = 3; q >= 0; q--) {
    let sum = 0;
    for (let p = 0; p <= q; p++) sum += (corner[4 * p + q] as number) * (shares[p] as number);
    shares[q] = sum;
    const place = top.at + q * top.pitch;
    m[place] = (m[place] as number) - sum;
  }
  takeFour(m, four, column, shares);
}

/** What `reduceChunks` works on; places in the memory. */
export interface Reduction {
  /** k columns and the response, stride apart. */
  readonly columns: number;
  readonly stride: number;
  readonly k: number;
  /** A factor for each row, or 0 for none. */
  readonly factors: number;
  /** Of each chunk k + 1 rows of k + 2: its triangle, the response's column k; in the last row the largest |x| of each column. */
  readonly triangles: number;
  /** Room for max(256, k rounded up to 8) rows of k + 2 columns. */
  readonly block: number;
}

/** The triangle of every chunk of a range. */
export function reduceChunks(m: Float64Array, of: Reduction, { rows, from, to }: Range): void {
  const { columns, stride, k, factors, triangles, block } = of;
  const size = (k + 1) * (k + 2);
  m.fill(0, block + (k + 1) * BLOCK, block + (k + 2) * BLOCK);
  for (let chunk = from; chunk < to; chunk++) {
    const triangle = triangles + chunk * size;
    m.fill(0, triangle, triangle + size);
    const largest = triangle + k * (k + 2);
    const end = Math.min(rows, (chunk + 1) * CHUNK);
    for (let row = chunk * CHUNK; row < end; row += BLOCK) {
      for (let c = 0; c <= k; c++) {
        const found = weigh(m, columns + c * stride + row, factors && factors + row, BLOCK, block + c * BLOCK);
        m[largest + c] = Math.max(m[largest + c] as number, found);
      }
      reduceBlock(m, { at: block, rows: BLOCK, k, triangle });
    }
  }
}

/** One triangle of all chunks, in their order: at the place of the first. */
export function joinTriangles(m: Float64Array, { triangles, k, block }: Reduction, count: number): void {
  const pitch = k + 2;
  const size = (k + 1) * pitch;
  const rows = Math.ceil(k / 8) * 8;
  for (let chunk = 1; chunk < count; chunk++) {
    const triangle = triangles + chunk * size;
    m.fill(0, block, block + rows * pitch);
    for (let i = 0; i < k; i++)
      for (let c = i; c <= k; c++) m[block + c * rows + i] = m[triangle + i * pitch + c] as number;
    reduceBlock(m, { at: block, rows, k, triangle: triangles });
    for (let c = 0; c <= k; c++) {
      const at = k * pitch + c;
      m[triangles + at] = Math.max(m[triangles + at] as number, m[triangle + at] as number);
    }
  }
}

/** What `reduceGroups` works on; places in the memory. */
export interface Grouping {
  /** k columns, stride apart. */
  readonly columns: number;
  readonly stride: number;
  readonly k: number;
  /** The rows' places group by group, and where each group begins in them, with the end. */
  readonly order: number;
  readonly starts: number;
  /** Of each group k + 1 rows of k + 2. */
  readonly triangles: number;
  readonly block: number;
}

/** The triangle of the rows of each group. */
export function reduceGroups(
  m: Float64Array,
  of: Grouping,
  groups: { readonly from: number; readonly to: number },
): void {
  const { columns, stride, k, order, starts, triangles, block } = of;
  const size = (k + 1) * (k + 2);
  for (let group = groups.from; group < groups.to; group++) {
    const triangle = triangles + group * size;
    m.fill(0, triangle, triangle + size);
    const end = m[starts + group + 1] as number;
    for (let row = m[starts + group] as number; row < end; row += BLOCK) {
      const count = Math.min(BLOCK, end - row);
      const rows = Math.ceil(count / 8) * 8;
      m.fill(0, block, block + rows * (k + 2));
      for (let c = 0; c < k; c++)
        for (let i = 0; i < count; i++)
          m[block + c * rows + i] = m[columns + c * stride + (m[order + row + i] as number)] as number;
      reduceBlock(m, { at: block, rows, k, triangle });
    }
  }
}
