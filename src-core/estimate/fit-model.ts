import type { Covariance } from '../algebra/covariance';
import type { Design } from '../model/design';
import type { Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import type { Estimate } from '../protocol/plan';
import type { Hooks } from '../protocol/source';
import type { Near } from './near';

/** What is fitted, and how. */
export interface Model {
  /** Length G, on the scale of the fit; under maximum likelihood with a link the shares or rates themselves. */
  readonly response: Decimals;
  readonly design: Design;
  readonly structure: Structure;
  readonly estimate: Estimate;
  /** A of the estimator's weights A^-1, up to a factor; "diagonal": that of the fitted Omega; null or absent: the fitted Omega itself. */
  readonly weighting?: Covariance | 'diagonal' | null;
  /** A likelihood is climbed from here alone, in place of a search. */
  readonly near?: Near;
  readonly hooks?: Hooks;
}
