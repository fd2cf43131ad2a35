import type { CautionCode, CautionFacts, Shift } from '../protocol/cautions';
import type { Plan } from '../protocol/plan';
import { decimalsBy, number } from './numbers';
import { inOutcomeUnit } from './units';

/** Sentences of some cautions: facts, and the plan for its units where it is at hand, to text. */
export type CautionSentences<C extends CautionCode> = {
  readonly [K in C]: (facts: CautionFacts[K], plan: Plan | null) => string;
};

/** " The coefficient of income moves from 0.83 to 0.71 kg per plot (0.6 standard errors)."; nothing without a shift. */
export function shiftSentence(shift: Shift | null, plan: Plan | null, lead = 'The coefficient of'): string {
  if (shift === null) return '';
  const { term, from, to, inErrors } = shift;
  const error = inErrors === null || inErrors === 0 ? null : Math.abs(to - from) / inErrors;
  const decimals = decimalsBy(error, from);
  const shown = number(to, { decimals });
  const moved = plan === null ? shown : inOutcomeUnit(shown, plan);
  const errors = inErrors === null ? '' : ` (${number(inErrors, { digits: 2 })} of its standard errors)`;
  return ` ${lead} ${term} moves from ${number(from, { decimals })} to ${moved}${errors}.`;
}
