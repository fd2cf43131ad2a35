import type { Decimals } from '../numbers/decimals';
import { add, divide, multiply, type Pair, squareRoot, subtract } from '../numbers/double-double';
import type { RankOne, RanksForm } from './block-form';
import { layoutOf } from './rank-roots';
import { type WideNumber, wideAdd, wideDot, wideQuotient, wideRoot, wideTimes, wideZeros } from './wide';

/** One factor I - beta w w' of the inverse root, in double-double. */
interface WideFactor {
  readonly vector: Decimals;
  readonly places: Int32Array;
  readonly beta: Pair;
}

/**
 * P^-1 x of a diagonal and rank-one terms in double-double, in place; the same P as in `rankRootsOf`.
 *
 * form: known to be positive definite.
 */
export function wideRankWhitening(form: RanksForm): (x: Decimals) => void {
  const { diagonal, ranks } = form;
  const inverses = inverseRootsOf(diagonal);
  const { order, earlier, spread } = layoutOf(form);
  const buffer = wideZeros(diagonal.length);
  const factors: WideFactor[] = [];
  for (const [l, t] of order.entries()) {
    const { factor, vector, places } = ranks[t] as RankOne;
    const first = wideTimes({ high: vector, low: new Float64Array(vector.length) }, taken(inverses, places));
    put(buffer, first, places);
    for (const m of earlier[l] ?? []) takeOff(factors[m] as WideFactor, buffer);
    const own = spread[l] as Int32Array;
    const w = taken(buffer, own);
    put(buffer, wideZeros(own.length), own);
    factors.push({ vector: w, places: own, beta: betaOf(factor, w) });
  }
  return (x) => {
    const scaled = wideTimes(x, inverses);
    x.high.set(scaled.high);
    x.low.set(scaled.low);
    for (const factor of factors) takeOff(factor, x);
  };
}

/** alpha / root of 1 + c w'w, alpha = c / (1 + root). */
function betaOf(factor: number, w: Decimals): Pair {
  const squares = wideDot(new Float64Array(2), w, w);
  const growth = add([1, 0], multiply([factor, 0], [squares[0] as number, squares[1] as number]));
  const root = squareRoot(growth);
  return divide(divide([factor, 0], add([1, 0], root)), root);
}

function takeOff({ vector, places, beta }: WideFactor, x: Decimals): void {
  const part = taken(x, places);
  const along = wideDot(new Float64Array(2), vector, part);
  const share = multiply(beta, [along[0] as number, along[1] as number]);
  wideAdd(part, subtract([0, 0], share), vector);
  put(x, part, places);
}

function taken(x: Decimals, places: Int32Array): Decimals {
  const part = wideZeros(places.length);
  for (let a = 0; a < places.length; a++) {
    part.high[a] = x.high[places[a] as number] as number;
    part.low[a] = x.low[places[a] as number] as number;
  }
  return part;
}

function put(x: Decimals, part: Decimals, places: Int32Array): void {
  for (let a = 0; a < places.length; a++) {
    x.high[places[a] as number] = part.high[a] as number;
    x.low[places[a] as number] = part.low[a] as number;
  }
}

/** 1 / root of each variance, in double-double. */
export function inverseRootsOf(variances: Float64Array): Decimals {
  const inverses = wideZeros(variances.length);
  const number: WideNumber = new Float64Array(2);
  for (let i = 0; i < variances.length; i++) {
    wideQuotient(number, [1, 0], wideRoot(number, [variances[i] as number, 0]));
    inverses.high[i] = number[0] as number;
    inverses.low[i] = number[1] as number;
  }
  return inverses;
}
