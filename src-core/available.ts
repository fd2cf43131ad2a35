import { problem } from './protocol/outcome';
import type { Plan } from './protocol/plan';
import type { Problem } from './protocol/problems';

/**
 * Everything in a plan that the contract holds and this version does not do, each by name at its place: refused by `run`, never ignored.
 * A list that comes back empty says that the whole plan can be run.
 */
export function unavailable({ disclosure }: Pick<Plan, 'disclosure'>): Problem[] {
  return disclosure === null ? [] : [problem('not-available', { what: 'disclosure' }, '/disclosure')];
}
