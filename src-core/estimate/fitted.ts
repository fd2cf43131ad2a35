import type { Design } from '../model/design';
import type { Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import type { Estimate } from '../protocol/plan';

/**
 * A fitted model, as every later room takes it. G cells, k coefficients. Omega = diag(variances); the weights of the estimator come from
 * `weighting`, which is the same vector under target "structure".
 */
export interface Fitted {
  readonly response: Decimals;
  readonly design: Design;
  readonly structure: Structure;
  readonly estimate: Estimate;
  /** Variance parameters at the estimate, in the order of structure.parameters, the scale included. */
  readonly theta: Float64Array;
  /** v_g at theta, scale included: the fitted Omega. */
  readonly variances: Float64Array;
  /** v_g with a free scale left out (phi = 1); equals variances where there is none. */
  readonly shape: Float64Array;
  /** phi where the structure has one free common scale over everything, else null (variances are then wholly given or hold their own parameters). */
  readonly scale: number | null;
  /** a_g of the estimator's weights 1 / a_g, up to a factor. */
  readonly weighting: Float64Array;
  readonly targetIsStructure: boolean;
  readonly coefficients: Float64Array;
  /** y - X b on the outcome's scale. */
  readonly residuals: Float64Array;
  /** residuals / sqrt(shape). */
  readonly whitened: Float64Array;
  /** k x k, rows: C Omega C'. Null entries do not occur; NaN where G = k leaves a free scale undefined. */
  readonly covariance: readonly Float64Array[];
  /** Roots of the covariance's diagonal, k: standard errors, representable even where a variance is not. NaN as there. */
  readonly errors: Float64Array;
  /** C: k rows of length G, b = C y. */
  readonly pulls: readonly Float64Array[];
  /** (X' A^-1 X)^-1 with A = weighting: k x k, rows. */
  readonly gramInverse: readonly Float64Array[];
  /** Diagonal of X (X'A^-1X)^-1 X'A^-1. */
  readonly leverages: Float64Array;
  readonly residualFreedom: number;
  /** Number of variance parameters that were estimated, the scale included. */
  readonly estimatedParameters: number;
  readonly digits: number;
  readonly condition: number;
  readonly converged: boolean;
  readonly startsTried: number;
}
