import type { PreviewColumn } from '../protocol/bridge';
import { type Because, type ColumnRole, holdsNumbers, type Use } from '../protocol/column-roles';
import type { OutcomeScale } from '../protocol/plan';
import { count, exact, levelText, list, plural, quoted } from './numbers';

/** What a column can be: its name in a line, and what follows from it. */
export const roleTexts: { readonly [R in ColumnRole]: { readonly text: string; readonly says: string } } = {
  label: { text: 'names the cells', says: 'Several such columns are joined; every full label must be different.' },
  mean: { text: 'the outcome, a mean or rate', says: 'A number as it stands: one value a cell.' },
  share: { text: 'the outcome, a share of 1', says: 'Between 0 and 1. Values outside are refused.' },
  percent: { text: 'the outcome, a percentage', says: 'Between 0 and 100. Values outside are refused.' },
  size: {
    text: 'the group size',
    says: 'Respondents behind the cell. A size of 400 against one of 100 makes the sampling variance a quarter.',
  },
  'effective-size': {
    text: 'the effective size',
    says: 'Respondents divided by the design effect already; taken as the size, so give no design effect beside it.',
  },
  repeats: { text: 'a number of repeats', says: 'So many measurements were averaged; taken as the size.' },
  se: { text: 'the standard error', says: 'An error of 2.0 makes the variance 4.0, a relative weight of 0.25.' },
  variance: { text: 'the error variance', says: 'A variance of 4.0 is an error of 2.0, a relative weight of 0.25.' },
  'half-width': {
    text: 'half the width of an interval',
    says: 'Divided by the normal quantile of its level: 3.92 of a 95 % interval is an error of 2.0, a relative weight of 0.25.',
  },
  cv: {
    text: 'the coefficient of variation',
    says: 'As a ratio, 0.05 for 5 per cent: times the outcome it is the standard error.',
  },
  count: {
    text: 'a count of events',
    says: 'Divided by size it is a proportion, by exposure a rate: that is the outcome then.',
  },
  exposure: { text: 'the exposure', says: 'Person-years or population: the count is divided by it.' },
  'design-effect': { text: 'the design effect', says: 'The size divided by it is the effective size.' },
  'within-sd': { text: 'the deviation inside the cell', says: 'How far single answers spread around the cell’s mean.' },
  'survey-weight': {
    text: 'a sum of survey weights',
    says: 'What a cell stands for in the population, not how precise its mean is.',
  },
  other: { text: 'something else', says: 'It may explain the outcome, group cells, or be left alone.' },
};

export const roleNotes = {
  title: (column: string) => `What is ${quoted(column)}?`,
  surveyWeightBarred:
    'It says nothing of a mean’s error, so that nothing here can be weighted by it. Bring the group size or the error.',
  unitTitle: (column: string) => `Unit of ${quoted(column)}`,
  unitLabel: 'Unit, as it should stand behind a number',
  unitExample: 'For example “hours per week”. It stands in every sentence and table about this column.',
  noUnit: 'no unit',
  useTitle: (column: string) => `Does ${quoted(column)} explain the outcome?`,
  level: 'Level of the interval',
  scaleTitle: 'On which scale it is fitted',
  logitBarred: 'Only for a share or a percentage.',
  withinTitle: 'Are the sizes exact?',
  withinLabel: 'Known to within so many',
  withinHint:
    'Published sizes are often rounded to a base, or altered a little, while the means are exact. Leave it empty where they are exact.',
  per: 'Rates are per so many of exposure',
} as const;

export const useTexts: { readonly [U in Use]: { readonly text: string; readonly says: string } } = {
  none: { text: 'no', says: 'It stays in the data, for rules, groups and tests.' },
  number: { text: 'yes, as a number', says: 'One coefficient: what one unit more goes with.' },
  category: { text: 'yes, as a category', says: 'One coefficient for each level but the first.' },
};

/** Why a role is proposed for a column. */
export function becauseText(because: Because, { distinct, type }: PreviewColumn): string {
  switch (because) {
    case 'name':
      return 'proposed because of its name';
    case 'texts-name-cells':
      return type === 'text'
        ? 'proposed because every text is different'
        : `proposed because its ${plural(distinct, 'text')} repeat`;
    case 'year-names-cells':
      return `proposed because its ${plural(distinct, 'number')} are years`;
    case 'only-whole-numbers':
      return 'proposed because no other column holds positive whole numbers alone';
    case 'blank':
      return 'proposed because it is blank';
    case 'left-over':
      return 'proposed because nothing else claims it';
  }
}

/** What a column's values look like: type, how many differ. */
export function columnSays(column: PreviewColumn): string {
  const { type, distinct, tokens } = column;
  const kind = holdsNumbers(column) ? 'numbers' : { number: 'numbers', category: 'categories', text: 'texts' }[type];
  const marks =
    tokens.length === 0
      ? ''
      : `, and ${list(tokens.map(({ token, rows }) => `${quoted(token)} in ${plural(rows, 'row')}`))}`;
  return `${kind}, ${count(distinct)} different${marks}`;
}

export const scaleTexts: { readonly [S in OutcomeScale]: { readonly text: string; readonly says: string } } = {
  identity: { text: 'as it stands', says: 'Coefficients are in the outcome’s own unit.' },
  log: {
    text: 'on the log scale',
    says: 'Coefficients are differences of logarithms. The log of a mean is not the mean of logs.',
  },
  logit: { text: 'on the logit scale', says: 'For shares and percentages: coefficients are differences of log odds.' },
};

export function levelPhrase(level: number): string {
  return `of a ${levelText(level)} interval`;
}

export function fittedPhrase(scale: OutcomeScale): string {
  return `fitted ${scaleTexts[scale].text}`;
}

export function withinPhrase(within: number | null): string {
  return within === null ? 'taken as exact' : `known to within ${exact(within)}`;
}
