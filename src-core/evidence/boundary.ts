import { underStructure } from '../estimate/fit';
import { freeParameters } from '../model/structure';
import type { Evidence } from '../protocol/result';
import { likelihoodsOf, type Rule } from './between-likelihood';
import { type Boundary, boundaryDeparture } from './boundary-departure';
import { type Frame, solvedUnder } from './frame';
import { mixtureUpper, mixtureWeights } from './mixture';
import { evidenceOf, notApplicable, withDeparture } from './reading';

/**
 * Likelihood ratio of the between part: is tau^2 above 0?
 *
 *     2 (l at the fit - l at tau^2 = 0), by the method's own likelihood; half chi-square on 1, half on 0
 *
 * Not applicable without a between part or with tau^2 set by the user, under methods other than full and restricted, and where the
 * size exponent is estimated beside it.
 * With phi at 0 in the fit the ratio stands, and no departure is told: there is no sampling part for it to stand beside.
 * detail: zero (["tau2"]), weights of chi-square on 0, 1, 2, correlation (null for one variance), likelihood.
 * Source: Self & Liang 1987.
 */
export function boundaryLikelihoodRatio(frame: Frame, cancelled: () => boolean): Evidence {
  const test = 'boundary-likelihood-ratio';
  const { structure, estimate, theta } = frame.fitted;
  const free = freeParameters(structure).map((i) => structure.parameters[i]?.role);
  if (!free.includes('between') || free.includes('exponent')) return notApplicable(test, 'structure');
  const { method } = estimate;
  if (method !== 'full' && method !== 'restricted') return notApplicable(test, 'method', { zero: ['tau2'] });
  if (frame.freedom < 1) return notApplicable(test, 'no-residual-freedom', { zero: ['tau2'] });

  const rule: Rule = { restricted: method === 'restricted', freeScale: free.includes('scale') };
  const boundary = boundaryOf(frame, rule);
  if (!boundary.sampling.every((a) => a > 0)) return notApplicable(test, 'structure', { zero: ['tau2'] });
  const tau2 = theta[structure.betweenAt] as number;
  const { residuals } = underStructure(frame.fitted);
  const at = (shape: Float64Array) => boundary.likelihoodAt(shape).twiceLogLikelihood(residuals);
  const statistic = tau2 > 0 ? Math.max(0, at(frame.fitted.variances) - at(boundary.sampling)) : 0;
  const weights = mixtureWeights(null);
  const detail = { zero: ['tau2'], weights, correlation: null, likelihood: method };
  const evidence = evidenceOf(test, { statistic, freedom1: 1, p: mixtureUpper(statistic, weights), detail });
  // Without a sampling part at the fit there is none for a departure to stand beside.
  return withDeparture(evidence, boundary.phi > 0 ? boundaryDeparture(frame, boundary, cancelled) : 'not-defined');
}

/** phi at the fit, 1 where the scale is known: v = phi (a + tau^2 / phi). */
function boundaryOf({ fitted }: Frame, rule: Rule): Boundary {
  const { structure, theta } = fitted;
  const phi = structure.scaleAt < 0 ? 1 : (theta[structure.scaleAt] as number);
  const sampling = structure.sampling.map((a) => (rule.freeScale ? a : phi * a));
  const unit = rule.freeScale ? phi : 1;
  const { basis } = solvedUnder(fitted, new Float64Array(sampling.length).fill(1));
  return {
    rule,
    phi: unit,
    sampling,
    shapeAt: (tau2) => sampling.map((a) => a + tau2 / unit),
    likelihoodAt: likelihoodsOf(basis, rule),
  };
}
