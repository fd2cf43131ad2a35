/** A least-squares solution of full rank, in the caller's units. G cells, k columns. */
export interface Solved {
  readonly solution: Float64Array;
  /** |b_QR - b_refined|, k: what refinement changed. */
  readonly shift: Float64Array;
  /** y - X b, length G, the unit of y. */
  readonly residuals: Float64Array;
  /** residuals / sqrt(v); P^-1 times residuals under a covariance P P'. */
  readonly whitened: Float64Array;
  /** Orthonormal columns Q of the whitened design, k of length G. */
  readonly basis: readonly Float64Array[];
  /** R^-1 as columns, X_whitened = Q R. */
  readonly inverse: readonly Float64Array[];
  /** R as columns, upper triangle. */
  readonly triangle: readonly Float64Array[];
  /** (X' V^-1 X)^-1 as rows. */
  readonly gramInverse: readonly Float64Array[];
  /** 2-norm condition of the whitened design, its columns scaled to unit length. */
  readonly condition: number;
  /** True where the residuals are no more than the rounding of doubles leaves. */
  readonly perfect: boolean;
}
