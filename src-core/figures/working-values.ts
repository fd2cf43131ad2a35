import { log, log1p } from '../numbers/elementary';
import { isLinked } from '../protocol/linked';
import type { Result } from '../protocol/result';

/**
 * What pulls act on, cell by cell: the observed values, under maximum likelihood with a link the working ones.
 *
 *     z = eta + (y - mu) / slope,  slope mu (1 - mu) on logit, mu on log
 *
 * Example: 3 of 10 at a fitted share of .5 on logit: -.2 / .25 = -.8.
 */
export function workingValues({ plan, cells }: Result): number[] {
  if (!isLinked(plan)) return cells.map(({ observed }) => observed);
  return cells.map(({ fitted: mu, residual }) =>
    plan.outcomeScale === 'log' ? log(mu) + residual / mu : log(mu) - log1p(-mu) + residual / mu / (1 - mu),
  );
}
