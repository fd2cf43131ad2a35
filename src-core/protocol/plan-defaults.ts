import { onlyScaleUnknown } from './parameter-names';
import type { AddedHalf, Estimate, Inference, OutcomeScale, Variance } from './plan';
import type { FilledPlan } from './plan-schema';

/**
 * The method that a structure takes where none is stated.
 *
 * `full` for log with a counts part; `least-squares` where nothing is unknown but one scale of all of Omega, parameters in `fixed` counting
 * as known; else `restricted`. Rivals take it by their own structure.
 */
export function defaultEstimate(variance: Variance, outcomeScale: OutcomeScale): Estimate {
  if (outcomeScale === 'log' && variance.parts.some(({ kind }) => kind === 'counts')) return { method: 'full' };
  return { method: onlyScaleUnknown(variance) ? 'least-squares' : 'restricted' };
}

/** Halves are added to extreme cells under logit; full likelihood takes counts as they are. */
export function defaultAddedHalf(outcomeScale: OutcomeScale, estimate: Estimate): AddedHalf | null {
  return outcomeScale === 'logit' && estimate.method !== 'full' ? 'extreme-cells' : null;
}

/** Clustered errors are corrected by CR2, two ways by CR1. */
export function withCorrection(inference: FilledPlan['inference']): Inference {
  if (inference.kind !== 'clustered') return inference;
  return { ...inference, correction: inference.correction ?? (inference.alsoBy === null ? 'CR2' : 'CR1') };
}
