import { type Covariance, independent } from '../algebra/covariance';
import { errorOf } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';
import type { SmallestDeparture } from '../protocol/result';

type Errors = SmallestDeparture['errors'];

/** Root of diag C Omega' C' for independent errors of the variances given, C held. */
export function errorsUnder(fitted: Fitted, variances: Float64Array): Errors {
  return errorsThrough(fitted, independent(variances));
}

/** The same for errors of any covariance. */
export function errorsThrough(fitted: Fitted, omega: Covariance): Errors {
  return errorsFrom(fitted, (pull) => errorOf(pull, omega));
}

/** The error that every row of C has, by a rule of its own. */
export function errorsFrom(fitted: Fitted, errorBy: (pull: Float64Array) => number): Errors {
  return fitted.pulls.map((pull, j) => ({ term: fitted.design.names[j] as string, se: errorBy(pull) }));
}
