import { spanOf } from '../algebra/orthonormal';
import { fUpper, fUpperQuantile } from '../numbers/distributions';
import { plainDot, plainSquares } from '../numbers/sums';
import type { Frame } from './frame';
import { evidenceOf, LEVEL, notApplicable } from './reading';

/**
 * Goldfeld & Quandt 1965 by size: do small cells scatter more than the structure says?
 *
 *     F = s^2(small) / s^2(large), each end fitted on its own in whitened coordinates; upper tail
 *
 * Cells by ascending size (ties in data order), the middle round(G / 5) left out, floor((G - c) / 2) at each end; freedom is an end's
 * cells less the columns that stand in it. Not applicable without sizes, with equal ones, or where an end has no freedom.
 * detail: cells (at each end), left (out of the middle).
 */
export function goldfeldQuandt(frame: Frame) {
  const test = 'goldfeld-quandt';
  const { count, bySize, sizes } = frame;
  if (!bySize || !sizes) return notApplicable(test, 'no-size');
  if (sizes[bySize[0] as number] === sizes[bySize.at(-1) as number]) return notApplicable(test, 'equal-sizes');
  const left = Math.round(count / 5);
  const cells = Math.floor((count - left) / 2);
  const small = endOf(frame, bySize.slice(0, cells));
  const large = endOf(frame, bySize.slice(count - cells));
  const detail = { cells, left };
  if (small.freedom < 1 || large.freedom < 1) return notApplicable(test, 'too-few-cells', detail);

  const strength = (residuals: Float64Array) => {
    const under = large.squares(residuals) / large.freedom;
    return under > 0 ? small.squares(residuals) / small.freedom / under : 0;
  };
  const statistic = strength(frame.residuals);
  if (statistic === 0) return notApplicable(test, 'no-variation', detail);
  const critical = fUpperQuantile(LEVEL, small.freedom, large.freedom);
  const evidence = evidenceOf(test, {
    statistic,
    freedom1: small.freedom,
    freedom2: large.freedom,
    p: fUpper(statistic, small.freedom, large.freedom),
    detail,
  });
  const largeSamplePower = (multipliers: Float64Array) => {
    const a = spreadOf(multipliers, small);
    const b = spreadOf(multipliers, large);
    return fUpper((critical * b.mean) / a.mean, a.freedom, b.freedom);
  };
  return { evidence, strength, critical, largeSamplePower };
}

interface End {
  readonly rows: readonly number[];
  readonly freedom: number;
  /** Residual sum of squares of the end fitted on its own. */
  readonly squares: (residuals: Float64Array) => number;
}

function endOf(frame: Frame, rows: readonly number[]): End {
  const take = (column: Float64Array) => Float64Array.from(rows, (g) => column[g] as number);
  const basis = spanOf(frame.basis.map(take));
  const y = new Float64Array(rows.length);
  return {
    rows,
    freedom: rows.length - basis.length,
    squares: (residuals) => {
      for (let i = 0; i < y.length; i++) y[i] = residuals[rows[i] as number] as number;
      for (const q of basis) {
        const along = plainDot(q, y);
        for (let i = 0; i < y.length; i++) y[i] = (y[i] as number) - along * (q[i] as number);
      }
      return plainSquares(y);
    },
  };
}

/** An end's residual mean square under variances d: a scaled chi-square of freedom f mean(d)^2 / mean(d^2). */
function spreadOf(multipliers: Float64Array, end: End): { mean: number; freedom: number } {
  let sum = 0;
  let squares = 0;
  for (const g of end.rows) {
    const d = multipliers[g] as number;
    sum += d;
    squares += d * d;
  }
  const count = end.rows.length;
  return { mean: sum / count, freedom: (end.freedom * sum * sum) / (count * squares) };
}
