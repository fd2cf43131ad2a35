import type { Covariance } from '../algebra/covariance';
import { factorOf } from '../algebra/factored';
import { reflectAll } from '../algebra/householder';
import { projectOut, spanOf } from '../algebra/orthonormal';
import { log } from '../numbers/elementary';
import { plainSquares } from '../numbers/sums';

/** A likelihood in which only a free scale is left to maximise over: it profiles out. */
export interface Rule {
  readonly restricted: boolean;
  /** True where a factor over all of Omega is estimated with the rest. */
  readonly freeScale: boolean;
}

/** The likelihood of responses at one Omega, up to a constant that no Omega changes. */
export interface AtShape {
  /** Twice the log-likelihood of a response of length G. */
  readonly twiceLogLikelihood: (response: Float64Array) => number;
}

/**
 * Likelihoods of one model at several Omegas.
 *
 *     full        - G ln(r'Omega^-1 r) - ln det Omega                a factor free;   - r'Omega^-1 r - ln det Omega   known
 *     restricted  - (G-k) ln(r'Omega^-1 r) - ln det Omega - ln |X'Omega^-1 X|;        the same with - r'Omega^-1 r
 *
 * basis: of the model's columns, orthonormal, length G each: its own determinant is constant; Omega: positive definite.
 */
export function likelihoodsOf(basis: readonly Float64Array[], rule: Rule): (omega: Covariance) => AtShape {
  return (omega) => {
    const { whitened, logDeterminant } = factorOf(omega);
    const moved = basis.map(whitened);
    const orthonormal = spanOf(moved);
    const freedom = omega.diagonal.length - (rule.restricted ? basis.length : 0);
    let offset = logDeterminant;
    if (rule.restricted)
      for (const [j, column] of reflectAll(moved).triangle.entries()) offset += 2 * log(Math.abs(column[j] as number));
    const residuals = new Float64Array(omega.diagonal.length);
    return {
      twiceLogLikelihood: (response) => {
        const left = plainSquares(projectOut(orthonormal, whitened(response), residuals));
        return -offset - (rule.freeScale ? freedom * log(left / freedom) + freedom : left);
      },
    };
  };
}
