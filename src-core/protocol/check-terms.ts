import { sameName } from './nearest';
import { problem } from './outcome';
import type { Question, Term, Where } from './plan';
import { below } from './pointer';
import type { Problem } from './problems';
import { columnsOfTerms, interceptName, termName } from './term-names';

/** Terms of equal names, the constant included, and a plan without any column of the model matrix. */
export function checkTerms(terms: readonly Term[], intercept: boolean): Problem[] {
  if (terms.length === 0 && !intercept) return [problem('empty-list', { key: 'terms' }, '')];
  return equalNames(terms.map(termName), '/terms', intercept ? { name: interceptName, at: '/intercept' } : null);
}

/** The names of a list that stand earlier in it, or are taken already; each is told with the place of the first. */
export function equalNames(
  names: readonly string[],
  list: string,
  taken: { readonly name: string; readonly at: string } | null = null,
): Problem[] {
  return names.flatMap((name, i) => {
    const earlier = names.findIndex((other) => sameName(name, other));
    const first = taken !== null && sameName(name, taken.name) ? taken.at : earlier < i ? below(list, earlier) : null;
    return first === null ? [] : [problem('equal-names', { name, first }, below(list, i))];
  });
}

/** Stated covariates must have a value for every column that the terms use. */
export function checkQuestions(questions: readonly Question[], terms: readonly Term[]): Problem[] {
  const columns = columnsOfTerms(terms);
  return questions.flatMap((question, i) =>
    wheresOf(question).flatMap(([where, ...steps]) =>
      columns
        .filter((column) => !Object.keys(where).some((key) => sameName(key, column)))
        .map((key) => problem('missing-key', { key }, below('/questions', i, ...steps))),
    ),
  );
}

/** The covariates that a question states, each with its place in the question. */
function wheresOf(question: Question): (readonly [Where, ...(string | number)[]])[] {
  if (question.kind === 'expect') return [[question.where, 'where']];
  if (question.kind !== 'average') return [];
  const { of, minus } = question;
  return [
    ...of.map(({ where }, j) => [where, 'of', j, 'where'] as const),
    ...(minus ?? []).map(({ where }, j) => [where, 'minus', j, 'where'] as const),
  ];
}
