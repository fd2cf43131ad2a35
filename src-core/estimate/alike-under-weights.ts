import type { Design } from '../model/design';
import { type Outcome, refuse } from '../protocol/outcome';

/**
 * The refusal of columns that only the weights make depend on each other: the cells that tell them apart weigh less than rounding beside the others.
 *
 * dependent: places in coefficient order, as `leastSquares` gives them; at: the structure or target whose weights they are.
 *
 * Example: a slope on cells of size 1 beside one cell of size 1e40.
 */
export function alikeUnderWeights(
  design: Pick<Design, 'names'>,
  dependent: readonly number[],
  at = '/variance',
): Outcome<never> {
  const coefficients = dependent.map((j) => design.names[j] as string);
  return refuse('dependent-columns', { coefficients, underWeights: true }, at);
}
