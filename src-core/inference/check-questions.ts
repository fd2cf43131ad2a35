import type { Design } from '../model/design';
import type { KnownTerm } from '../model/known-terms';
import { rowOf } from '../model/row';
import type { Plan, Question, Where } from '../protocol/plan';
import { below } from '../protocol/pointer';
import type { Problem } from '../protocol/problems';
import { checkNames } from './named-coefficients';

/**
 * Everything in the plan's questions that the model cannot answer, before it is fitted.
 *
 * Problems in the order of the questions: `unknown-coefficient` (found, nearest) for a name, and what `rowOf` refuses of the covariates: a
 * level that no used cell has, a text in a number's place, a value that a transform cannot take.
 *
 * Example: a combination of `1/room` where the coefficient is `1/rooms`.
 */
export function checkQuestions(asked: {
  readonly plan: Pick<Plan, 'terms' | 'questions'>;
  readonly design: Pick<Design, 'names' | 'termOf'>;
  readonly known: readonly KnownTerm[];
}): Problem[] {
  const { plan, design, known } = asked;
  return plan.questions.flatMap((question, i) => [
    ...checkNames(i, { design, plan }),
    ...wheresOf(question, below('/questions', i)).flatMap(({ where, at }) => {
      const row = rowOf(known, where, at);
      return row.ok ? [] : row.problems;
    }),
  ]);
}

function wheresOf(question: Question, at: string): { readonly where: Where; readonly at: string }[] {
  if (question.kind === 'expect') return [{ where: question.where, at: below(at, 'where') }];
  if (question.kind !== 'average') return [];
  const shares = (key: 'of' | 'minus') =>
    (question[key] ?? []).map(({ where }, i) => ({ where, at: below(at, key, i, 'where') }));
  return [...shares('of'), ...shares('minus')];
}
