import type { AlsoChanged } from '../protocol/edit-structure';
import type { Freedom, Part, PartKind, Roles } from '../protocol/plan';
import type { Beyond, Origin, ProposalReason, Together } from '../protocol/proposal-structure';
import { exact, list } from './numbers';

/** Sentences of the screen on which a variance structure is stated. */

export const structureTexts = {
  questionsHeading: 'Three questions',
  questionsLead: 'Their answers propose a structure. Nothing changes until it is taken.',
  originQuestion: 'Where does each number come from?',
  beyondQuestion: 'Do cells differ beyond their terms and beyond sampling?',
  togetherQuestion: 'Do cells move together?',
  proposalHeading: 'What the answers propose',
  takeProposal: 'State this structure',
  proposalStands: 'This is the structure that stands.',
  besideToo: 'Put beside it, to be compared:',
  takeBeside: 'State it and put these beside it',
  besideAtFirst: 'Stated alone it has equal weights beside it, or weights by size, so that a weighting can be priced.',
  partsHeading: 'The structure, part by part',
  partsLead: 'The error variance of a cell is the sum of its parts.',
  addPart: 'add a part',
  scaleChoice: 'How the given errors are taken',
  proxyChoice: 'The column that variance follows',
  serialChoice: 'correlation that fades along an order',
  exchangeableChoice: 'equal correlation inside groups',
  fixedSays: 'Nothing of their scale is estimated; a chi-square judges them.',
  freeSays: 'They tell cells apart; how large they are on the whole is estimated.',
  removePart: 'Take this part out',
  samplingChoice: 'Sampling',
  betweenChoice: 'Between cells',
  setParameter: 'Set it to',
  setIt: 'Set',
  setTitle: 'Set, or estimated',
  setSays: 'A value that you set is not estimated; statement and report say that it was set by the plan.',
  letGo: 'Estimate it again',
  weightsHeading: 'What the structure makes of the cells',
  candidatesHeading: 'Candidates',
  candidatesLead:
    'Each was fitted on the same cells with the same terms. The likelihood cannot choose for you: it cannot see where the numbers come from. None is preselected.',
  addCandidate: 'Put another structure beside',
  candidate: 'This candidate',
  standsAlready: 'it stands already',
  saysTheSame: 'a constant variance holds it already',
  ownPower: 'Size to a power of your own:',
  putBeside: 'Put it beside',
  stateCandidate: 'State this one',
  stateSays: 'The structure that stands takes its place beside.',
  removeCandidate: 'Take it out',
  stated: 'stated',
  indistinct: 'not distinguishable',
  noLikelihood: 'no likelihood',
  decisionHeading: 'The decision',
  decisionLead: 'Who decides, and why, goes into the trail and the report. It cannot be taken back.',
  decisionReason: 'Reason',
  decisionAuthor: 'Your name',
  decide: 'Put the decision on record',
  decided: 'On record:',
  noDecision: 'No decision is on record yet.',
  coveredHeading: 'Covered answer',
  covered: 'The coefficients of interest are covered on every screen until the structure is accepted.',
  notCovered:
    'The answer is in view while structures are tried. It can be covered: then no coefficient is shown on any screen until someone accepts the structure by name.',
  cover: 'Cover the answer',
  uncoveredBy: 'Uncovered by',
  notStated: 'No structure is stated yet; nothing is fitted before it is.',
  uncover: 'Accept the structure and uncover the answer',
  sizeNeeded: 'needs a column that is the size of a cell: state it under Data',
} as const;

/** The answers to the first question, each as a person would give it. */
export const originAnswers: { readonly [O in Origin]: string } = {
  respondents: 'It is the mean of answers by a known number of respondents.',
  'own-error': 'It comes with an error of its own, taken as it stands.',
  'error-to-a-factor': 'It comes with an error that is right up to a common factor.',
  share: 'It is the share of a known number of respondents.',
  count: 'It is a count of events over an exposure.',
  complete: 'It is a complete count: nothing was sampled.',
  unknown: 'That is not known.',
};

export const beyondAnswers: { readonly [B in Beyond]: string } = {
  yes: 'Yes: places or years have features that the terms do not hold.',
  no: 'No: what is left is sampling.',
  open: 'That is open: let the data say.',
};

/** The answer to the third question: "Yes, cells of the same parish." */
export function togetherText(together: Together): string {
  switch (together.kind) {
    case 'no':
      return 'No: each cell stands alone.';
    case 'open':
      return 'That is open.';
    case 'group':
      return `Yes, cells of the same ${list(together.by)}.`;
    case 'order':
      return `Yes, neighbours along ${together.order}${together.by.length === 0 ? '' : ` inside the same ${list(together.by)}`}.`;
  }
}

