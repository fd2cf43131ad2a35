import type { Fitted } from '../estimate/fitted';
import { pow } from '../numbers/elementary';
import { median } from '../numbers/order';
import type { Plan } from '../protocol/plan';
import type { Cells } from '../table/cells';
import { newCellVariance } from './new-cell';
import { numberOrNull } from './reference';

/**
 * Share of sampling in the error variance of a cell of median size.
 *
 *     phi a / (phi a + tau^2 + sum omega^2),  a the sampling part at the median effective size, or the median variance where it does not follow size alone
 *
 * In [0, 1]; null where no between part stands.
 *
 * Example: phi 136.4 and tau^2 2.1 at 40 respondents: 0.62.
 */
export function samplingShareOf(known: {
  readonly plan: Pick<Plan, 'variance'>;
  readonly fitted: Fitted;
  readonly cells: Pick<Cells, 'effectiveSize'>;
}): number | null {
  const { fitted } = known;
  if (fitted.structure.betweenAt < 0) return null;
  const sampling = middleOf(known);
  return numberOrNull(sampling / (sampling + newCellVariance(fitted)));
}

function middleOf({ plan, fitted, cells }: Parameters<typeof samplingShareOf>[0]): number {
  const { structure, theta } = fitted;
  const phi = structure.scaleAt < 0 ? 1 : (theta[structure.scaleAt] as number);
  const part = plan.variance.parts.find(({ kind }) => kind === 'per-size' || kind === 'size-power');
  if (part && cells.effectiveSize) {
    const size = median(cells.effectiveSize);
    if (part.kind === 'per-size') return phi / size;
    const estimated = theta[structure.parameters.findIndex(({ role }) => role === 'exponent')];
    if (part.kind === 'size-power')
      return phi * pow(size, -(part.exponent === 'estimate' ? (estimated as number) : part.exponent));
  }
  return median(structure.samplingAt(theta));
}
