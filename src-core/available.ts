import { absentParts } from './model/structure-of';
import { problem } from './protocol/outcome';
import type { Plan } from './protocol/plan';
import type { Problem } from './protocol/problems';

/**
 * Everything in a plan that the contract holds and this version does not fit, each by name at its place: refused by `run`, never ignored.
 * A list that comes back empty says that the whole plan can be fitted.
 */
export function unavailable(plan: Plan): Problem[] {
  const absent = (what: string, at: string): Problem[] => [problem('not-available', { what }, at)];
  const { data, roles, outcomeScale, inference, target, beside } = plan;
  return [
    ...(Object.keys(data.limits).length > 0 ? absent('limits', '/data/limits') : []),
    ...(data.sizeWithin !== null ? absent('sizeWithin', '/data/sizeWithin') : []),
    ...(roles.withinSd !== null ? absent('withinSd', '/roles/withinSd') : []),
    ...(outcomeScale === 'logit' ? absent('logit', '/outcomeScale') : []),
    ...absentParts(plan.variance.parts, '/variance'),
    ...(typeof target === 'string' ? [] : absentParts(target.parts, '/target')),
    ...(inference.kind === 'kenward-roger' || inference.kind === 'clustered' || inference.kind === 'wild'
      ? absent(inference.kind, '/inference/kind')
      : []),
    ...beside.flatMap((rival, i) => (typeof rival === 'string' ? [] : absentParts(rival.parts, `/beside/${i}`))),
    ...(plan.disclosure !== null ? absent('disclosure', '/disclosure') : []),
  ];
}
