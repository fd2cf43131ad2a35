import type { DraftPlan } from '../protocol/draft';
import { isSampling } from '../protocol/parameter-names';
import type { Part, Plan, Variance } from '../protocol/plan';
import type { Result } from '../protocol/result';
import { termName } from '../protocol/term-names';
import { list } from './numbers';
import { parameterText } from './parameter-text';
import { outcomeNoun, varianceSentence } from './statement';

/** A piece of the statement. governs: which choices it opens; null for the words between. */
export interface StatementPiece {
  readonly text: string;
  readonly governs: 'sampling' | 'beyond' | 'together' | null;
}

/** The variance structure as one sentence, cut where a phrase can be changed. result: a fit of this very plan, or null where there is none yet. */
export function statementPieces(plan: Plan | DraftPlan, result: Result | null): readonly StatementPiece[] {
  const { variance } = plan;
  if (variance === null) return [{ text: unstatedText(plan), governs: null }];
  const whole = { ...plan, variance } as Plan;
  const sentence = result === null ? unfittedSentence(whole) : varianceSentence({ ...result, plan: whole });
  const start = `The error variance of each ${outcomeNoun(whole)} is `;
  const [sampling = '', ...more] = sentence.slice(start.length).replace(/\.$/, '').split(', plus ');
  const kinds = variance.parts.filter((part) => !isSampling(part)).map(({ kind }) => kind);
  return [
    { text: start, governs: null },
    { text: sampling, governs: 'sampling' },
    ...more.flatMap((text, i): StatementPiece[] => [
      { text: ', plus ', governs: null },
      { text, governs: kinds[i] === 'shared' ? 'together' : 'beyond' },
    ]),
    ...(kinds.includes('between')
      ? []
      : ([
          { text: ', and ', governs: null },
          { text: more.length === 0 ? 'nothing beyond it' : 'nothing of each cell’s own', governs: 'beyond' },
        ] as const)),
    { text: '. Cells are taken as ', governs: null },
    { text: togetherText(variance, result), governs: 'together' },
    { text: '.', governs: null },
  ];
}

function unstatedText(plan: Plan | DraftPlan): string {
  const { count, outcome } = plan.roles;
  if (outcome === null && count === null) return 'Nothing is stated yet: no data, no outcome, no variance.';
  return `How the error variance of each ${outcomeNoun(plan as Plan)} arises is not stated yet; nothing is fitted before it is.`;
}

/** How cells go together, every part that ties them by name; result: where its correlations are known from. */
function togetherText({ parts }: Variance, result: Result | null): string {
  const phrases = parts.flatMap((part) => tieText(part, parts, result) ?? []);
  return phrases.length === 0 ? 'independent of one another' : list(phrases);
}

function tieText(part: Part, parts: readonly Part[], result: Result | null): string | null {
  if (part.kind === 'shared') return `sharing a shock with those of the same ${list(part.by)}`;
  if (part.kind === 'matrix') return `correlated as ${part.file} tells`;
  const { correlation } = part;
  if (correlation === null) return null;
  const found = result?.fit.variance.find(({ name }) => name === `rho: ${part.kind}`);
  const rho = result === null ? 'ρ' : parameterText(found, result.fit.inference.level);
  const own =
    parts.length === 1 ? '' : part.kind === 'between' ? ' in what sets them apart' : ' in their sampling errors';
  const whose = correlation.by.length === 0 ? '' : ` with those of the same ${list(correlation.by)}`;
  return correlation.kind === 'exchangeable'
    ? `correlated${own}${whose}, each pair by ${rho}`
    : `correlated${own}${whose} along ${correlation.order}, by ${rho} at a distance of 1`;
}

function unfittedSentence(plan: Plan): string {
  const { parts } = plan.variance;
  const start = `The error variance of each ${outcomeNoun(plan)} is `;
  const sampling = parts.filter(isSampling).map((part) => unfittedPhrase(part, plan));
  const others = parts
    .filter((part) => !isSampling(part))
    .map((part) =>
      part.kind === 'shared'
        ? `ω², shared by all cells of the same ${part.by.join(' and ')}`
        : 'τ² for what sets cells apart beyond sampling, the same for every cell',
    );
  return `${[`${start}${sampling.join(' and ')}`, ...others].join(', plus ')}.`;
}

function unfittedPhrase(part: Part, { roles }: Plan): string {
  const size = roles.designEffect === null ? 'the number of respondents behind it' : 'the effective size behind it';
  switch (part.kind) {
    case 'constant':
      return 'φ, the same for every cell';
    case 'per-size':
      return `φ divided by ${size}`;
    case 'given': {
      const given = roles.errorKind === 'variance' ? 'its supplied error variance' : 'the square of its supplied error';
      return part.scale === 'free' ? `${given}, times a factor of φ` : given;
    }
    case 'size-power':
      return `φ divided by ${size} to the power ${part.exponent === 'estimate' ? 'δ' : part.exponent}`;
    case 'proxy':
      return `φ times ${part.column} to the power ${part.exponent === 'estimate' ? 'δ' : part.exponent}`;
    case 'matrix':
      return part.scale === 'free' ? `as ${part.file} tells, times a factor of φ` : `as ${part.file} tells`;
    case 'log-linear':
      return `log-linear in ${list(part.terms.map(termName))}`;
    case 'per-class':
      return part.perSize ? `φ of its ${part.column} divided by ${size}` : `φ of its ${part.column}`;
    case 'binomial':
      return `that of a share of independent answers${part.scale === 'free' ? ', times a factor of φ' : ''}`;
    case 'counts':
      return `that of a count of events over its exposure${part.scale === 'free' ? ', times a factor of φ' : ''}`;
    case 'between':
    case 'shared':
      throw new RangeError(`${part.kind} is no sampling part`);
  }
}

/** Titles of the choices, and what each choice means. */
export const statementTexts = {
  sampling: 'How the sampling error arises',
  beyond: 'What sets cells apart beyond sampling',
  together: 'Whether cells move together',
  more: 'All parts, and why one would choose them, are under Variance.',
  noSize: 'No column is named as the size.',
  noError: 'No column is named as the error.',
  constantBarred: 'The sampling error is the same for every cell already: the two could not be told apart.',
  constant: { text: 'the same for every cell', says: 'Weights are equal, whatever the sizes.' },
  perSize: { text: 'falls with size', says: 'φ over the size: weights are proportional to the sizes.' },
  givenFixed: {
    text: 'as supplied, known',
    says: 'The supplied errors as they stand; nothing of their scale is estimated.',
  },
  givenFree: {
    text: 'as supplied, up to a factor',
    says: 'The supplied errors times a factor φ that these data settle.',
  },
  sizePower: { text: 'falls with a power of size', says: 'φ over the size to the power δ, which these data settle.' },
  between: {
    text: 'a variance between cells',
    says: 'τ², the same for every cell: more respondents do not make it smaller.',
  },
  noBetween: { text: 'nothing', says: 'All that sets cells apart is in the terms and in sampling.' },
  independent: { text: 'independent of one another', says: 'What one cell’s error is says nothing of another’s.' },
} as const;
