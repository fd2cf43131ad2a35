import type { Answer, FitResult, Reference } from '../protocol/result';

export type Joint = Extract<Answer, { freedom1: number }>;

/** What one kind of inference says of any combination of the coefficients of a fit. */
export interface Claim {
  /** k x k, the one behind the standard errors; null entries where it is undefined. */
  readonly covariance: (number | null)[][];
  /** Standard errors of the coefficients; null where undefined. */
  readonly errors: readonly (number | null)[];
  /** Standard error of a combination from its k multipliers; null where it is undefined. */
  readonly errorOf: (multipliers: ArrayLike<number>) => number | null;
  readonly referenceOf: (multipliers: ArrayLike<number>) => Reference | null;
  /** Whether the coefficients at these places are all 0. */
  readonly jointOf: (columns: readonly number[]) => Joint;
  /** p values that come from no distribution; null where the reference judges. */
  readonly drawn: {
    readonly pOf: (multipliers: ArrayLike<number>, against: number) => number | null;
    readonly wild: NonNullable<FitResult['wild']>;
  } | null;
}
