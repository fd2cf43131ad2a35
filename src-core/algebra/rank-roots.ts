import { NOT_DEFINITE } from '../numbers/tolerances';
import type { RankOne, RanksForm } from './block-form';
import { type RankLayout, rankLayoutOf } from './rank-layout';

/** One factor I + alpha w w' of a product of roots. */
export interface RankRoot {
  /** w on its places. */
  readonly vector: Float64Array;
  readonly places: Int32Array;
  /** The factors before it that share places with it. */
  readonly earlier: readonly number[];
  /** I + alpha w w', and its inverse I - beta w w'. */
  readonly alpha: number;
  readonly beta: number;
  /** 1 + c w'w: the determinant that this term brings. */
  readonly growth: number;
  /** c / (1 + c w'w). */
  readonly gamma: number;
}

/** D^(1/2) (I + alpha_1 w_1 w_1') ... (I + alpha_r w_r w_r') = P, with P P' the block. */
export interface RankRoots {
  /** Roots of the diagonal. */
  readonly roots: Float64Array;
  readonly factors: readonly RankRoot[];
}

/**
 * A diagonal and rank-one terms as P P', one term after the other.
 *
 *     w = P^-1 u,  I + c w w' = (I + alpha w w')^2,  alpha = c / (1 + root(1 + c w'w))
 *
 * Terms of fewer places first, so that levels inside each other stay as thin as they are; a term that crosses others spreads over their places. Negative
 * c are allowed. Null where the block is not positive definite.
 *
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 6.5.4 (rank-one changes of a factor).
 */
export function rankRootsOf(form: RanksForm): RankRoots | null {
  const { diagonal, ranks } = form;
  if (!diagonal.every((v) => v > 0 && v < Infinity)) return null;
  const roots = diagonal.map(Math.sqrt);
  const factors: RankRoot[] = [];
  const { order, earlier, spread } = layoutOf(form);
  const buffer = new Float64Array(diagonal.length);
  for (const [l, t] of order.entries()) {
    const { factor, vector, places } = ranks[t] as RankOne;
    for (let a = 0; a < places.length; a++) {
      const i = places[a] as number;
      buffer[i] = (vector[a] as number) / (roots[i] as number);
    }
    const before = earlier[l] as readonly number[];
    for (const m of before) takeOff(factors[m] as RankRoot, buffer);
    const own = spread[l] as Int32Array;
    const w = new Float64Array(own.length);
    let squares = 0;
    for (let a = 0; a < own.length; a++) {
      const i = own[a] as number;
      const value = buffer[i] as number;
      w[a] = value;
      squares += value * value;
      buffer[i] = 0;
    }
    const growth = 1 + factor * squares;
    if (!(growth > NOT_DEFINITE && growth < Infinity)) return null;
    const root = Math.sqrt(growth);
    const alpha = factor / (1 + root);
    factors.push({
      vector: w,
      places: own,
      earlier: before,
      alpha,
      beta: alpha / root,
      growth,
      gamma: factor / growth,
    });
  }
  return { roots, factors };
}

/** The layout of a form's terms: its own, or worked out. */
export function layoutOf({ diagonal, ranks, layout }: RanksForm): RankLayout {
  return (
    layout ??
    rankLayoutOf(
      diagonal.length,
      ranks.map(({ places }) => places),
    )
  );
}

/** x -= beta w w'x */
function takeOff({ vector, places, beta }: RankRoot, x: Float64Array): void {
  let along = 0;
  for (let a = 0; a < places.length; a++) along += (vector[a] as number) * (x[places[a] as number] as number);
  along *= beta;
  for (let a = 0; a < places.length; a++) {
    const i = places[a] as number;
    x[i] = (x[i] as number) - along * (vector[a] as number);
  }
}

/** Rows of a given width: rows += share w (w' rows), in place; along: room for one row. */
function addShare(
  rows: Float64Array,
  along: Float64Array,
  { vector, places }: Pick<RankRoot, 'vector' | 'places'>,
  share: number,
): void {
  const width = along.length;
  if (width === 1) {
    let sum = 0;
    for (let a = 0; a < places.length; a++) sum += (vector[a] as number) * (rows[places[a] as number] as number);
    sum *= share;
    for (let a = 0; a < places.length; a++) {
      const i = places[a] as number;
      rows[i] = (rows[i] as number) + sum * (vector[a] as number);
    }
    return;
  }
  along.fill(0);
  for (let a = 0; a < places.length; a++) {
    const from = (places[a] as number) * width;
    const w = vector[a] as number;
    for (let c = 0; c < width; c++) along[c] = (along[c] as number) + w * (rows[from + c] as number);
  }
  for (let a = 0; a < places.length; a++) {
    const from = (places[a] as number) * width;
    const w = share * (vector[a] as number);
    for (let c = 0; c < width; c++) rows[from + c] = (rows[from + c] as number) + w * (along[c] as number);
  }
}

/** n rows of a given width, each by its root, in place. */
function scaleRows(rows: Float64Array, width: number, by: (i: number) => number): void {
  for (let i = 0, at = 0; at < rows.length; i++) {
    const factor = by(i);
    for (let c = 0; c < width; c++, at++) rows[at] = (rows[at] as number) * factor;
  }
}

/** P^-1 times rows, in place. */
export function whitenRanks({ roots, factors }: RankRoots, rows: Float64Array, width = 1): void {
  scaleRows(rows, width, (i) => 1 / (roots[i] as number));
  const along = new Float64Array(width);
  for (const factor of factors) addShare(rows, along, factor, -factor.beta);
}

/** P^-T times rows, in place. */
export function backwardRanks({ roots, factors }: RankRoots, rows: Float64Array, width = 1): void {
  const along = new Float64Array(width);
  for (let l = factors.length - 1; l >= 0; l--) {
    const factor = factors[l] as RankRoot;
    addShare(rows, along, factor, -factor.beta);
  }
  scaleRows(rows, width, (i) => 1 / (roots[i] as number));
}

/** P times rows, in place. */
export function unwhitenRanks({ roots, factors }: RankRoots, rows: Float64Array, width = 1): void {
  const along = new Float64Array(width);
  for (let l = factors.length - 1; l >= 0; l--) {
    const factor = factors[l] as RankRoot;
    addShare(rows, along, factor, factor.alpha);
  }
  scaleRows(rows, width, (i) => roots[i] as number);
}

/** P' times rows, in place. */
export function rootRanks({ roots, factors }: RankRoots, rows: Float64Array, width = 1): void {
  scaleRows(rows, width, (i) => roots[i] as number);
  const along = new Float64Array(width);
  for (const factor of factors) addShare(rows, along, factor, factor.alpha);
}

/** z of one term of the inverse, on the places of its factor. */
export interface InverseTerm {
  readonly vector: Float64Array;
  readonly places: Int32Array;
  readonly gamma: number;
}

/** The inverse as a diagonal less thin terms: Omega^-1 = D^-1 - sum gamma z z'. */
export function inverseTerms({ roots, factors }: RankRoots): InverseTerm[] {
  const buffer = new Float64Array(roots.length);
  return factors.map(({ vector, places, earlier, gamma }) => {
    for (let a = 0; a < places.length; a++) buffer[places[a] as number] = vector[a] as number;
    for (let e = earlier.length - 1; e >= 0; e--) takeOff(factors[earlier[e] as number] as RankRoot, buffer);
    const z = Float64Array.from(places, (i) => (buffer[i] as number) / (roots[i] as number));
    for (const i of places) buffer[i] = 0;
    return { vector: z, places, gamma };
  });
}
