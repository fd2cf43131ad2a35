import { type Decimals, scaledBy } from '../numbers/decimals';
import { divide, squareRoot } from '../numbers/double-double';
import { log } from '../numbers/elementary';
import { lengthOf, lengthThrough, plainDot } from '../numbers/sums';
import { type BlockFactor, denseFactor, takeWide } from './block-factor';
import { applied, type Covariance, type CovarianceBlock } from './covariance';
import { symmetricEigenvalues } from './dense';
import { formFactor } from './form-factor';
import { wideProduct, wideZeros } from './wide';
import { inverseRootsOf } from './wide-ranks';

/** Omega = P P', with what hangs on it. Every function takes a vector of length G, gives a new one, and leaves its argument alone. */
export interface Factored {
  /** P^-1 x, in double-double: to about 30 digits where the blocks are small enough, else to those of a double factor. */
  readonly whiten: (x: Decimals) => Decimals;
  /** True where every block's factor has those thirty digits. */
  readonly wide: boolean;
  /** P^-1 x in doubles. */
  readonly whitened: (x: Float64Array) => Float64Array;
  /** P x */
  readonly unwhiten: (x: Float64Array) => Float64Array;
  /** P^-T x */
  readonly backwards: (x: Float64Array) => Float64Array;
  /** P' x */
  readonly root: (x: Float64Array) => Float64Array;
  /** Omega^-1 x */
  readonly solve: (x: Float64Array) => Float64Array;
  readonly logDeterminant: number;
  /** (Omega^-1)_gg, length G. */
  readonly inverseDiagonal: () => Float64Array;
  /** (Omega^-1)_ab among some cells: m x m, row after row, in their order. */
  readonly inverseAmong: (cells: ArrayLike<number>) => Float64Array;
}

/** What keeps a matrix from being a covariance that can be inverted: two cells, by index, correlated by 1 or more in size, else its smallest eigenvalue. */
export interface NotDefinite {
  readonly ok: false;
  readonly pair: readonly [number, number] | null;
  readonly correlation: number | null;
  /** Of the block that cannot be factored; null where a pair is named or an entry is not finite. Costs a decomposition: only when asked. */
  readonly smallestEigenvalue: () => number | null;
}

export type Factoring = { readonly ok: true; readonly factor: Factored } | NotDefinite;

const known = new WeakMap<Covariance, Factoring>();

/**
 * The factor of a covariance, block by block: Omega = P P'. Cells outside every block by the root of their variance.
 *
 * Not positive definite: the first pair of cells with a correlation of 1 or more in size, else the smallest eigenvalue. Factored once: asked again of the
 * same covariance, the same factor.
 *
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 4.2; Dekker 1971.
 */
export function factored(covariance: Covariance): Factoring {
  const before = known.get(covariance);
  if (before) return before;
  const factoring = factoringOf(covariance);
  known.set(covariance, factoring);
  return factoring;
}

/** The factor of a covariance that is known to be positive definite; another one is a bug and throws. */
export function factorOf(covariance: Covariance): Factored {
  const factoring = factored(covariance);
  if (!factoring.ok) throw new RangeError('a covariance is not positive definite');
  return factoring.factor;
}

/** One block with its factor. */
interface Piece {
  readonly cells: Int32Array;
  readonly factor: BlockFactor;
}

/** The factor of a multiple: P times the root of the number. */
function multiplied(factor: Factored, by: number, cells: number): Factored {
  const root = Math.sqrt(by);
  const wide = divide([1, 0], squareRoot([by, 0]));
  const scaled =
    (of: (x: Float64Array) => Float64Array, share: number) =>
    (x: Float64Array): Float64Array =>
      of(x).map((value) => value * share);
  return {
    whiten: (x) => scaledBy(factor.whiten(x), wide),
    wide: factor.wide,
    whitened: scaled(factor.whitened, 1 / root),
    unwhiten: scaled(factor.unwhiten, root),
    backwards: scaled(factor.backwards, 1 / root),
    root: scaled(factor.root, root),
    solve: scaled(factor.solve, 1 / by),
    logDeterminant: factor.logDeterminant + cells * log(by),
    inverseDiagonal: () => factor.inverseDiagonal().map((value) => value / by),
    inverseAmong: (cells) => factor.inverseAmong(cells).map((value) => value / by),
  };
}

