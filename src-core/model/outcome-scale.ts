import { largestOf } from '../algebra/powers-of-two';
import { type Decimals, differenceOf, fromDoubles, logOf, quotientOf, scaledBy, sumOf } from '../numbers/decimals';
import { isLinked } from '../protocol/linked';
import { done, type Outcome, problem, refuse, refuseAll } from '../protocol/outcome';
import type { Cells } from '../table/cells';

export { isLinked };

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
 *     identity: y, s        log: ln y, s / y        logit: ln(p / (1 - p)), s / (p (1 - p))
 *     halves added under logit: p = (p m + 1/2) / (m + 1), m the effective size; `cells.addedHalves` tells which cells have them
 *
 * Percent is divided by 100 before a logarithm is taken; errors on log and logit are the first-order ones. Under maximum likelihood with a link the
 * outcome stays what it is, a share or a rate: none and all are taken as they are.
 * Refuses a cell whose outcome has no logarithm or logit (`transform-undefined`, at "/outcomeScale"), halves for cells without a size (`role-needed`),
 * and outcomes whose squares run over or under (`transform-undefined`, naming the largest).
 *
 * Example: a mean of 20 with error 2 becomes 2.9957 with error 0.1.
 * Source: Berkson 1955 for the empirical logit.
 */
export function onOutcomeScale(cells: Cells): Outcome<OnScale> {
  const { plan } = cells;
  if (plan.outcomeScale === 'identity') return inRange({ response: cells.outcome, cells });
  const inShares = plan.roles.outcomeUnit === 'percent' ? partsOf100(cells) : cells;
  if (isLinked(plan)) return inRange({ response: inShares.outcome, cells: inShares });
  return plan.outcomeScale === 'log' ? onLog(inShares) : onLogit(inShares);
}

function partsOf100(cells: Cells): Cells {
  const error = cells.error?.map((s) => s / 100) ?? null;
  return { ...cells, outcome: quotientOf(cells.outcome, fromDoubles(new Float64Array(cells.count).fill(100))), error };
}

function onLog(cells: Cells): Outcome<OnScale> {
  const { outcome, error } = cells;
  const wrong = outcome.high.findIndex((y) => !(y > 0));
  if (wrong >= 0) return undefinedAt(cells, wrong, 'log');
  const response = logOf(outcome);
  const relative = error === null ? null : error.map((s, g) => s / (outcome.high[g] as number));
  return inRange({ response, cells: { ...cells, outcome: response, error: relative } });
}

function onLogit(cells: Cells): Outcome<OnScale> {
  const { plan, effectiveSize: sizes } = cells;
  if (plan.addedHalf === 'all-cells' && !sizes)
    return refuseAll([problem('role-needed', { role: 'size', part: 'all-cells' }, '/addedHalf')]);
  const halves = cells.outcome.high.map((p) => {
    const extreme = !(p > 0 && p < 1);
    return sizes && (plan.addedHalf === 'all-cells' || (plan.addedHalf === 'extreme-cells' && extreme)) ? 0.5 : 0;
  });
  const shares = withHalves(cells, halves);
  const wrong = shares.high.findIndex((p) => !(p > 0 && p < 1));
  if (wrong >= 0) return undefinedAt(cells, wrong, 'logit');
  const rest = differenceOf(fromDoubles(new Float64Array(cells.count).fill(1)), shares);
  const response = differenceOf(logOf(shares), logOf(rest));
  const error = cells.error?.map((s, g) => s / (shares.high[g] as number) / (rest.high[g] as number)) ?? null;
  return inRange({ response, cells: { ...cells, outcome: response, error, addedHalves: halves } });
}

/** (p m + h) / (m + 2 h); from the counts themselves where no design effect stands between. */
function withHalves({ outcome, effectiveSize, size, counts }: Cells, halves: Float64Array): Decimals {
  if (!effectiveSize || halves.every((half) => half === 0)) return outcome;
  const sizes = fromDoubles(effectiveSize);
  const counted = counts && effectiveSize.every((m, g) => m === size?.[g]) ? fromDoubles(counts) : null;
  const behind = counted ?? fromDoubles(effectiveSize.map((m, g) => m * (outcome.high[g] as number)));
  const added = quotientOf(sumOf(behind, fromDoubles(halves)), sumOf(sizes, scaledBy(fromDoubles(halves), 2)));
  const of = (part: 'high' | 'low') =>
    outcome[part].map((own, g) => ((halves[g] as number) > 0 ? (added[part][g] as number) : own));
  return { high: of('high'), low: of('low') };
}

function undefinedAt({ plan, rows, numbers }: Cells, g: number, transform: string): Outcome<never> {
  const column = (plan.roles.outcome ?? plan.roles.count) as string;
  const found = numbers(column).texts[g] as string;
  const facts = { file: plan.data.file, row: rows[g] as number, column, found, transform };
  return refuse('transform-undefined', facts, '/outcomeScale');
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
