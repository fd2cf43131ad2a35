import type { Plan } from '../protocol/plan';
import type { Overturn } from '../protocol/result';
import { number } from './numbers';
import { structureFromKinds } from './structures';

type Change = Overturn['change'];

/** A change that was tried, as a phrase that stands before "gives": "leaving out year = 2025". */
export function changePhrase({ kind, what }: Change, plan: Plan | null = null): string {
  switch (kind) {
    case 'rival':
      return `the variance structure “${structureFromKinds(what)}” instead`;
    case 'cell':
      return plan?.roles.label === null ? `leaving out row ${what}` : `leaving out the cell ${what}`;
    case 'block':
      return `leaving out all cells with ${what}`;
    case 'exponent':
      return `error variance falling as size to the power ${number(Number(what), { digits: 2 })}`;
    case 'bound':
      return `${what} at its most extreme admissible values`;
    case 'robust':
      return what === 'model' ? 'model-based errors instead of robust ones' : `robust errors (${what})`;
  }
}

/** What a change takes a coefficient across, in a table. */
export function crossingName(crosses: NonNullable<Overturn['crosses']>): string {
  return crosses === 'zero' ? 'zero' : 'what matters';
}

/** What a change takes a coefficient across. */
export function crossingPhrase(crosses: NonNullable<Overturn['crosses']>): string {
  return crosses === 'zero' ? 'zero' : 'the smallest difference that matters';
}