function factoringOf(covariance: Covariance): Factoring {
  const { diagonal, blocks, multipleOf } = covariance;
  if (multipleOf) {
    const own = factored(multipleOf.covariance);
    if (own.ok) return { ok: true, factor: multiplied(own.factor, multipleOf.factor, diagonal.length) };
  }
  const wrong = diagonal.findIndex((v) => !(v > 0 && v < Infinity));
  if (wrong >= 0)
    return { ok: false, pair: null, correlation: null, smallestEigenvalue: () => diagonal[wrong] as number };
  const inBlock = new Uint8Array(diagonal.length);
  const pieces: Piece[] = [];
  for (const block of blocks ?? []) {
    const factor = block.form ? formFactor(block.form) : denseFactor(block.matrix, block.cells.length);
    if (!factor) return notDefinite(block);
    for (const g of block.cells) inBlock[g] = 1;
    pieces.push({ cells: block.cells, factor });
  }
  const alone = Int32Array.from([...diagonal.keys()].filter((g) => inBlock[g] === 0));
  return { ok: true, factor: joined(diagonal, alone, pieces) };
}

function notDefinite({ cells, matrix }: CovarianceBlock): NotDefinite {
  const n = cells.length;
  const at = (i: number, j: number) => matrix[i * n + j] as number;
  for (let i = 0; i < n; i++)
    for (let j = i + 1; j < n; j++) {
      const correlation = at(i, j) / Math.sqrt(at(i, i)) / Math.sqrt(at(j, j));
      if (Math.abs(correlation) >= 1 && Number.isFinite(correlation))
        return {
          ok: false,
          pair: [cells[i] as number, cells[j] as number],
          correlation,
          smallestEigenvalue: () => null,
        };
    }
  const rows = Array.from({ length: n }, (_, i) => matrix.subarray(i * n, (i + 1) * n));
  const finite = matrix.every(Number.isFinite);
  const smallestEigenvalue = () => (finite ? (symmetricEigenvalues(rows).at(-1) as number) : null);
  return { ok: false, pair: null, correlation: null, smallestEigenvalue };
}

function joined(diagonal: Float64Array, alone: Int32Array, pieces: readonly Piece[]): Factored {
  const roots = Float64Array.from(alone, (g) => Math.sqrt(diagonal[g] as number));
  /** A new vector: each cell alone by its root, each block by its factor. */
  const onEach =
    (own: (x: number, root: number) => number, of: (factor: BlockFactor) => (part: Float64Array) => void) =>
    (x: Float64Array): Float64Array => {
      const result = new Float64Array(x.length);
      for (let a = 0; a < alone.length; a++) {
        const g = alone[a] as number;
        result[g] = own(x[g] as number, roots[a] as number);
      }
      for (const { cells, factor } of pieces) {
        const part = Float64Array.from(cells, (g) => x[g] as number);
        of(factor)(part);
        for (let i = 0; i < cells.length; i++) result[cells[i] as number] = part[i] as number;
      }
      return result;
    };
  const whitened = onEach(
    (x, root) => x / root,
    (factor) => factor.whiten,
  );
  const backwards = onEach(
    (x, root) => x / root,
    (factor) => factor.backwards,
  );
  const solve = (x: Float64Array): Float64Array => backwards(whitened(x));
  let places: Int32Array | null = null;
  const pieceOf = (): Int32Array => (places ??= placesOfPieces(diagonal.length, pieces));
  let logDeterminant = 0;
  for (const g of alone) logDeterminant += log(diagonal[g] as number);
  for (const { factor } of pieces) logDeterminant += factor.logDeterminant;
  return {
    whiten: wideWhitening(diagonal, alone, pieces),
    wide: pieces.every(({ factor }) => factor.wide),
    whitened,
    unwhiten: onEach(
      (x, root) => x * root,
      (factor) => factor.unwhiten,
    ),
    backwards,
    root: onEach(
      (x, root) => x * root,
      (factor) => factor.root,
    ),
    solve,
    logDeterminant,
    inverseDiagonal: () => inverseDiagonalOf(diagonal, pieces),
    inverseAmong: (cells) => inverseAmong({ diagonal, pieces, pieceOf }, cells),
  };
}

