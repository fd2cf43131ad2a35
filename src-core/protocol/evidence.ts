/** Why a test of the structure says nothing here: `detail.why` of a reading "not-applicable". */
export const whyNotCodes = [
  /** As many cells as coefficients. */
  'no-residual-freedom',
  /** The fit leaves no residuals to speak of. */
  'no-residuals',
  /** No size role. */
  'no-size',
  'equal-sizes',
  /** The model has an intercept alone, and no columns were named. */
  'no-columns',
  'too-few-cells',
  'too-many-cells',
  /** What the test divides by is zero. */
  'no-variation',
  /** The test has no reading under this structure. */
  'structure',
  /** Needs a fit by full or restricted likelihood. */
  'method',
  /** Every column that would be added depends on the model's own. */
  'nothing-added',
  /** No label column groups cells, no order and no neighbour list were given. */
  'no-grouping',
  /** The model holds the groups' own indicators: the statistic cannot vary. */
  'absorbed',
  /** The structure without the part could not be fitted. */
  'no-convergence',
  /** More than two variances at 0 together, a parameter that vanishes with its part, or another variance at 0: no mixture is known. */
  'no-mixture',
  /** The test needs independent cells: whitened residuals of correlated ones depend on the root chosen. */
  'correlated',
] as const;

export type WhyNot = (typeof whyNotCodes)[number];

/** Why a test has no smallest departure: `detail.departureWhy` beside a null. */
export const noDepartureCodes = [
  /** None is defined for this test. */
  'not-defined',
  'no-size',
  'equal-sizes',
  /** Not found with power .8 however large the departure. */
  'out-of-reach',
  'structure',
  'too-many-cells',
  'cancelled',
] as const;

export type NoDeparture = (typeof noDepartureCodes)[number];
