import type { Covariance } from '@core/algebra/covariance';

/** A square as rows. */
export type Square = number[][];

/** Omega in full, from its diagonal and its blocks. */
export function inFull({ diagonal, blocks }: Covariance): Square {
  const cells = diagonal.length;
  const full = Array.from({ length: cells }, (_, g) =>
    Array.from({ length: cells }, (__, h) => (g === h ? (diagonal[g] as number) : 0)),
  );
  for (const { cells: own, matrix } of blocks ?? [])
    for (const [i, g] of own.entries())
      for (const [j, h] of own.entries()) (full[g] as number[])[h] = matrix[i * own.length + j] as number;
  return full;
}

/** Inverse and log-determinant by elimination with the largest pivot: a route of its own, with nothing of the program in it. */
export function eliminated(square: Square): { inverse: Square; logDeterminant: number } {
  const n = square.length;
  const left = square.map((row) => row.slice());
  const right: number[][] = square.map((_, i) => square.map((__, j) => (i === j ? 1 : 0)));
  let logDeterminant = 0;
  for (let c = 0; c < n; c++) {
    let pivot = c;
    for (let i = c + 1; i < n; i++)
      if (Math.abs(left[i]?.[c] as number) > Math.abs(left[pivot]?.[c] as number)) pivot = i;
    [left[c], left[pivot]] = [left[pivot] as number[], left[c] as number[]];
    [right[c], right[pivot]] = [right[pivot] as number[], right[c] as number[]];
    const value = left[c]?.[c] as number;
    logDeterminant += Math.log(Math.abs(value));
    for (const rows of [left, right]) rows[c] = (rows[c] as number[]).map((x) => x / value);
    for (let i = 0; i < n; i++) {
      const share = left[i]?.[c] as number;
      if (i === c || share === 0) continue;
      for (const rows of [left, right])
        rows[i] = (rows[i] as number[]).map((x, j) => x - share * ((rows[c] as number[])[j] as number));
    }
  }
  return { inverse: right, logDeterminant };
}

export function times(a: Square, b: Square): Square {
  return a.map((row) =>
    (b[0] as number[]).map((_, j) => row.reduce((sum, x, l) => sum + x * (b[l]?.[j] as number), 0)),
  );
}

export function turned(a: Square): Square {
  return (a[0] as number[]).map((_, j) => a.map((row) => row[j] as number));
}

export function minus(a: Square, b: Square): Square {
  return a.map((row, i) => row.map((x, j) => x - (b[i]?.[j] as number)));
}

export function trace(a: Square): number {
  return a.reduce((sum, row, i) => sum + (row[i] as number), 0);
}
