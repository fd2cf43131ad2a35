import { largestOf } from '../algebra/powers-of-two';
import { type Decimals, logOf, scaledBy } from '../numbers/decimals';
import { done, type Outcome, refuse } from '../protocol/outcome';
import type { Cells } from '../table/cells';

/** Outcomes between these have squares, and sums of many of those, that a double can hold. */
const SMALLEST = 1e-150;
const LARGEST = 1e150;

export interface OnScale {
  /** Length G, what the model explains. */
  readonly response: Decimals;
  /** The cells with their outcome and errors on that scale. */
  readonly cells: Cells;
}

/**
 * The outcome on the scale on which it is fitted.
 *
 *     identity: y, s        log: ln y, s / y
 *
 * Percent is divided by 100 before its logarithm is taken; the error of a logarithm is the first-order one.
 * Refuses a cell whose outcome has no logarithm (`transform-undefined`, at "/outcomeScale"), and outcomes whose squares run over or under (the same,
 * naming the largest).
 *
 * Example: a mean of 20 with error 2 becomes 2.9957 with error 0.1.
 */
export function onOutcomeScale(cells: Cells): Outcome<OnScale> {
  const { plan, outcome, error } = cells;
  // Under maximum likelihood with log link the mean is on the scale, not the outcome: zeros stay.
  const byLink = plan.variance.parts.some(({ kind }) => kind === 'counts');
  if (plan.outcomeScale !== 'log' || byLink) return inRange({ response: outcome, cells });
  const wrong = outcome.high.findIndex((y) => !(y > 0));
  if (wrong >= 0) {
    const column = (plan.roles.outcome ?? plan.roles.count) as string;
    const found = cells.numbers(column).texts[wrong] as string;
    const row = cells.rows[wrong] as number;
    return refuse(
      'transform-undefined',
      { file: plan.data.file, row, column, found, transform: 'log' },
      '/outcomeScale',
    );
  }
  const response = logOf(plan.roles.outcomeUnit === 'percent' ? scaledBy(outcome, 0.01) : outcome);
  const relative = error === null ? null : error.map((s, g) => s / (outcome.high[g] as number));
  return inRange({ response, cells: { ...cells, outcome: response, error: relative } });
}

function inRange(scaled: OnScale): Outcome<OnScale> {
  const { response, cells } = scaled;
  const largest = largestOf(response.high);
  if (largest === 0 || (largest >= SMALLEST && largest <= LARGEST)) return done(scaled);
  const at = response.high.findIndex((y) => Math.abs(y) === largest);
  const { outcome, count } = cells.plan.roles;
  const column = (outcome ?? count) as string;
  const found = cells.numbers(column).texts[at] as string;
  const facts = { file: cells.plan.data.file, row: cells.rows[at] as number, column, found, transform: 'power 2' };
  return refuse('transform-undefined', facts, outcome === null ? '/roles/count' : '/roles/outcome');
}
