import type { Covariance } from '../algebra/covariance';
import type { Design } from '../model/design';
import type { Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import type { Estimate } from '../protocol/plan';

/**
 * A fitted model, as every later room takes it. G cells, k coefficients. Omega is the fitted covariance of the cells' errors; the weights of the
 * estimator come from `weighting`, which is Omega up to a factor under target "structure".
 */
export interface Fitted {
  readonly response: Decimals;
  readonly design: Design;
  readonly structure: Structure;
  readonly estimate: Estimate;
  /** Variance parameters at the estimate, in the order of structure.parameters, the scale included. */
  readonly theta: Float64Array;
  /** Omega at theta, scale included. */
  readonly omega: Covariance;
  /** Omega with a free common scale left out (phi = 1); the same where there is none. */
  readonly omegaShape: Covariance;
  /** True where Omega has blocks: cells go together. */
  readonly correlated: boolean;
  /** Diagonal of omega. */
  readonly variances: Float64Array;
  /** Diagonal of omegaShape. */
  readonly shape: Float64Array;
  /** phi where the structure has one free common scale over everything, else null (variances are then wholly given or hold their own parameters). */
  readonly scale: number | null;
  /** A of the estimator's weights A^-1, up to a factor. */
  readonly weighting: Covariance;
  readonly targetIsStructure: boolean;
  readonly coefficients: Float64Array;
  /** y - X b on the outcome's scale. */
  readonly residuals: Float64Array;
  /** P^-1 times residuals, omegaShape = P P': residuals / sqrt(shape) where cells are independent. */
  readonly whitened: Float64Array;
  /** k x k, rows: C Omega C'. Null entries do not occur; NaN where G = k leaves a free scale undefined. */
  readonly covariance: readonly Float64Array[];
  /** Roots of the covariance's diagonal, k: standard errors, representable even where a variance is not. NaN as there. */
  readonly errors: Float64Array;
  /** C: k rows of length G, b = C y. */
  readonly pulls: readonly Float64Array[];
  /** (X' A^-1 X)^-1 with A = weighting: k x k, rows. */
  readonly gramInverse: readonly Float64Array[];
  /** 1 - Q_gg / (A^-1)_gg, Q = A^-1 - A^-1 X (X'A^-1X)^-1 X'A^-1: the diagonal of X (X'A^-1X)^-1 X'A^-1 where A is diagonal. */
  readonly leverages: Float64Array;
  /** Orthonormal columns Q of the design whitened by the weighting A = P P', P^-1 X = Q R: k of length G. */
  readonly basis: readonly Float64Array[];
  /** R^-1 as columns. */
  readonly inverse: readonly Float64Array[];
  readonly residualFreedom: number;
  /** Number of variance parameters that were estimated, the scale included. */
  readonly estimatedParameters: number;
  readonly digits: number;
  readonly condition: number;
  readonly converged: boolean;
  readonly startsTried: number;
  /** Present where the sampling part follows from fitted means: what it was iterated to. `structure` then holds its variances there. */
  readonly fixedPoint?: FixedPoint;
}

/** The means at which a binomial or counts part stands. */
export interface FixedPoint {
  readonly kind: 'binomial' | 'counts';
  /** True where nothing stands beside that part: the fit is then one of maximum likelihood, and a free scale is Pearson / (G - k). */
  readonly alone: boolean;
  readonly rounds: number;
  /** Fitted means: shares, or rates. */
  readonly means: Float64Array;
  readonly deviance: number | null;
  /** ln L of the counts; null under a free scale or one set by the user, on the identity scale, and where they are no counts. */
  readonly logLikelihood: number | null;
  /** Present under maximum likelihood with a link: `response` is then the working one, z = eta + (y - mu) / slope. */
  readonly link: Linearised | null;
}

/** What the working response was made from. */
export interface Linearised {
  readonly scale: 'log' | 'logit';
  /** y: shares, or rates. */
  readonly observed: Decimals;
  /** dmu/deta, length G. */
  readonly slopes: Float64Array;
}
