import type { Code, Problem, Troubles } from './problems';

/** What a step that can meet expected trouble returns: a value, or every problem of the stage. A bug throws instead. */
export type Outcome<T> = { readonly ok: true; readonly value: T } | Refusal;

export interface Refusal {
  readonly ok: false;
  /** At least one, in the order in which they are reported. */
  readonly problems: readonly Problem[];
}

export function done<T>(value: T): Outcome<T> {
  return { ok: true, value };
}

/** at: JSON pointer into the plan or payload, "" for the whole; null where there is no place to point at. */
export function problem<C extends Code>(code: C, facts: Troubles[C], at: string | null = null): Problem {
  // The pair is right by the signature; TypeScript cannot follow it through a generic union.
  return { code, at, facts } as Problem;
}

export function refuse<C extends Code>(code: C, facts: Troubles[C], at: string | null = null): Refusal {
  return { ok: false, problems: [problem(code, facts, at)] };
}

export function refuseAll(problems: readonly Problem[]): Refusal {
  if (problems.length === 0) throw new RangeError('a refusal needs a problem');
  return { ok: false, problems };
}
