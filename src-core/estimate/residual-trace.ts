import type { RanksForm } from '../algebra/block-form';
import { applied, type Covariance, type CovarianceBlock } from '../algebra/covariance';
import { type Factored, factorOf } from '../algebra/factored';
import type { Solved } from '../algebra/least-squares';
import { leveragesOf } from '../algebra/orthonormal';
import { plainDot } from '../numbers/sums';

/**
 * tr(M Omega), what r' A^-1 r is expected to be under an Omega of errors: G - k where Omega is A.
 *
 *     M = A^-1 - A^-1 X (X'A^-1X)^-1 X'A^-1,  tr(M Omega) = tr(A^-1 Omega) - tr(Z' Omega Z),  Z = P^-T Q
 *
 * solved: least squares weighted by A = P P', with its orthonormal basis Q.
 */
export function residualTrace(of: {
  readonly solved: Pick<Solved, 'basis'>;
  readonly weighting: Covariance;
  readonly omega: Covariance;
}): number {
  const { solved, weighting, omega } = of;
  if (!weighting.blocks && !omega.blocks) {
    const leverages = leveragesOf(solved.basis, omega.diagonal.length);
    return omega.diagonal.reduce(
      (sum, v, g) => sum + (v / (weighting.diagonal[g] as number)) * (1 - (leverages[g] as number)),
      0,
    );
  }
  const factor = factorOf(weighting);
  const back = solved.basis.map(factor.backwards);
  const explained = back.reduce((sum, row) => sum + plainDot(row, applied(omega, row)), 0);
  return traceOfInverse(weighting, omega) - explained;
}

/** tr(A^-1 B), the blocks of either as they are. */
function traceOfInverse(a: Covariance, b: Covariance): number {
  const factor = factorOf(a);
  let trace = 0;
  for (const [g, value] of factor.inverseDiagonal().entries()) trace += value * (b.diagonal[g] as number);
  if (!a.blocks) return trace;
  for (const block of b.blocks ?? [])
    trace +=
      block.form?.kind === 'ranks' ? beyondDiagonal(factor, block.cells, block.form) : offDiagonal(factor, block);
  return trace;
}

function offDiagonal({ inverseAmong }: Factored, { cells, matrix }: CovarianceBlock): number {
  const among = inverseAmong(cells);
  const n = cells.length;
  let sum = 0;
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) if (i !== j) sum += (among[i * n + j] as number) * (matrix[i * n + j] as number);
  return sum;
}

/** c (u'A^-1 u - sum of u^2 (A^-1)_gg) over the rank-one terms of a block: what they hold beside the diagonal. */
function beyondDiagonal(factor: Factored, cells: Int32Array, { ranks }: RanksForm): number {
  const own = factor.inverseDiagonal();
  let sum = 0;
  for (const { factor: share, vector, places } of ranks) {
    const whole = new Float64Array(own.length);
    for (let a = 0; a < places.length; a++) whole[cells[places[a] as number] as number] = vector[a] as number;
    const whitened = factor.whitened(whole);
    sum += share * plainDot(whitened, whitened);
    for (const [g, u] of whole.entries()) if (u !== 0) sum -= share * u * u * (own[g] as number);
  }
  return sum;
}
