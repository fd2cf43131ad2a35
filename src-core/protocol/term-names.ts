import type { SimpleTerm, Term } from './plan';

/**
 * The name of a term: of its coefficient, or of all its coefficients where it is a category or holds one.
 *
 * `income`, `log(income)`, `sqrt(x)`, `1/x`, `age^2`, a category's column, and the factors of a product joined by " × ".
 *
 *     termName({ column: 'age', power: 2 })   // 'age^2'
 */
export function termName(term: Term): string {
  if ('product' in term) return term.product.map(termName).join(' × ');
  if ('power' in term) return `${term.column}^${term.power}`;
  if (!('transform' in term)) return term.column;
  if (term.transform === 'inverse') return `1/${term.column}`;
  return `${term.transform}(${term.column})`;
}

/** The name of the constant's coefficient. */
export const interceptName = 'intercept';

/** The name of one level's coefficient: `region: South`. */
export function levelName(column: string, level: string): string {
  return `${column}: ${level}`;
}

/** The simple terms that a term is made of: its factors, or itself. */
export function factorsOf(term: Term): readonly SimpleTerm[] {
  return 'product' in term ? term.product : [term];
}

/** The columns that terms use, each once, in the order in which they are named. */
export function columnsOfTerms(terms: readonly Term[]): string[] {
  return [...new Set(terms.flatMap(factorsOf).map((factor) => factor.column))];
}