const reasonSentences: { readonly [R in ProposalReason]: string } = {
  'mean-of-respondents':
    'A mean of n answers has the variance of one answer divided by n; one answer’s variance is estimated here.',
  'error-given': 'Each cell’s own error gives its sampling variance; nothing of it is estimated here.',
  'error-to-a-factor': 'The given errors tell cells apart; a common factor on them is estimated here.',
  'share-of-size':
    'The sampling variance of a share follows from the share itself, μ (1 − μ) / n; a common factor on it is estimated here.',
  'share-not-stated':
    'No column is stated to be a share, or the count behind one; until one is, one variance is divided by the size, or the exposure.',
  'count-over-exposure':
    'The sampling variance of a rate grows with the rate itself, μ over the exposure; a common factor on it is estimated here.',
  'count-not-stated':
    'A count and its exposure are not both stated; until they are, one variance is divided by the size, or the exposure, where there is one.',
  'complete-constant': 'Where nothing was sampled no cell is more exact than another: the same variance for all.',
  'unknown-with-size':
    'The data are asked how fast variance falls with size; a power of 0 is not at all, of 1 is sampling.',
  'unknown-constant': 'Neither size nor error is stated: there is nothing by which variances could differ.',
  'size-lacking':
    'No column is stated to be the number of respondents; until one is, all cells have the same variance.',
  'error-lacking': 'No column is stated to be the error of a cell; state one under Data.',
  'between-stated': 'A part τ² that more respondents do not make smaller, the same for every cell.',
  'between-left-open': 'A part τ² is added; if the data do not need it, it comes out at 0, and that is shown.',
  'between-denied': 'No part between cells. The tests below say whether the scatter contradicts that.',
  'between-in-constant':
    'A constant variance holds what lies between cells already: a further part could not be told from it.',
  'between-with-exponent':
    'With the power of size estimated a part between cells could hardly be told from it, and is left out.',
  'between-with-link':
    'A rate on the log scale is fitted by the likelihood of its counts, which has this part alone; on the scale as it stands it could have one between cells.',
  independent: 'Cells are taken as independent; that is tested by every label column that groups them.',
  'together-left-open':
    'Cells are taken as independent for now; dependence is tested by every label column that groups them.',
  'together-with-link':
    'Maximum likelihood of counts with a logarithm takes cells as independent; dependence is tested by every label column that groups them.',
  'group-shared': 'A shock ω² that all cells of a group share; if the data do not need it, it comes out at 0.',
  'group-in-sampling':
    'Nothing lies beyond sampling, so it is the sampling errors of a group that go together, each pair by the same ρ.',
  'order-between':
    'What sets cells apart is correlated between neighbours, by ρ at a distance of 1 and the less the farther they stand.',
  'order-in-sampling':
    'Nothing lies beyond sampling, so it is the sampling errors of neighbours that go together, the less the farther they stand.',
};

/** Why a part stands in a proposal, or does not. */
export function proposalReason(reason: ProposalReason): string {
  return reasonSentences[reason];
}

/** A kind of part, in the words of a choice. */
export const partNames: { readonly [K in PartKind]: string } = {
  constant: 'the same for every cell',
  'per-size': 'one answer’s variance over the number of respondents',
  given: 'each cell’s own error',
  matrix: 'a full covariance matrix',
  'size-power': 'falling as a power of size',
  proxy: 'growing as a power of a column',
  'log-linear': 'log-linear in columns',
  'per-class': 'a variance for each class',
  binomial: 'the variance of a share',
  counts: 'the variance of a count',
  between: 'between cells, beyond sampling',
  shared: 'a shock shared by a group',
};

/** What a part claims about the cells, for the margin. */
export const partClaims: { readonly [K in PartKind]: string } = {
  constant: 'Every cell is equally exact, however many stand behind it. Weights are equal.',
  'per-size': 'Respondents answer independently and equally diversely in every cell. Weights are the sizes.',
  given:
    'The errors come from whoever made the numbers. Taken as they stand, or up to a common factor that is estimated.',
  matrix: 'Cells that share sampled units are correlated; the matrix says how much.',
  'size-power':
    'Somewhere between equal weights (power 0) and weights by size (power 1); the power is stated or estimated.',
  proxy: 'The variance follows a column that is known for every cell.',
  'log-linear': 'The logarithm of the variance is linear in columns.',
  'per-class': 'Classes of cells have variances of their own.',
  binomial: 'Answers are yes or no: the variance follows the fitted share and the number of respondents.',
  counts: 'Events are counted: the variance of a count grows with what is expected.',
  between: 'What sets cells apart beyond the terms. It bounds the weight of the largest cells.',
  shared: 'Something moves all cells of a group at once.',
};

