import type { Plan } from './plan';

/** Whether the plan is fitted by maximum likelihood with a link: the mean is then on the outcome scale, and the outcome stays as it is. */
export function isLinked(plan: Pick<Plan, 'outcomeScale' | 'estimate' | 'variance'>): boolean {
  return plan.outcomeScale !== 'identity' && plan.estimate.method === 'full' && isOfCounts(plan);
}

/** Whether the sampling part is that of counts: binomial, or counts. */
export function isOfCounts({ variance }: Pick<Plan, 'variance'>): boolean {
  return variance.parts.some(({ kind }) => kind === 'binomial' || kind === 'counts');
}
