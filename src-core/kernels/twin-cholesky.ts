import { dotsOfFour } from './twin-sums';

const WIDE = 64;
const NARROW = 8;
const LONG = 256;
const four = new Float64Array(4);

/** What `factorLower` works on; places in the memory. */
export interface Square {
  /** n rows, pitch apart; rows and places are there up to n rounded up to 8, and zero. */
  readonly a: number;
  readonly pitch: number;
  readonly n: number;
  /** A pivot at or below this share of its diagonal entry counts as nothing. */
  readonly least: number;
  /** Room for n numbers. */
  readonly diagonal: number;
}

/**
 * The lower factor of a symmetric matrix in the place of its lower triangle, A = L L'; entries above it are left with no meaning.
 *
 * By panels of 64 columns, and in them of 8: what stands to the left is taken off in tiles of inner products. Returns -1, or the row whose
 * pivot counts as nothing.
 *
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 4.2.
 */
export function factorLower(m: Float64Array, of: Square): number {
  const { a, pitch, n, diagonal } = of;
  for (let i = 0; i < n; i++) m[diagonal + i] = m[a + i * pitch + i] as number;
  for (let wide = 0; wide < n; wide += WIDE) {
    const end = Math.min(n, wide + WIDE);
    for (let first = 0; first < wide; first += LONG)
      takePanel(m, of, { from: wide, end, first, count: Math.min(LONG, wide - first) });
    for (let narrow = wide; narrow < end; narrow += NARROW) {
      const stop = Math.min(end, narrow + NARROW);
      if (narrow > wide) takePanel(m, of, { from: narrow, end: stop, first: wide, count: narrow - wide });
      const nothing = finish(m, of, narrow, stop);
      if (nothing >= 0) return nothing;
    }
  }
  return -1;
}

/** Columns from to end of all rows below, less the inner products of the rows' places first to first + count. */
function takePanel(
  m: Float64Array,
  { a, pitch, n }: Square,
  panel: { readonly from: number; readonly end: number; readonly first: number; readonly count: number },
): void {
  const { from, end, first, count } = panel;
  for (let i = from; i < n; i += 4)
    for (let pair = from; pair < Math.min(end, i + 4); pair += 2)
      for (let j = pair; j < pair + 2; j++) {
        dotsOfFour(m, { v: a + i * pitch + first, stride: pitch, n: count }, a + j * pitch + first, four);
        for (let p = 0; p < 4; p++) {
          const at = a + (i + p) * pitch + j;
          m[at] = (m[at] as number) - (four[p] as number);
        }
      }
}

/** The last step for a few columns: their own inner products, roots and quotients. */
function finish(m: Float64Array, { a, pitch, n, least, diagonal }: Square, from: number, stop: number): number {
  for (let i = from; i < n; i++)
    for (let j = from; j < Math.min(stop, i + 1); j++) {
      let left = m[a + i * pitch + j] as number;
      for (let l = from; l < j; l++) left -= (m[a + i * pitch + l] as number) * (m[a + j * pitch + l] as number);
      if (i !== j) left /= m[a + j * pitch + j] as number;
      else {
        if (!(left > least * (m[diagonal + i] as number)) || left === Infinity) return i;
        left = Math.sqrt(left);
      }
      m[a + i * pitch + j] = left;
    }
  return -1;
}