/** Two choices of a given error; neither is a default. */
export const scaleNames = {
  fixed: 'taken as it stands',
  free: 'right up to a common factor, estimated here',
} as const;

/** The exponent of a power, as a choice. */
export const exponentTexts = {
  title: 'The power',
  says: '0 makes no difference between cells, 1 is proportional.',
  estimate: 'Let the data say',
  stated: 'State it',
  keep: 'Keep',
} as const;

/** "to a power estimated here", "to the power 0.5". */
export function exponentText(value: number | 'estimate'): string {
  return value === 'estimate' ? 'to a power estimated here' : `to the power ${exact(value)}`;
}

export const freedomTexts = {
  title: 'What the given errors rest on',
  says: 'Errors from few respondents are noisy themselves: with 5 degrees of freedom each, weighting by them can cost more than it gains.',
  exact: 'Take them as exact',
  number: 'So many degrees of freedom each:',
  column: 'A column that tells them:',
  keep: 'Keep',
} as const;

/** "taken as exact", "on 23 degrees of freedom each". */
export function freedomChoice(freedom: Freedom): string {
  if (freedom === null) return 'taken as exact';
  return typeof freedom === 'number'
    ? `on ${exact(freedom)} degrees of freedom each`
    : `on the degrees of freedom in ${freedom.column}`;
}

/** Why a kind of part cannot be chosen with these columns; null where it can. */
export function roleLackingText(role: 'size' | 'error' | 'count' | 'exposure' | null): string | null {
  if (role === null) return null;
  const what = {
    size: 'the size of a cell',
    error: 'the error of a cell',
    count: 'the count',
    exposure: 'the exposure',
  };
  return `needs a column that is ${what[role]}: state it under Data`;
}

/** What changed besides what was asked for. */
export function alsoSentence(also: readonly AlsoChanged[]): string | null {
  if (also.length === 0) return null;
  return `With it changed ${list(also.map((one) => alsoPhrases[one]))}.`;
}

const alsoPhrases: { readonly [A in AlsoChanged]: string } = {
  estimate: 'the method of estimation, to the structure’s own',
  inference: 'the inference, back to model-based',
  fixed: 'parameters that were set and are no longer part of it',
  'rival-removed': 'the candidates beside',
  'questions-removed': 'the questions: those that the terms no longer carry were taken out',
  'matters-removed': 'the smallest differences that matter of terms that are gone',
};

/** What each sampling part would rest on in this plan: the columns that it reads. */
function partColumns(part: Part, roles: Roles): string[] {
  switch (part.kind) {
    case 'per-size':
    case 'size-power':
    case 'binomial':
      return [roles.size, roles.designEffect].filter((one) => one !== null);
    case 'given':
      return [roles.error].filter((one) => one !== null);
    case 'counts':
      return [roles.count, roles.exposure].filter((one) => one !== null);
    case 'proxy':
    case 'per-class':
      return [part.column];
    case 'shared':
      return [...part.by];
    default:
      return [];
  }
}

/** The columns that a part rests on, behind its name; nothing where it rests on none. */
export function partColumnsText(part: Part, roles: Roles): string {
  const columns = part.kind === 'proxy' ? [] : partColumns(part, roles);
  return columns.length === 0 ? '' : `(${list(columns)})`;
}

/** The text of a decision about the structure, as it goes on record. */
export function decisionText(structure: string, reason: string): string {
  const trimmed = reason.trim();
  const end = /[.!?]$/.test(trimmed) ? '' : '.';
  return `Variance structure: ${structure}. ${trimmed}${end}`;
}

/** How many structures were tried, and when. */
export function triedSoFar(tried: { readonly count: number; readonly before: number; readonly after: number }): string {
  if (tried.count === 0) return 'No structure was fitted yet.';
  const total =
    tried.count === 1
      ? 'One structure was tried in this project'
      : `${tried.count} structures were tried in this project`;
  if (tried.before === 0) return `${total}, with the answer in view. The report counts them.`;
  return `${total}: ${tried.before} before the answer was uncovered, ${tried.after} after. The report counts them.`;
}
