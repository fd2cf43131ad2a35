/** Rows that are worked on at once. */
export const BLOCK = 256;
/** Rows of a chunk, the unit of work: every sum is taken within chunks and then over them in their order, whatever the number of threads. */
export const CHUNK = 8192;

/** The chunks that one thread works on, of all rows; rows: a whole multiple of BLOCK. */
export interface Range {
  readonly rows: number;
  readonly from: number;
  readonly to: number;
}

/** Rows rounded up to whole blocks. */
export function paddedTo(cells: number): number {
  return Math.ceil(cells / BLOCK) * BLOCK;
}

/** Chunks of that many rows. */
export function chunksOf(rows: number): number {
  return Math.ceil(rows / CHUNK);
}
