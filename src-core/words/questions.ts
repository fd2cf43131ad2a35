import type { Question, Share, Where } from '../protocol/plan';
import type { Answer, QuestionResult, Result } from '../protocol/result';
import { estimateInUnit, freedomText, isFewFreedom, isWithheld, pText, referenceText } from './coefficients';
import { exact, levelText, list, number, pIs, sizeText } from './numbers';
import { outcomeName } from './units';

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
  const withheld =
    'statistic' in answer ? isFewFreedom(answer.freedom2) : 'p' in answer && isWithheld(answer.reference);
  const holm =
    pHolm === null || withheld ? '' : ` Adjusted by Holm within the family “${question.family ?? ''}”, ${pIs(pHolm)}.`;
  if ('statistic' in answer) return `${jointSentence(result, answer)}${holm}`;
  if ('fitted' in answer) return expectSentence(result, question, answer);
  const p =
    answer.p === null
      ? ''
      : `; error ${number(answer.se, { digits: 3 })}, ${answer.reference === null ? '' : `${referenceText(answer.reference)}, `}${shownP(answer)}${result.fit.inference.kind === 'wild' ? ' by the bootstrap' : ''}`;
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
  const drawn = fit.inference.kind === 'wild';
  const name = freedom2 === null && !drawn ? 'chi-square' : 'F';
  const on = freedom2 === null ? freedomText(freedom1) : `${freedomText(freedom1)} and ${freedomText(freedom2)}`;
  const scaled = scale === null || scale === 1 ? '' : `, scaled by ${number(scale, { digits: 3 })}`;
  const test = `${name} = ${number(statistic, { digits: 3 })} on ${on}${scaled}`;
  if (p === null) return `${test}; it has no p value.`;
  if (isFewFreedom(freedom2))
    return `${test}, p withheld: on fewer than 4 degrees of freedom no verdict can be relied on.`;
  const found = `${test}, ${pIs(p)}${drawn ? ' by the bootstrap' : ''}`;
  return p < 1 - fit.inference.level
    ? `The data reject that all of them are zero (${found}).`
    : `The data do not contradict that all of them are zero (${found}).`;
}

/** What an answer on the log or logit scale is on the outcome's own, taken back already; what: of what it is, where several are told. */
export function ownScaleSentence(
  result: Result,
  what: string | null,
  of: { readonly estimate: number; readonly low: number | null; readonly high: number | null },
): string {
  const { plan, fit } = result;
  const text = (value: number | null): string => number(value, { digits: 3 });
  const range =
    of.low === null || of.high === null
      ? ''
      : ` (${levelText(fit.inference.level)} interval ${text(of.low)} to ${text(of.high)})`;
  const start = what === null ? `On the scale of ${outcomeName(plan)} itself that is` : `The ${what} is`;
  return `${start} ${text(of.estimate)}${range}.`;
}

type ExpectAnswer = Extract<Answer, { fitted: unknown }>;

function expectSentence(
  result: Result,
  question: Question,
  { fitted, newCellTrue, newCellObserved }: ExpectAnswer,
): string {
  const start = `The fitted value is ${estimateInUnit(result, fitted)}.`;
  const between = result.plan.variance.parts.some(({ kind }) => kind === 'between' || kind === 'shared');
  const truth =
    newCellTrue === null
      ? ''
      : between
        ? ' A new cell’s true value, in groups that are new as well, adds what sets cells and groups apart; its observed value adds its sampling error too.'
        : ' No between or shared part stands, so that a new cell’s true value is taken to be the fitted one; its observed value adds sampling error.';
  const missing = newCellObserved === null && question.kind === 'expect' ? ` ${newCellMissing(result, question)}` : '';
  return `${start}${truth}${missing}`;
}

function newCellMissing({ plan }: Result, { size, error, where }: Extract<Question, { kind: 'expect' }>): string {
  const lacks = (what: string): string =>
    `What would be observed there is not told, since the question states no ${what} for the new cell.`;
  for (const part of plan.variance.parts) {
    if ((part.kind === 'given' || part.kind === 'matrix') && error === null) return lacks('error');
    if ((part.kind === 'per-class' || part.kind === 'proxy') && where[part.column] === undefined)
      return lacks(part.column);
    if (part.kind === 'log-linear') {
      const missing = part.terms.find(({ column }) => where[column] === undefined);
      if (missing !== undefined) return lacks(missing.column);
    }
    const { exposure } = plan.roles;
    if (part.kind === 'counts' && exposure !== null && where[exposure] === undefined) return lacks(exposure);
    const bySize =
      part.kind === 'per-size' ||
      part.kind === 'size-power' ||
      part.kind === 'binomial' ||
      (part.kind === 'per-class' && part.perSize);
    if (bySize && size === null) return lacks('size');
  }
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
