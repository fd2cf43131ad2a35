import type { SerialForm, SerialSlope } from '../algebra/block-form';
import {
  backwardChain,
  type Chain,
  chainOf,
  timesLower,
  timesUpper,
  unwhitenChain,
  whitenChain,
} from '../algebra/chain';

import { log } from '../numbers/elementary';
import { type LinkedBlock, tracesOf } from './linked-block';

/**
 * A chain in a likelihood, at the cost of its cells: M_a = A_a + A_a', A_a = P^-1 dP.
 *
 *     by a parameter of the variances   A = L^-1 diag(d ln v / 2) L
 *     by the correlation                A = S L + T,  S_(t,t-1) = f_t' / s_t,  T_tt = s_t' / s_t = - f_t f_t' / s_t^2
 *
 * form, slopes: in units of the middle's roots, slopes by the free parameters each in its unit. Null where it is not positive definite.
 */
export function serialBlock(of: {
  readonly form: SerialForm;
  readonly slopes: () => readonly (SerialSlope | null)[];
}): LinkedBlock | null {
  const chain = chainOf(of.form);
  if (!chain) return null;
  let logDeterminant = 0;
  for (const root of chain.roots) logDeterminant += 2 * log(root);
  for (const s of chain.news) logDeterminant += 2 * log(s);
  if (!(Math.abs(logDeterminant) < Infinity)) return null;
  let known: readonly (Moving | null)[] | null = null;
  const slopes = () => (known ??= of.slopes().map((slope) => slope && movingOf(chain, slope)));
  return {
    logDeterminant,
    whiten: (rows, width) => whitenChain(chain, rows, width),
    slopes: () =>
      slopes().map(
        (slope) =>
          slope && { trace: traceOf(slope), times: (rows, width) => timesMoving(chain, slope, { rows, width }) },
      ),
    // tr(M_a M_b) = 2 tr(A_a A_b) + 2 tr(A_a A_b')
    traces: () => tracesOf(slopes(), (first, second) => 2 * pairTrace(chain, first, second)),
  };
}

/** A slope in the chain's order, index t. */
type Moving =
  | { readonly by: 'variances'; readonly halves: Float64Array }
  | { readonly by: 'steps'; readonly below: Float64Array; readonly own: Float64Array };

function movingOf({ order, steps, news }: Chain, slope: SerialSlope): Moving {
  if (slope.by === 'variances')
    return { by: 'variances', halves: Float64Array.from(order, (i) => (slope.relative[i] as number) / 2) };
  const below = Float64Array.from(order, (_, t) =>
    t === 0 ? 0 : (slope.steps[t - 1] as number) / (news[t] as number),
  );
  return { by: 'steps', below, own: below.map((s, t) => (-s * (steps[t] as number)) / (news[t] as number)) };
}

function traceOf(slope: Moving): number {
  let sum = 0;
  for (const value of slope.by === 'variances' ? slope.halves : slope.own) sum += 2 * value;
  return sum;
}

/** (A + A') times rows, as new rows. */
function timesMoving(
  chain: Chain,
  slope: Moving,
  { rows, width }: { readonly rows: Float64Array; readonly width: number },
): Float64Array {
  const forth = rows.slice();
  const back = rows.slice();
  if (slope.by === 'variances') {
    unwhitenChain(chain, forth, width);
    scale(chain, forth, { width, by: slope.halves });
    whitenChain(chain, forth, width);
    backwardChain(chain, back, width);
    scale(chain, back, { width, by: slope.halves });
    const { order, roots } = chain;
    for (const i of order)
      for (let c = i * width; c < (i + 1) * width; c++) back[c] = (back[c] as number) * (roots[i] as number);
    timesUpper(chain, back, width);
  } else {
    timesLower(chain, forth, width);
    shift(chain, forth, { width, below: slope.below, forward: true });
    shift(chain, back, { width, below: slope.below, forward: false });
    timesUpper(chain, back, width);
    for (const [t, i] of chain.order.entries())
      for (let c = i * width; c < (i + 1) * width; c++)
        forth[c] = (forth[c] as number) + 2 * (slope.own[t] as number) * (rows[c] as number);
  }
  return forth.map((value, at) => value + (back[at] as number));
}

function scale(
  { order }: Chain,
  rows: Float64Array,
  { width, by }: { readonly width: number; readonly by: Float64Array },
): void {
  for (const [t, i] of order.entries())
    for (let c = i * width; c < (i + 1) * width; c++) rows[c] = (rows[c] as number) * (by[t] as number);
}

/** S times rows, or S' times rows, in place. */
function shift(
  { order }: Chain,
  rows: Float64Array,
  { width, below, forward }: { readonly width: number; readonly below: Float64Array; readonly forward: boolean },
): void {
  const n = order.length;
  for (let step = 0; step < n; step++) {
    const t = forward ? n - 1 - step : step;
    const from = forward ? t - 1 : t + 1;
    const own = (order[t] as number) * width;
    const other = from < 0 || from >= n ? own : (order[from] as number) * width;
    const share = from < 0 || from >= n ? 0 : (below[forward ? t : from] as number);
    for (let c = 0; c < width; c++) rows[own + c] = share * (rows[other + c] as number);
  }
}

/** tr(A_a A_b) + tr(A_a A_b'); R^-1 of a chain has entries beside the diagonal alone. */
function pairTrace({ steps, news }: Chain, first: Moving, second: Moving): number {
  const n = steps.length;
  let sum = 0;
  for (let t = 0; t < n; t++) {
    const f = steps[t] as number;
    const squared = (news[t] as number) * (news[t] as number);
    if (first.by === 'variances' && second.by === 'variances') {
      const [x, y] = [first.halves[t] as number, second.halves[t] as number];
      // (x_t - x_(t-1)) (y_t - y_(t-1)) f^2 / s^2 is what neighbours add to the sum of 2 x y.
      sum += 2 * x * y;
      if (t > 0)
        sum += ((x - (first.halves[t - 1] as number)) * (y - (second.halves[t - 1] as number)) * f * f) / squared;
    } else if (first.by === 'steps' && second.by === 'steps') {
      sum += 2 * (first.own[t] as number) * (second.own[t] as number);
      sum += (first.below[t] as number) * (second.below[t] as number);
    } else {
      const moving = first.by === 'variances' ? first : second;
      const other = first.by === 'steps' ? first : second;
      if (moving.by !== 'variances' || other.by !== 'steps') continue;
      const half = moving.halves[t] as number;
      sum += 2 * half * (other.own[t] as number);
      if (t > 0)
        sum += (((other.below[t] as number) * f) / (news[t] as number)) * (half - (moving.halves[t - 1] as number));
    }
  }
  return sum;
}
