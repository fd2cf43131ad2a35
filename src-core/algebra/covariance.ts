import { plainDot } from '../numbers/sums';
import { appliedForm, type BlockForm, denseOf, takeForm, timesForm } from './block-form';

/** Cells whose errors go together. */
export interface CovarianceBlock {
  /** Indices of n >= 2 cells, ascending. */
  readonly cells: Int32Array;
  /** n x n, row after row, whole and symmetric; of a block with a form made when first asked for: not to be asked of a large one. */
  readonly matrix: Float64Array;
  /** What the block is made of, where that makes work on it linear in its cells. */
  readonly form?: BlockForm;
}

/** A block by its form. */
export function formedBlock(cells: Int32Array, form: BlockForm): CovarianceBlock {
  let matrix: Float64Array | null = null;
  return {
    cells,
    form,
    get matrix() {
      return (matrix ??= denseOf(form));
    },
  };
}

/**
 * Omega, the covariance of the cells' errors: independent cells where blocks is null; else cells outside every block are independent. Blocks
 * share no cell.
 */
export interface Covariance {
  /** Omega_gg, length G; a cell in a block has its diagonal entry here as well. */
  readonly diagonal: Float64Array;
  readonly blocks: readonly CovarianceBlock[] | null;
  /** The covariance that this one is a multiple of, above 0: they have one factor, up to a root. */
  readonly multipleOf?: { readonly covariance: Covariance; readonly factor: number };
}

/**
 * Errors that are independent of each other.
 *
 * diagonal: variances, length G, kept and not copied. Example: `independent(Float64Array.of(1, 4))`.
 */
export function independent(diagonal: Float64Array): Covariance {
  return { diagonal, blocks: null };
}

/** Omega times a number, as a new covariance. */
export function timesFactor(covariance: Covariance, factor: number): Covariance {
  const { diagonal, blocks } = covariance;
  if (factor === 1) return covariance;
  const times = (value: number): number => value * factor;
  return {
    diagonal: diagonal.map(times),
    blocks: blocks
      ? blocks.map((block) =>
          block.form
            ? formedBlock(block.cells, timesForm(block.form, factor))
            : { cells: block.cells, matrix: block.matrix.map(times) },
        )
      : null,
    ...(blocks && factor > 0 && factor < Infinity && { multipleOf: { covariance, factor } }),
  };
}

/**
 * Omega of some of the cells, or of all in another order.
 *
 * rows: places of the cells that stay, each at most once where it lies in a block. A block of which one cell is left is no block any more.
 */
export function takeCovariance(covariance: Covariance, rows: ArrayLike<number>): Covariance {
  const { diagonal, blocks } = covariance;
  const taken = Float64Array.from(rows, (row) => diagonal[row] as number);
  if (!blocks) return independent(taken);
  const placeOf = new Int32Array(diagonal.length).fill(-1);
  for (let place = 0; place < rows.length; place++) placeOf[rows[place] as number] = place;
  const left = blocks.flatMap((block) => takeBlock(block, placeOf) ?? []);
  return { diagonal: taken, blocks: left.length > 0 ? left : null };
}

function takeBlock(block: CovarianceBlock, placeOf: Int32Array): CovarianceBlock | null {
  const { cells } = block;
  const n = cells.length;
  const kept = [...cells.keys()].filter((i) => (placeOf[cells[i] as number] as number) >= 0);
  if (kept.length < 2) return null;
  kept.sort((i, j) => (placeOf[cells[i] as number] as number) - (placeOf[cells[j] as number] as number));
  const places = Int32Array.from(kept, (i) => placeOf[cells[i] as number] as number);
  if (block.form) return formedBlock(places, takeForm(block.form, kept));
  const { matrix } = block;
  const left = new Float64Array(kept.length * kept.length);
  for (const [a, i] of kept.entries())
    for (const [b, j] of kept.entries()) left[a * kept.length + b] = matrix[i * n + j] as number;
  return { cells: places, matrix: left };
}

/** Omega x; x: length G. */
export function applied({ diagonal, blocks }: Covariance, x: Float64Array): Float64Array {
  const result = x.map((value, g) => value * (diagonal[g] as number));
  for (const block of blocks ?? []) {
    const { cells } = block;
    if (block.form) {
      const own = appliedForm(
        block.form,
        Float64Array.from(cells, (g) => x[g] as number),
      );
      for (const [i, g] of cells.entries()) result[g] = own[i] as number;
      continue;
    }
    const { matrix } = block;
    const n = cells.length;
    for (let i = 0; i < n; i++) {
      let sum = 0;
      for (let j = 0; j < n; j++) sum += (matrix[i * n + j] as number) * (x[cells[j] as number] as number);
      result[cells[i] as number] = sum;
    }
  }
  return result;
}

/**
 * A Omega B', summed in the order of the cells.
 *
 * a, b: rows of length G, B = A unless given. Returns one row for each of a.
 *
 * Example: `throughCovariance([[1, 2]], independent([3, 4]))` is [[19]].
 */
export function throughCovariance(
  a: readonly Float64Array[],
  covariance: Covariance,
  b: readonly Float64Array[] = a,
): Float64Array[] {
  return a.map((left) => {
    const through = applied(covariance, left);
    return Float64Array.from(b, (right) => plainDot(through, right));
  });
}
