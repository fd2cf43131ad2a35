import type { MathNode } from '@core/words/screen-equations';

/** Terms of a sum with their signs between. */
export function plus(terms: readonly MathNode[]): MathNode[] {
  return terms.flatMap((term, i): MathNode[] => (i === 0 ? [term] : [{ tag: 'mo', text: '+' }, term]));
}
