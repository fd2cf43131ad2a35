import type { RankLayout } from './rank-layout';

/** c u u' on some places of a block. */
export interface RankOne {
  readonly factor: number;
  /** u, one entry a place. */
  readonly vector: Float64Array;
  readonly places: Int32Array;
}

/** Omega of a block as a diagonal and rank-one terms: common shocks, one level in another or crossed, and exchangeable correlations. */
export interface RanksForm {
  readonly kind: 'ranks';
  /** Length n, above 0. */
  readonly diagonal: Float64Array;
  readonly ranks: readonly RankOne[];
  /** Of the terms' places, where it is at hand. */
  readonly layout?: RankLayout;
}

/** Omega of a block as a chain: each cell goes with the one before it, and through it with the others. */
export interface SerialForm {
  readonly kind: 'serial';
  /** Length n, in the order of the block's cells. */
  readonly variances: Float64Array;
  /** The places in the chain's order. */
  readonly order: Int32Array;
  /** Correlation of each cell of the chain with the one before it; n - 1. */
  readonly steps: Float64Array;
}

/** Omega of a block by what it is made of: all that is asked of it costs n and not n^3. */
export type BlockForm = RanksForm | SerialForm;

/** The block in full, n x n. */
export function denseOf(form: BlockForm): Float64Array {
  return form.kind === 'ranks' ? denseRanks(form) : denseChain(form);
}

function denseRanks({ diagonal, ranks }: RanksForm): Float64Array {
  const n = diagonal.length;
  const matrix = new Float64Array(n * n);
  for (let i = 0; i < n; i++) matrix[i * n + i] = diagonal[i] as number;
  for (const { factor, vector, places } of ranks)
    for (let a = 0; a < places.length; a++)
      for (let b = 0; b < places.length; b++) {
        const at = (places[a] as number) * n + (places[b] as number);
        matrix[at] = (matrix[at] as number) + factor * (vector[a] as number) * (vector[b] as number);
      }
  return matrix;
}

function denseChain({ variances, order, steps }: SerialForm): Float64Array {
  const n = variances.length;
  const matrix = new Float64Array(n * n);
  const root = (i: number): number => Math.sqrt(variances[i] as number);
  for (let a = 0; a < n; a++) {
    const i = order[a] as number;
    matrix[i * n + i] = variances[i] as number;
    let correlation = 1;
    for (let b = a + 1; b < n; b++) {
      const j = order[b] as number;
      correlation *= steps[b - 1] as number;
      matrix[i * n + j] = correlation * root(i) * root(j);
      matrix[j * n + i] = matrix[i * n + j] as number;
    }
  }
  return matrix;
}

/** The block times x, length n. */
export function appliedForm(form: BlockForm, x: Float64Array): Float64Array {
  return form.kind === 'ranks' ? appliedRanks(form, x) : appliedChain(form, x);
}

function appliedRanks({ diagonal, ranks }: RanksForm, x: Float64Array): Float64Array {
  const result = x.map((value, i) => value * (diagonal[i] as number));
  for (const rank of ranks) addRank(result, rank, x);
  return result;
}

/** target += c u u' x */
function addRank(target: Float64Array, { factor, vector, places }: RankOne, x: Float64Array): void {
  let along = 0;
  for (let a = 0; a < places.length; a++) along += (vector[a] as number) * (x[places[a] as number] as number);
  along *= factor;
  for (let a = 0; a < places.length; a++) {
    const i = places[a] as number;
    target[i] = (target[i] as number) + along * (vector[a] as number);
  }
}

/** What lies before each cell and after it is carried along the chain. */
function appliedChain({ variances, order, steps }: SerialForm, x: Float64Array): Float64Array {
  const n = x.length;
  const roots = variances.map(Math.sqrt);
  const result = new Float64Array(n);
  const scaled = (a: number): number => (x[order[a] as number] as number) * (roots[order[a] as number] as number);
  let carried = 0;
  for (let a = 0; a < n; a++) {
    carried = (a === 0 ? 0 : carried * (steps[a - 1] as number)) + scaled(a);
    result[order[a] as number] = carried;
  }
  carried = 0;
  for (let a = n - 2; a >= 0; a--) {
    carried = (carried + scaled(a + 1)) * (steps[a] as number);
    const i = order[a] as number;
    result[i] = (result[i] as number) + carried;
  }
  return result.map((value, i) => value * (roots[i] as number));
}

/** The block times a number. */
export function timesForm(form: BlockForm, by: number): BlockForm {
  const times = (value: number): number => value * by;
  if (form.kind === 'serial') return { ...form, variances: form.variances.map(times) };
  return {
    ...form,
    diagonal: form.diagonal.map(times),
    ranks: form.ranks.map((rank) => ({ ...rank, factor: rank.factor * by })),
  };
}

/** The block on some of its places, in their new order; kept: old places. A chain closes where a cell is taken out of it. */
export function takeForm(form: BlockForm, kept: readonly number[]): BlockForm {
  const count = form.kind === 'ranks' ? form.diagonal.length : form.variances.length;
  const placeOf = new Int32Array(count).fill(-1);
  for (const [place, i] of kept.entries()) placeOf[i] = place;
  if (form.kind === 'ranks')
    return {
      kind: 'ranks',
      diagonal: Float64Array.from(kept, (i) => form.diagonal[i] as number),
      ranks: form.ranks.flatMap((rank) => takeRank(rank, placeOf) ?? []),
    };
  const order: number[] = [];
  const steps: number[] = [];
  let step = 1;
  for (let a = 0; a < count; a++) {
    if (a > 0) step *= form.steps[a - 1] as number;
    const place = placeOf[form.order[a] as number] as number;
    if (place < 0) continue;
    if (order.length > 0) steps.push(step);
    order.push(place);
    step = 1;
  }
  return {
    kind: 'serial',
    variances: Float64Array.from(kept, (i) => form.variances[i] as number),
    order: Int32Array.from(order),
    steps: Float64Array.from(steps),
  };
}

function takeRank({ factor, vector, places }: RankOne, placeOf: Int32Array): RankOne | null {
  const left = [...places.keys()].filter((a) => (placeOf[places[a] as number] as number) >= 0);
  if (left.length === 0) return null;
  return {
    factor,
    vector: Float64Array.from(left, (a) => vector[a] as number),
    places: Int32Array.from(left, (a) => placeOf[places[a] as number] as number),
  };
}

/** A derivative of a block of ranks: a diagonal and rank-one terms of its own. */
export interface RanksSlope {
  readonly diagonal: Float64Array | null;
  readonly ranks: readonly RankOne[];
}

/** A derivative of a chain: by a parameter of its variances, d ln v of every place; or by its correlation, d f of every step. */
export type SerialSlope =
  | { readonly by: 'variances'; readonly relative: Float64Array }
  | { readonly by: 'steps'; readonly steps: Float64Array };
