import type { Code, Troubles } from '../protocol/problems';
import { count, list, quoted } from './numbers';

/** The sentences of some codes: facts, and the place in the plan, to text. */
export type Sentences<C extends Code> = { readonly [K in C]: (facts: Troubles[K], at: string | null) => string };

/** The suggestion of a message, with the space before it; without a nearest name what else to do. */
export function meant(nearest: string | null, otherwise = ''): string {
  if (nearest !== null) return ` Did you mean ${quoted(nearest)}?`;
  return otherwise === '' ? '' : ` ${otherwise}`;
}

export function place(file: string, row: number, column: string): string {
  return `${quoted(file)}, row ${count(row)}, column ${quoted(column)}`;
}

export function pairs(of: Readonly<Record<string, string>>): string {
  return list(Object.entries(of).map(([column, value]) => `${column} = ${value}`));
}