/** The piece that each cell lies in, -1 for one outside all of them. */
function placesOfPieces(cells: number, pieces: readonly Piece[]): Int32Array {
  const places = new Int32Array(cells).fill(-1);
  for (const [b, piece] of pieces.entries()) for (const g of piece.cells) places[g] = b;
  return places;
}

function wideWhitening(diagonal: Float64Array, alone: Int32Array, pieces: readonly Piece[]): Factored['whiten'] {
  let inverses: Decimals | null = null;
  return (x) => {
    inverses ??= inverseRootsOf(Float64Array.from(alone, (g) => diagonal[g] as number));
    const result = wideZeros(x.high.length);
    for (let a = 0; a < alone.length; a++) {
      const g = alone[a] as number;
      const [high, low] = [inverses.high[a] as number, inverses.low[a] as number];
      wideProduct(result, g, x.high[g] as number, x.low[g] as number, high, low);
    }
    for (const { cells, factor } of pieces) {
      const part = takeWide(x, cells);
      factor.whitenWide(part);
      for (let i = 0; i < cells.length; i++) {
        result.high[cells[i] as number] = part.high[i] as number;
        result.low[cells[i] as number] = part.low[i] as number;
      }
    }
    return result;
  };
}

function inverseDiagonalOf(diagonal: Float64Array, pieces: readonly Piece[]): Float64Array {
  const result = diagonal.map((v) => 1 / v);
  for (const { cells, factor } of pieces) {
    const own = factor.inverseDiagonal();
    for (let i = 0; i < cells.length; i++) result[cells[i] as number] = own[i] as number;
  }
  return result;
}

/** e_a' Omega^-1 e_b: by the whitened unit vectors of the cells of a block, 0 between blocks. */
function inverseAmong(
  of: { readonly diagonal: Float64Array; readonly pieces: readonly Piece[]; readonly pieceOf: () => Int32Array },
  cells: ArrayLike<number>,
): Float64Array {
  const m = cells.length;
  const result = new Float64Array(m * m);
  const pieceOf = of.pieceOf();
  const pieceAt = Int32Array.from(cells, (g) => pieceOf[g] as number);
  const units = Array.from(cells, (g, a) => {
    const piece = of.pieces[pieceAt[a] as number];
    if (!piece) return null;
    const unit = new Float64Array(piece.cells.length);
    unit[piece.cells.indexOf(g)] = 1;
    piece.factor.whiten(unit);
    return unit;
  });
  for (let a = 0; a < m; a++)
    for (let b = a; b < m; b++) {
      const [left, right] = [units[a], units[b]];
      let entry = 0;
      if (left && right && pieceAt[a] === pieceAt[b]) entry = plainDot(left, right);
      else if (!left && cells[a] === cells[b]) entry = 1 / (of.diagonal[cells[a] as number] as number);
      result[a * m + b] = entry;
      result[b * m + a] = entry;
    }
  return result;
}

/**
 * Root of c' Omega c, the error of the combination of cells with these pulls, by the length of P'c, so that it neither runs over nor under.
 *
 * pull: length G. NaN where a variance is. An Omega that is only semidefinite (a matrix of few degrees of freedom) goes by the sum itself,
 * which rounding may take a little below 0: then 0.
 *
 * Example: pulls (1, 1) on independent variances (9, 16) give 5.
 */
export function errorOf(pull: Float64Array, covariance: Covariance): number {
  const { diagonal, blocks } = covariance;
  if (!blocks) return lengthThrough(pull, diagonal);
  if (diagonal.some(Number.isNaN)) return Number.NaN;
  const factoring = factored(covariance);
  if (factoring.ok) return lengthOf(factoring.factor.root(pull));
  return Math.sqrt(Math.max(0, plainDot(pull, applied(covariance, pull))));
}
