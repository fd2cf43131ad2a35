import type { Decimals } from '../numbers/decimals';
import { add, divide, multiply, type Pair, squareRoot, subtract } from '../numbers/double-double';
import type { SerialForm } from './block-form';
import { wideTimes } from './wide';
import { inverseRootsOf } from './wide-ranks';

/**
 * A chain as P P', P = D^(1/2) L: what is new in each cell given the one before it.
 *
 *     e_1 = z_1,  e_t = (z_t - f_t z_(t-1)) / s_t,  s_t^2 = 1 - f_t^2,  z = x / root(v),  f_t the step from t - 1 to t
 */
export interface Chain {
  readonly order: Int32Array;
  readonly roots: Float64Array;
  /** f_t, 0 for the first of the chain; n. */
  readonly steps: Float64Array;
  /** s_t, 1 for the first; n. */
  readonly news: Float64Array;
}

/** Null where a step is 1 or more in size, or a variance not above 0. */
export function chainOf({ variances, order, steps }: SerialForm): Chain | null {
  if (!variances.every((v) => v > 0 && v < Infinity)) return null;
  const before = Float64Array.from(order, (_, t) => (t === 0 ? 0 : (steps[t - 1] as number)));
  const news = before.map((f) => Math.sqrt((1 - f) * (1 + f)));
  if (!news.every((s) => s > 1e-7)) return null;
  return { order, roots: variances.map(Math.sqrt), steps: before, news };
}

/** Rows of a given width: n of them, at the chain's places. */
type Rows = Float64Array;

/** P^-1 times rows, in place. */
export function whitenChain({ order, roots, steps, news }: Chain, rows: Rows, width = 1): void {
  for (let t = order.length - 1; t >= 0; t--) {
    const i = order[t] as number;
    const own = i * width;
    const before = t === 0 ? own : (order[t - 1] as number) * width;
    const factor = 1 / (roots[i] as number) / (news[t] as number);
    const share = t === 0 ? 0 : (steps[t] as number) / (roots[order[t - 1] as number] as number) / (news[t] as number);
    for (let c = 0; c < width; c++)
      rows[own + c] = factor * (rows[own + c] as number) - share * (rows[before + c] as number);
  }
}

/** P^-T times rows, in place. */
export function backwardChain({ order, roots, steps, news }: Chain, rows: Rows, width = 1): void {
  const n = order.length;
  for (let t = 0; t < n; t++) {
    const i = order[t] as number;
    const own = i * width;
    const last = t === n - 1;
    const after = last ? own : (order[t + 1] as number) * width;
    const share = last ? 0 : (steps[t + 1] as number) / (news[t + 1] as number);
    for (let c = 0; c < width; c++)
      rows[own + c] =
        ((rows[own + c] as number) / (news[t] as number) - share * (rows[after + c] as number)) / (roots[i] as number);
  }
}

/** P times rows, in place. */
export function unwhitenChain({ order, roots, steps, news }: Chain, rows: Rows, width = 1): void {
  timesLower({ order, steps, news }, rows, width);
  for (const i of order)
    for (let c = i * width; c < (i + 1) * width; c++) rows[c] = (rows[c] as number) * (roots[i] as number);
}

/** P' times rows, in place. */
export function rootChain({ order, roots, steps, news }: Chain, rows: Rows, width = 1): void {
  for (const i of order)
    for (let c = i * width; c < (i + 1) * width; c++) rows[c] = (rows[c] as number) * (roots[i] as number);
  timesUpper({ order, steps, news }, rows, width);
}

/** L times rows, in place: z_t = f_t z_(t-1) + s_t e_t. */
export function timesLower({ order, steps, news }: Omit<Chain, 'roots'>, rows: Rows, width: number): void {
  for (let t = 0; t < order.length; t++) {
    const own = (order[t] as number) * width;
    const before = t === 0 ? own : (order[t - 1] as number) * width;
    const [f, s] = [t === 0 ? 0 : (steps[t] as number), news[t] as number];
    for (let c = 0; c < width; c++) rows[own + c] = s * (rows[own + c] as number) + f * (rows[before + c] as number);
  }
}

/** L' times rows, in place: y_t = x_t + f_(t+1) y_(t+1), then s_t y_t. */
export function timesUpper({ order, steps, news }: Omit<Chain, 'roots'>, rows: Rows, width: number): void {
  const n = order.length;
  for (let t = n - 2; t >= 0; t--) {
    const own = (order[t] as number) * width;
    const after = (order[t + 1] as number) * width;
    const f = steps[t + 1] as number;
    for (let c = 0; c < width; c++) rows[own + c] = (rows[own + c] as number) + f * (rows[after + c] as number);
  }
  for (let t = 0; t < n; t++) {
    const own = (order[t] as number) * width;
    for (let c = own; c < own + width; c++) rows[c] = (rows[c] as number) * (news[t] as number);
  }
}

/** Diagonal of the inverse, at the chain's places. */
export function inverseDiagonalOfChain({ order, roots, steps, news }: Chain): Float64Array {
  const n = order.length;
  const diagonal = new Float64Array(n);
  for (let t = 0; t < n; t++) {
    const i = order[t] as number;
    const own = 1 / (news[t] as number);
    const next = t === n - 1 ? 0 : (steps[t + 1] as number) / (news[t + 1] as number);
    diagonal[i] = (own * own + next * next) / (roots[i] as number) / (roots[i] as number);
  }
  return diagonal;
}

/** P^-1 x in double-double, in place. */
export function wideChainWhitening({ variances, order, steps }: SerialForm): (x: Decimals) => void {
  const inverses = inverseRootsOf(variances);
  const news = Array.from(steps, (f): Pair => squareRoot(multiply(subtract([1, 0], [f, 0]), add([1, 0], [f, 0]))));
  return (x) => {
    const scaled = wideTimes(x, inverses);
    const at = (t: number): Pair => [
      scaled.high[order[t] as number] as number,
      scaled.low[order[t] as number] as number,
    ];
    for (let t = 0; t < order.length; t++) {
      const value =
        t === 0
          ? at(0)
          : divide(subtract(at(t), multiply([steps[t - 1] as number, 0], at(t - 1))), news[t - 1] as Pair);
      x.high[order[t] as number] = value[0];
      x.low[order[t] as number] = value[1];
    }
  };
}
