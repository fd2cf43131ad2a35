import { reflectAll } from '../algebra/householder';
import { projectOut, spanOf } from '../algebra/orthonormal';
import { log } from '../numbers/elementary';
import { plainSquares } from '../numbers/sums';

/** A likelihood in which only a free scale is left to maximise over: it profiles out. */
export interface Rule {
  readonly restricted: boolean;
  /** True where phi is estimated and multiplies the shape. */
  readonly freeScale: boolean;
}

/** The likelihood of responses at one shape of the variances, up to a constant that no shape changes. */
export interface AtShape {
  /** Twice the log-likelihood of a response of length G. */
  readonly twiceLogLikelihood: (response: Float64Array) => number;
}

/**
 * Likelihoods of one model at several shapes.
 *
 *     full        - G ln(r'r) - sum ln a               phi free;   - r'r - sum ln a              phi known, inside a
 *     restricted  - (G-k) ln(r'r) - sum ln a - ln |X'A^-1 X|;      the same with - r'r
 *
 * basis: of the model's columns, orthonormal, length G each: its own determinant is constant; a: the shape, above 0.
 */
export function likelihoodsOf(basis: readonly Float64Array[], rule: Rule): (shape: Float64Array) => AtShape {
  return (shape) => {
    const roots = shape.map((a) => Math.sqrt(a));
    const whiten = (column: Float64Array) => column.map((x, g) => x / (roots[g] as number));
    const moved = basis.map(whiten);
    const orthonormal = spanOf(moved);
    const freedom = shape.length - (rule.restricted ? basis.length : 0);
    let offset = shape.reduce((sum, a) => sum + log(a), 0);
    if (rule.restricted)
      for (const [j, column] of reflectAll(moved).triangle.entries()) offset += 2 * log(Math.abs(column[j] as number));
    const work = new Float64Array(shape.length);
    const residuals = new Float64Array(shape.length);
    return {
      twiceLogLikelihood: (response) => {
        for (let g = 0; g < work.length; g++) work[g] = (response[g] as number) / (roots[g] as number);
        const left = plainSquares(projectOut(orthonormal, work, residuals));
        return -offset - (rule.freeScale ? freedom * log(left / freedom) + freedom : left);
      },
    };
  };
}
