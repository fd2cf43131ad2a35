import type { AlsoChanged, Edited } from './edit-structure';
import type { Plan, Question, Term, Where } from './plan';
import { columnsOfTerms, factorsOf, levelName, termName } from './term-names';

/** A value for a column that questions about expectations and averages do not state yet; null: such questions are taken out. */
export type ValueForQuestions = number | string | null;

/** Adds a term at the end. A term of the same name is not added twice. */
export function addTerm(plan: Plan, term: Term, value: ValueForQuestions = null): Edited {
  if (plan.terms.some((one) => termName(one) === termName(term))) return { plan, also: [] };
  return withTerms(plan, [...plan.terms, term], value);
}

/** Puts another term in one's place. */
export function replaceTerm(plan: Plan, index: number, term: Term, value: ValueForQuestions = null): Edited {
  return withTerms(plan, plan.terms.with(index, term), value);
}

export function removeTerm(plan: Plan, index: number): Edited {
  return withTerms(plan, plan.terms.toSpliced(index, 1), null);
}

export function withIntercept(plan: Plan, intercept: boolean): Edited {
  return mended({ ...plan, intercept }, null);
}

/** Columns that a new term would bring in and that some question states no value for. */
export function columnsQuestionsLack(plan: Plan, term: Term): string[] {
  const columns = [...new Set(factorsOf(term).map(({ column }) => column))];
  return columns.filter((column) => plan.questions.some((one) => lacks(one, column)));
}

function withTerms(plan: Plan, terms: Term[], value: ValueForQuestions): Edited {
  return mended({ ...plan, terms }, value);
}

/** What of a plan, or of a draft, asks about its terms. */
type Asking = Pick<Plan, 'terms' | 'intercept' | 'questions' | 'matters'>;

/** A plan, or a draft, whose terms became fewer: without what they no longer carry. */
export function withFewerTerms<P extends Asking>(
  plan: P,
  terms: Term[],
): { readonly plan: P; readonly also: readonly AlsoChanged[] } {
  return mended({ ...plan, terms }, null);
}

/** Questions and smallest differences that the terms no longer carry are taken out; values that are lacking are filled in where one was stated. */
function mended<P extends Asking>(plan: P, value: ValueForQuestions): { plan: P; also: readonly AlsoChanged[] } {
  const columns = columnsOfTerms(plan.terms);
  const filled = value === null ? plan.questions : plan.questions.map((one) => withValues(one, columns, value));
  const questions = filled.filter((one) => isCarried(one, plan) && !columns.some((column) => lacks(one, column)));
  const matters = Object.fromEntries(Object.entries(plan.matters).filter(([name]) => isCoefficient(name, plan)));
  const also: AlsoChanged[] = [
    ...(questions.length < plan.questions.length ? (['questions-removed'] as const) : []),
    ...(Object.keys(matters).length < Object.keys(plan.matters).length ? (['matters-removed'] as const) : []),
  ];
  return { plan: { ...plan, questions, matters }, also };
}

function lacks(question: Question, column: string): boolean {
  return wheresOf(question).some((where) => !Object.hasOwn(where, column));
}

function wheresOf(question: Question): Where[] {
  if (question.kind === 'expect') return [question.where];
  if (question.kind !== 'average') return [];
  return [...question.of, ...(question.minus ?? [])].map(({ where }) => where);
}

function withValues(question: Question, columns: readonly string[], value: number | string): Question {
  const full = (where: Where): Where => ({
    ...where,
    ...Object.fromEntries(columns.filter((one) => !Object.hasOwn(where, one)).map((one) => [one, value])),
  });
  if (question.kind === 'expect') return { ...question, where: full(question.where) };
  if (question.kind !== 'average') return question;
  const each = (shares: typeof question.of) => shares.map((one) => ({ ...one, where: full(one.where) }));
  return { ...question, of: each(question.of), minus: question.minus === null ? null : each(question.minus) };
}

function isCarried(question: Question, plan: Asking): boolean {
  if (question.kind === 'joint') return question.terms.every((name) => isCoefficient(name, plan));
  if (question.kind === 'combination') return Object.keys(question.of).every((name) => isCoefficient(name, plan));
  return true;
}

/** Whether a name can be a coefficient's or a term's: the levels of a category are known from data alone, so that any is let through. */
function isCoefficient(name: string, { terms, intercept }: Asking): boolean {
  if (name === 'intercept') return intercept;
  return terms.some((term) => {
    if (termName(term) === name) return true;
    const factors = factorsOf(term);
    const named = name.split(' × ');
    return (
      named.length === factors.length &&
      factors.every((factor, i) =>
        'as' in factor ? named[i]?.startsWith(levelName(factor.column, '')) : named[i] === termName(factor),
      )
    );
  });
}
