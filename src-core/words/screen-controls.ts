import type { AddedHalf, Correlation, Limit, SimpleTerm } from '../protocol/plan';
import type { Problem } from '../protocol/problems';
import { termName } from '../protocol/term-names';
import { count, exact, list } from './numbers';
import { sentence } from './problems';

/** Sentences of the controls that state a part, a kind of error, a test or a limit. */

export const controlTexts = {
  keep: 'Keep',
  laterShort: 'this version does not fit it yet',
  columnsNeeded: 'Choose at least one column.',
  chooseFile: 'Choose a file …',
  noFile: 'no file yet',
  fileKept: 'Its bytes are kept in the project.',
  removeIt: 'Take it out',
  noColumns: 'No column is at hand yet.',

  correlationTitle: 'How the cells of this part go together',
  correlationSays: 'Within a group, or along an order. What one cell’s error is then says something of another’s.',
  uncorrelated: 'cells independent',
  exchangeable: 'equally inside groups',
  exchangeableSays: 'Every two cells of a group are correlated alike.',
  serial: 'fading along an order',
  serialSays: 'Neighbours in order are correlated most. Without groups all cells are one series.',
  groupsOf: 'Groups of the same',
  along: 'In the order of',

  sharedTitle: 'By which columns cells share it',
  sharedSays: 'All cells of the same value, or values, move together.',

  classTitle: 'The column of the classes',
  classSays: 'Each of its values has a variance of its own.',
  perSizeTitle: 'Whether size divides it',
  perSizeYes: { text: 'over the size of the cell', says: 'One answer’s variance, of its own in each class.' },
  perSizeNo: { text: 'whatever the size', says: 'Every cell of a class is equally exact.' },

  matrixTitle: 'The file of the matrix',
  matrixSays:
    'A square table of covariances: its header and its first column carry the labels of the cells, in any order. Every used cell must be in it.',

  termsTitle: 'The columns of the variance',
  termsSays:
    'The logarithm of the variance is a constant and these terms, each with a coefficient γ that is estimated.',
  addTerm: 'Another term',
  addIt: 'Add it',

  countedTitle: 'Whether it holds exactly',
  countedFixed: { text: 'exactly so', says: 'Answers are independent draws; a chi-square judges that.' },
  countedFree: {
    text: 'up to a factor φ',
    says: 'Answers inside a cell are more, or less, alike than draws: φ is estimated.',
  },
  matrixFixed: 'Nothing of their scale is estimated; a chi-square judges them.',
  matrixFree: 'The matrix tells how cells compare; how large it is on the whole is estimated.',

  parametersLead: 'Variance parameters, each estimated unless it is set:',
  estimated: 'estimated',
  className: 'Of which class',
  setAnother: 'set one of a class',

  targetOwn: 'a structure of its own',
  targetOwnSays: 'The weights come from a structure put together here; the errors still come from the stated one.',
  targetHeading: 'The structure that the weights come from',
  rivalOwn: 'a structure of your own',
  rivalOwnSays: 'Put together from parts below, as the stated one is.',
  rivalHeading: 'A structure to put beside',
  rivalChange: 'Change its parts',
  rivalPut: 'Put it beside',
  rivalKeep: 'Keep it so',
  rivalLeave: 'Leave it',

  clustersTitle: 'By which columns residuals are summed',
  clustersSays:
    'Cells of the same value, or values, are one cluster. With few clusters the errors are too small by any rule.',
  alsoTitle: 'A second way of clustering',
  alsoSays: 'Cells that share either way may go together. It comes with the corrections CR0 and CR1.',
  alsoNone: 'one way alone',
  alsoDrop: 'One way alone',
  correctionTitle: 'Correction for few clusters or high leverage',
  replicationsTitle: 'How many draws',
  replicationsSays: 'More draws make p finer; 9999 tell p = 0.001 from 0.002.',
  seedTitle: 'The seed of the draws',
  seedSays: 'The same seed gives the same draws on any machine.',
  groupsNeeded: 'It needs a column by which cells form clusters.',
  logitBarred: 'Only for a share, a percentage or a count over a size.',

  halfTitle: 'Shares of none and of all',
  testsLead: 'Squared residuals are held against',
  testsWhite: 'White’s test takes',
  testsNeighbours: 'neighbours are',
  testsTitle: 'Columns that squared residuals are held against',
  whiteTitle: 'Columns of White’s test, with their squares and products',
  neighboursTitle: 'Which cells are neighbours',
  neighboursSays:
    'A table of two columns, a pair of labels a row. Whether residuals of neighbours go together is then tested.',
  everyColumn: 'every column of the model',
  everyButton: 'Every column of the model',
  noNeighbours: 'not named',

  limitsTitle: (column: string): string => `What is known of ${column}?`,
  limitsSays: 'Of values that were rounded or suppressed: the fit is tried at both ends of what they can be.',
  asTheyStand: 'values as they stand',
  roundingChoice: 'Rounded to a base of',
  suppressedChoice: 'Suppressed values lie between',
  and: 'and',
  openEnd: 'An end left empty is open.',
  asMatrix: 'As covariance matrix of the cells',
  asNeighbours: 'As list of neighbours',
} as const;

