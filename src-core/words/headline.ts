import type { Result } from '../protocol/result';
import { interceptName } from '../protocol/term-names';

/**
 * The coefficients that are told first: those with a smallest difference that matters, then the terms in written order; the intercept only where it
 * stands alone.
 */
export function headlineTerms({ plan, fit }: Pick<Result, 'plan' | 'fit'>, most: number): string[] {
  const all = fit.coefficients.map(({ term }) => term);
  const asked = all.filter((term) => term !== interceptName || all.length === 1);
  const first = asked.filter((term) => plan.matters[term] !== undefined);
  return [...first, ...asked.filter((term) => !first.includes(term))].slice(0, most);
}

/** The one coefficient that stands for the answer. */
export function headlineTerm(result: Pick<Result, 'plan' | 'fit'>): string {
  return headlineTerms(result, 1)[0] as string;
}

/** Coefficients that page one answers for: all with a stated difference that matters, at most three; else the first term. */
export function answeredTerms(result: Pick<Result, 'plan' | 'fit'>): string[] {
  const { matters } = result.plan;
  const stated = headlineTerms(result, 3).filter((term) => matters[term] !== undefined);
  return stated.length > 0 ? stated : [headlineTerm(result)];
}
