// The Cholesky factor of a large symmetric matrix, in place (see the twin).
import { eightPlaces } from './reduce';
import { dotsOfFour } from './sums';

const WIDE: i32 = 64;
const NARROW: i32 = 8;
const LONG: i32 = 256;

/** Entries of rows i to i + 3, columns j and j + 1, less the inner products of the rows' places first to first + count. */
// @ts-ignore: decorator
@inline
function takeTile(a: usize, pitch: usize, i: i32, j: i32, first: i32, count: i32, eight: usize): void {
  const left = a + <usize>i * pitch;
  const right = a + <usize>j * pitch + ((<usize>first) << 3);
  dotsOfFour(left + ((<usize>first) << 3), pitch, right, right + pitch, count, eight);
  const place = left + ((<usize>j) << 3);
  for (let p: usize = 0; p < 4; p++) {
    const at = place + p * pitch;
    store<f64>(at, load<f64>(at) - load<f64>(eight + p * 8));
    store<f64>(at, load<f64>(at, 8) - load<f64>(eight + p * 8, 32), 8);
  }
}

/**
 * The lower factor of n rows, pitch bytes apart, in the place of the lower triangle; entries above it are left with no meaning. Rows and places are there up to n
 * rounded up to 8, and zero. Returns -1, or the row whose pivot is not above `least` of its diagonal.
 */
export function factorLower(a: usize, pitch: usize, n: i32, least: f64, diagonal: usize): i32 {
  const eight = eightPlaces();
  const rows = (n + 3) & ~3;
  for (let i = 0; i < n; i++)
    store<f64>(diagonal + ((<usize>i) << 3), load<f64>(a + <usize>i * pitch + ((<usize>i) << 3)));
  for (let wide = 0; wide < n; wide += WIDE) {
    const end = min<i32>(n, wide + WIDE);
    for (let first = 0; first < wide; first += LONG) {
      const count = min<i32>(LONG, wide - first);
      for (let i = wide; i < rows; i += 4)
        for (let j = wide; j < min<i32>(end, i + 4); j += 2) takeTile(a, pitch, i, j, first, count, eight);
    }
    for (let narrow = wide; narrow < end; narrow += NARROW) {
      const stop = min<i32>(end, narrow + NARROW);
      if (narrow > wide)
        for (let i = narrow; i < rows; i += 4)
          for (let j = narrow; j < min<i32>(stop, i + 4); j += 2) takeTile(a, pitch, i, j, wide, narrow - wide, eight);
      for (let i = narrow; i < n; i++) {
        const row = a + <usize>i * pitch;
        for (let j = narrow; j < min<i32>(stop, i + 1); j++) {
          const other = a + <usize>j * pitch;
          let left = load<f64>(row + ((<usize>j) << 3));
          for (let l = narrow; l < j; l++)
            left -= load<f64>(row + ((<usize>l) << 3)) * load<f64>(other + ((<usize>l) << 3));
          if (i != j) left = left / load<f64>(other + ((<usize>j) << 3));
          else {
            if (!(left > least * load<f64>(diagonal + ((<usize>i) << 3))) || left == Infinity) return i;
            left = sqrt<f64>(left);
          }
          store<f64>(row + ((<usize>j) << 3), left);
        }
      }
    }
  }
  return -1;
}
