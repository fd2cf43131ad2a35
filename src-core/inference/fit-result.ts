import { factored } from '../algebra/factored';
import { underStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import { chiSquareUpper } from '../numbers/distributions';
import { sumOfSquares } from '../numbers/sums';
import type { Plan } from '../protocol/plan';
import type { CarriedBy, FitResult } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { informationCriteria } from './criteria';
import { goodnessOfFit } from './goodness';
import type { Inferred } from './inferred';
import { isRestricted, type Likelihoods, likelihoodsOf, ownLikelihood, toldLikelihoods } from './likelihoods';
import { samplingShareOf } from './sampling-share';
import { tau2BiasOf } from './tau2-bias';
import { varianceParametersOf } from './variance-parameters';

/**
 * Everything that a result says of the fit itself.
 *
 * inferred: from `inferenceOf` on the same fit; carriedBy: what each term rests on, found beside; likelihoods: where they are at hand already.
 * residualSd: root of r'Wr / (G - k), W without a free common scale; null with G = k. chiSquare: r'Wr where every variance is known.
 *
 * Example: `fitResultOf({ fitted, inferred, cells, plan, carriedBy: [] })`.
 */
export function fitResultOf(known: {
  readonly fitted: Fitted;
  readonly inferred: Inferred;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly carriedBy: CarriedBy[];
  readonly likelihoods?: Likelihoods;
  readonly hooks?: Hooks;
}): FitResult {
  const { fitted, inferred, cells, plan, carriedBy } = known;
  const likelihoods = known.likelihoods ?? likelihoodsOf(fitted);
  const { residualFreedom } = fitted;
  const told = toldLikelihoods(likelihoods);
  const weightedRss = sumOfSquares(fitted.whitened);
  return {
    estimate: plan.estimate,
    inference: plan.inference,
    coefficients: inferred.coefficients,
    covariance: inferred.covariance,
    carriedBy,
    variance: varianceParametersOf(likelihoods, plan.inference.level, known.hooks),
    residualSd: residualFreedom > 0 ? Math.sqrt(weightedRss / residualFreedom) : null,
    weightedRss,
    residualFreedom,
    ...told,
    ...informationCriteria({
      logLikelihood: fitted.fixedPoint ? told.logLikelihood : ownLikelihood(likelihoods),
      cells: cells.count,
      coefficients: fitted.coefficients.length,
      varianceParameters: fitted.estimatedParameters,
      restricted: isRestricted(fitted),
    }),
    rSquared: goodnessOfFit(fitted),
    chiSquare: chiSquareOf(fitted),
    deviance: fitted.fixedPoint?.deviance ?? null,
    knappHartungQ: inferred.knappHartungQ,
    tau2Bias: biasOf(fitted),
    wild: inferred.wild,
    digits: fitted.digits,
    condition: fitted.condition,
    converged: fitted.converged,
    startsTried: fitted.startsTried,
    errorFreedom: inferred.errorFreedom,
    samplingShare: samplingShareOf({ plan, fitted, cells }),
  };
}

/** What judges known variances: nothing in them was estimated, so that their sum of squares has a distribution of its own. Null where Omega has no inverse. */
function chiSquareOf(fitted: Fitted): FitResult['chiSquare'] {
  if (fitted.estimatedParameters > 0 || !factored(fitted.omegaShape).ok) return null;
  const statistic = sumOfSquares(underStructure(fitted).whitened);
  const freedom = fitted.residualFreedom;
  return { statistic, freedom, p: freedom > 0 ? chiSquareUpper(statistic, freedom) : null };
}

function biasOf(fitted: Fitted): number | null {
  const { structure, estimate, fixedPoint } = fitted;
  const estimated = structure.parameters[structure.betweenAt]?.fixed === null;
  if (fixedPoint || estimate.method !== 'full' || !estimated || structure.scaleAt >= 0) return null;
  return tau2BiasOf(underStructure(fitted));
}
