import { likelihoodAt } from '../estimate/likelihood';
import { withFixed } from '../model/structure';
import type { Likelihoods } from './likelihoods';
import type { Ends } from './profile';
import { qProfile } from './q-profile';

/**
 * Q-profile interval of tau^2 for a fit of between + given with a fixed scale; the rule that estimated tau^2 plays no part in it.
 *
 * Null ends for every other structure.
 *
 * Example: thirteen vaccine trials, mean alone: 0.1197 to 1.1115.
 */
export function qProfileOf({ fitted, rows }: Likelihoods, level: number): Ends {
  const { structure, residualFreedom } = fitted;
  if (structure.betweenAt < 0 || structure.scaleAt >= 0) return { low: null, high: null };
  const held = withFixed(structure, 'tau2', 0);
  const statistic = (tau2: number): number => {
    const theta = fitted.theta.slice();
    theta[structure.betweenAt] = tau2;
    const at = likelihoodAt({ rows, structure: held, restricted: false, theta });
    return at ? at.scaleRatio * rows.cells : Number.NaN;
  };
  const average = structure.sampling.reduce((sum, a) => sum + a / rows.cells, 0);
  return qProfile({ statistic, freedom: residualFreedom, level, scale: average });
}