/** What the fit refused at a phrase: in short where this version lacks it, else the whole sentence. */
export function refusalText(problem: Problem): string {
  return problem.code === 'not-available' ? controlTexts.laterShort : sentence(problem);
}

/** How cells of a part go together: "independent", "equally inside groups of the same region". */
export function correlationText(correlation: Correlation | null): string {
  if (correlation === null) return controlTexts.uncorrelated;
  const groups = `of the same ${list(correlation.by)}`;
  if (correlation.kind === 'exchangeable') return `cells ${groups} correlated alike`;
  const inside = correlation.by.length === 0 ? '' : ` inside cells ${groups}`;
  return `correlation fading along ${correlation.order}${inside}`;
}

/** "cells of the same region and year". */
export function groupsText(by: readonly string[]): string {
  return `cells of the same ${list(by)}`;
}

export function alsoText(alsoBy: readonly string[] | null): string {
  return alsoBy === null ? controlTexts.alsoNone : `and by ${groupsText(alsoBy)}`;
}

export function drawsText(replications: number): string {
  return `${count(replications)} draws`;
}

export function seedText(seed: number): string {
  return `seed ${exact(seed)}`;
}

export function correctionText(correction: string): string {
  return `correction ${correction}`;
}

/** The terms of a log-linear variance. */
export function termsText(terms: readonly SimpleTerm[]): string {
  return list(terms.map(termName));
}

/** A choice of columns that a test looks at. */
export function testColumnsText(columns: readonly string[] | null): string {
  return columns === null ? controlTexts.everyColumn : list(columns);
}

export function neighboursText(file: string | null): string {
  return file === null ? controlTexts.noNeighbours : `those of ${file}`;
}

/** Corrections of robust and of clustered errors, each with what it does. */
export const correctionSays = {
  HC0: 'No correction: too small with few cells.',
  HC1: 'Times cells over freedom.',
  HC2: 'Each squared residual divided by 1 less its leverage.',
  HC3: 'Divided by its square: near to leaving the cell out.',
  HC4: 'Divided by a power that grows with leverage.',
  CR0: 'No correction: too small with few clusters.',
  CR1: 'Times a factor for the number of clusters and of coefficients.',
  CR2: 'Residuals adjusted cluster by cluster, so that the errors are right if the structure holds.',
  CR3: 'Adjusted further: near to leaving the cluster out.',
} as const;

/** What is added to counts of none and of all under a logit. */
export const halfChoices: { readonly [H in AddedHalf]: { readonly text: string; readonly says: string } } = {
  'extreme-cells': {
    text: 'half a case added to cells of none or all',
    says: 'Their logit would be undefined; every other cell stays as it is.',
  },
  'all-cells': {
    text: 'half a case added to every cell',
    says: 'All cells are treated alike, and drawn a little to a half.',
  },
  no: { text: 'nothing added', says: 'A cell of none or of all is then refused.' },
};

/** What is known of a column’s rounded or suppressed values, as a phrase. */
export function limitText(limit: Limit | undefined): string {
  if (limit === undefined) return controlTexts.asTheyStand;
  if ('rounding' in limit) return `rounded to a base of ${exact(limit.rounding)}`;
  const [low, high] = limit.suppressed;
  if (low === null && high === null) return 'suppressed values of any size';
  if (low === null) return `suppressed values up to ${exact(high as number)}`;
  if (high === null) return `suppressed values from ${exact(low)}`;
  return `suppressed values between ${exact(low)} and ${exact(high)}`;
}

/** A parameter that is set, or left to be estimated. */
export function settingText(value: number | undefined): string {
  return value === undefined ? controlTexts.estimated : `set to ${exact(value)}`;
}
