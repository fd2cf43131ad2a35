import { plainDot, plainSquares } from '../numbers/sums';
import type { Frame } from './frame';
import { type Pairs, partnerSums } from './pairs';

/** A variance of I below this share of E(I^2) is rounding: the model holds the groups' own indicators. */
const NO_VARIATION = 1e-12;

/** Moments of I under independence. */
export interface Moments {
  readonly expectation: number;
  /** Null where I cannot vary. */
  readonly variance: number | null;
  /** tr(M B) and tr(M B M B). */
  readonly trace: number;
  readonly traceOfSquare: number;
}

/**
 * Exact moments of I under normal, independent errors, without a G x G matrix.
 *
 *     M = I - QQ':  tr(MB) = -tr(Q'BQ),  tr(MBMB) = sum B - 2 |BQ|^2 + |Q'BQ|^2
 *     E = (G / sum B) tr(MB) / (G-k),  E(I^2) = (G / sum B)^2 [2 tr(MBMB) + tr(MB)^2] / ((G-k)(G-k+2))
 */
export function momentsOf(frame: Pick<Frame, 'basis' | 'count' | 'freedom'>, pairs: Pairs): Moments {
  const { basis, count, freedom } = frame;
  const moved = basis.map((q) => partnerSums(pairs, q));
  let trace = 0;
  let traceOfSquare = pairs.total;
  for (const [i, b] of moved.entries()) {
    traceOfSquare -= 2 * plainSquares(b);
    for (const [j, q] of basis.entries()) {
      const inside = plainDot(q, b);
      traceOfSquare += inside * inside;
      if (i === j) trace -= inside;
    }
  }
  const scale = count / pairs.total;
  const expectation = (scale * trace) / freedom;
  const second = (scale * scale * (2 * traceOfSquare + trace * trace)) / (freedom * (freedom + 2));
  const variance = second - expectation * expectation;
  return { expectation, variance: variance <= NO_VARIATION * second ? null : variance, trace, traceOfSquare };
}
