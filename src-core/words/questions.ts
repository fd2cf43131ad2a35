import type { Question, Share, Where } from '../protocol/plan';
import type { Answer, QuestionResult, Result } from '../protocol/result';
import { estimateInUnit, freedomText, pText, referenceText } from './coefficients';
import { exact, list, number, pIs, sizeText } from './numbers';

/** The heading of a question: its name, else what it asks. */
export function questionTitle({ question }: QuestionResult): string {
  return question.name ?? questionText(question);
}

/** What a question asks. */
export function questionText(question: Question): string {
  switch (question.kind) {
    case 'joint':
      return `Are the coefficients of ${list(question.terms)} all zero?`;
    case 'combination':
      return `Is ${combinationText(question.of)} equal to ${exact(question.equals)}?`;
    case 'expect':
      return `What is expected where ${whereText(question.where)}?`;
    case 'average':
      return question.minus === null
        ? `What is the fitted average over ${sharesText(question.of)}?`
        : `By how much does the fitted average over ${sharesText(question.of)} exceed that over ${sharesText(question.minus)}?`;
  }
}

function combinationText(of: Readonly<Record<string, number>>): string {
  return Object.entries(of)
    .map(([term, factor], i) => {
      const size = Math.abs(factor) === 1 ? term : `${exact(Math.abs(factor))} × ${term}`;
      if (i === 0) return factor < 0 ? `−${size}` : size;
      return `${factor < 0 ? '−' : '+'} ${size}`;
    })
    .join(' ');
}

function whereText(where: Where): string {
  return list(
    Object.entries(where).map(([column, value]) => `${column} is ${typeof value === 'number' ? exact(value) : value}`),
  );
}

function sharesText(shares: readonly Share[]): string {
  const [only, ...more] = shares;
  if (only === undefined) return 'no population';
  if (more.length === 0) return `cells where ${whereText(only.where)}`;
  if (shares.length > 4) return `a standard population of ${number(shares.length, { decimals: 0 })} groups`;
  return list(shares.map(({ where, share }) => `${number(share, { digits: 3 })} of (${whereText(where)})`));
}

/** The answer as a sentence. */
export function answerSentence(result: Result, { question, answer, pHolm }: QuestionResult): string {
  const holm = pHolm === null ? '' : ` Adjusted by Holm within the family “${question.family ?? ''}”, ${pIs(pHolm)}.`;
  if ('statistic' in answer) return `${jointSentence(result, answer)}${holm}`;
  if ('fitted' in answer) return expectSentence(result, question, answer);
  const p =
    answer.p === null
      ? ''
      : `; error ${number(answer.se, { digits: 3 })}, ${referenceText(answer.reference)}, ${shownP(answer)}`;
  const against =
    question.kind === 'combination' && question.equals !== 0
      ? ` The p value is against ${exact(question.equals)}.`
      : '';
  return `The answer is ${estimateInUnit(result, answer)}${p}.${against}${holm}`;
}

function shownP(of: Extract<Answer, { p: number | null; reference: unknown }>): string {
  const shown = pText(of);
  return shown === 'withheld' ? 'p withheld' : pIs(of.p);
}

type JointAnswer = Extract<Answer, { statistic: number | null }>;

function jointSentence({ fit }: Result, { statistic, freedom1, freedom2, p, scale }: JointAnswer): string {
  if (statistic === null) return 'The test is undefined with these cells.';
  const name = freedom2 === null ? 'chi-square' : 'F';
  const on = freedom2 === null ? freedomText(freedom1) : `${freedomText(freedom1)} and ${freedomText(freedom2)}`;
  const scaled = scale === null || scale === 1 ? '' : `, scaled by ${number(scale, { digits: 3 })}`;
  const found = `${name} = ${number(statistic, { digits: 3 })} on ${on}${scaled}, ${pIs(p)}`;
  if (p === null) return `${name} = ${number(statistic, { digits: 3 })} on ${on}; it has no p value.`;
  return p < 1 - fit.inference.level
    ? `The data reject that all of them are zero (${found}).`
    : `The data do not contradict that all of them are zero (${found}).`;
}

type ExpectAnswer = Extract<Answer, { fitted: unknown }>;

function expectSentence(
  result: Result,
  question: Question,
  { fitted, newCellTrue, newCellObserved }: ExpectAnswer,
): string {
  const start = `The fitted value is ${estimateInUnit(result, fitted)}.`;
  const between = result.plan.variance.parts.some(({ kind }) => kind === 'between');
  const truth =
    newCellTrue === null
      ? ''
      : between
        ? ' A new cell’s true value adds what sets cells apart; its observed value adds its sampling error too.'
        : ' No between part stands, so that a new cell’s true value is taken to be the fitted one; its observed value adds sampling error.';
  const missing = newCellObserved === null && question.kind === 'expect' ? ` ${newCellMissing(result, question)}` : '';
  return `${start}${truth}${missing}`;
}

function newCellMissing({ plan }: Result, { size, error }: Extract<Question, { kind: 'expect' }>): string {
  const given = plan.variance.parts.some(({ kind }) => kind === 'given');
  if (given && error === null)
    return 'What would be observed there is not told, since the question states no error for the new cell.';
  if (!given && size === null)
    return 'What would be observed there is not told, since the question states no size for the new cell.';
  return 'What would be observed there is undefined under this structure.';
}

/** The three intervals, each by its name. */
export function expectRows(question: Question): {
  readonly fitted: string;
  readonly newCellTrue: string;
  readonly newCellObserved: string;
} {
  const of =
    question.kind !== 'expect'
      ? ''
      : question.size !== null
        ? ` of size ${sizeText(question.size)}`
        : question.error !== null
          ? ` with error ${exact(question.error)}`
          : '';
  return {
    fitted: 'fitted mean',
    newCellTrue: 'true mean of a new cell',
    newCellObserved: `observed mean of a new cell${of}`,
  };
}
