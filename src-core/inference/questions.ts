import type { Fitted } from '../estimate/fitted';
import type { KnownTerm } from '../model/known-terms';
import { rowOf } from '../model/row';
import type { Plan, Question, Share, Where } from '../protocol/plan';
import type { Answer, QuestionResult } from '../protocol/result';
import type { Cells } from '../table/cells';
import { combinationOf, testedAgainst } from './combination';
import { holmAdjusted } from './holm';
import type { Inferred } from './inferred';
import { columnNamed, columnsNamed } from './named-coefficients';
import { newCellVariance, newSamplingVariance } from './new-cell';

interface Asked {
  readonly plan: Plan;
  readonly fitted: Fitted;
  readonly inferred: Inferred;
  readonly known: readonly KnownTerm[];
  readonly cells: Cells;
}

/**
 * Answers to the plan's questions, in their order.
 *
 *     joint         F (or chi-square) that all named coefficients are 0
 *     combination   sum of multiples of coefficients, tested against `equals`
 *     expect        the fitted mean at x; the true value of a new cell there, in new groups (+ tau^2 + every omega^2); its observed mean (+ sampling variance)
 *     average       fitted mean over a standard population; with `minus` a contrast of two, tested against 0
 *
 * Each under the reference that the plan's inference gives to that combination's own pulls. Holm's adjustment runs within a family, over
 * the questions that have a p value; it is null outside one.
 * Names are taken as checked (`checkQuestions`): an unknown one is a bug and throws.
 *
 * Example: `questionsOf({ plan, fitted, inferred, known, cells })` after `inferenceOf`.
 */
export function questionsOf(asked: Asked): QuestionResult[] {
  const answers = asked.plan.questions.map((question) => answerTo(question, asked));
  const adjusted = adjustedWithinFamilies(asked.plan.questions, answers);
  return asked.plan.questions.map((question, i) => ({
    question,
    answer: answers[i] as Answer,
    pHolm: adjusted[i] ?? null,
  }));
}

function answerTo(question: Question, asked: Asked): Answer {
  const { plan, fitted, inferred } = asked;
  const { design, coefficients: estimates } = fitted;
  const { level } = plan.inference;
  switch (question.kind) {
    case 'joint': {
      const columns = question.terms.flatMap((name) => {
        const found = columnsNamed(name, { design, plan });
        return found.length > 0 ? found : mustBe(-1, name);
      });
      return inferred.jointOf(columns);
    }
    case 'combination': {
      const multipliers = new Float64Array(design.names.length);
      for (const [name, multiple] of Object.entries(question.of))
        multipliers[mustBe(columnNamed(name, { design }), name)] = multiple;
      return testedAgainst(question.equals, { multipliers, estimates, inferred, level });
    }
    case 'average': {
      const multipliers = averageRow(question.of, asked);
      if (question.minus === null) return { ...combinationOf({ multipliers, estimates, inferred, level }), p: null };
      const less = averageRow(question.minus, asked);
      const contrast = multipliers.map((x, j) => x - (less[j] as number));
      return testedAgainst(0, { multipliers: contrast, estimates, inferred, level });
    }
    case 'expect':
      return expectation(question, asked);
  }
}

function expectation(question: Extract<Question, { kind: 'expect' }>, asked: Asked): Answer {
  const { plan, fitted, inferred } = asked;
  const ofCell = (added: number) =>
    combinationOf({
      multipliers: rowAt(question.where, asked),
      estimates: fitted.coefficients,
      inferred,
      level: plan.inference.level,
      added,
    });
  const between = newCellVariance(fitted);
  const mean = ofCell(0);
  const sampling = newSamplingVariance({ plan, fitted, question, expected: mean.estimate, cells: asked.cells });
  return {
    fitted: mean,
    newCellTrue: ofCell(between),
    newCellObserved: sampling === null ? null : ofCell(between + sampling),
  };
}

function rowAt(where: Where, asked: Asked): Float64Array {
  const row = rowOf(asked.known, where);
  if (!row.ok) throw new RangeError('a question was not checked before it was answered');
  return row.value;
}

function averageRow(shares: readonly Share[], asked: Asked): Float64Array {
  const row = new Float64Array(asked.fitted.design.names.length);
  for (const { where, share } of shares)
    for (const [j, x] of rowAt(where, asked).entries()) row[j] = (row[j] as number) + share * x;
  return row;
}

function adjustedWithinFamilies(questions: readonly Question[], answers: readonly Answer[]): (number | null)[] {
  const adjusted = new Array<number | null>(questions.length).fill(null);
  const p = answers.map((answer) => ('p' in answer ? answer.p : null));
  for (const family of new Set(questions.map((question) => question.family))) {
    if (family === null) continue;
    const members = [...questions.keys()].filter((i) => questions[i]?.family === family && (p[i] ?? null) !== null);
    const values = holmAdjusted(members.map((i) => p[i] as number));
    for (const [rank, i] of members.entries()) adjusted[i] = values[rank] as number;
  }
  return adjusted;
}

function mustBe(column: number, name: string): number {
  if (column < 0) throw new RangeError(`no coefficient is called ${name}`);
  return column;
}
