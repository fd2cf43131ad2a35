import type { Evidence } from '../protocol/result';

/** A test that the stated variances are right up to a factor, ready to be tried on residuals drawn afresh. */
export interface VarianceTest {
  readonly evidence: Evidence;
  /** What is held against `critical`: the test rejects above it. Length-G whitened residuals; 0 where undefined. */
  readonly strength: (residuals: Float64Array) => number;
  readonly critical: number;
  /** Chance of rejecting where the variances are the stated ones times d_g, in large samples. */
  readonly largeSamplePower: (multipliers: Float64Array) => number;
}
