import type { Estimate, Inference, MomentRule, Plan, Question, Target } from '../protocol/plan';
import type { Coefficient, Result } from '../protocol/result';
import { decimalsBy, levelText, list, number, plural, quoted } from './numbers';
import { ruleName } from './rules';
import { structureName } from './structures';

/** Sentences of the screen of fits. */

export const fitTexts = {
  modelHeading: 'The model',
  addTerm: 'add a term',
  removeTerm: 'Take it out',
  changeTerm: 'Change it',
  matters: 'Smallest difference that matters',
  mattersHelp:
    'A change of the outcome per one step of this term that would matter in use. Leave it empty if none was settled.',
  keep: 'Keep',
  column: 'Column',
  form: 'Form',
  times: 'Times another term',
  baseline: 'Baseline level',
  baselineHelp: 'The level that the others are held against. Empty: the first in order.',
  power: 'Power',
  addIt: 'Add it',
  valueForQuestions: 'Its value in questions that are asked',
  valueForQuestionsHelp: 'Questions state a value of every column. Left empty, those that lack this one are taken out.',
  alone: 'no: it stands alone',
  termStands: 'This term stands already.',
  noColumns: 'No further column is at hand.',
  constant: 'The constant',
  constantIn: 'constant',
  constantOut: 'no constant',
  constantSays: 'Without it a category that stands as a term keeps all its levels, and R² is measured from zero.',
  dropConstant: 'Leave the constant out',
  takeConstant: 'Put the constant in',
  coefficientsHeading: 'Coefficients',
  nothingMoved: 'nothing moved',
  intervalsMoved: 'no estimate moved, but intervals did',
  newTerm: 'new',
  with: 'with',
  drawn: 'drawn',
  contents: 'On this page',
  foundBy: 'Found by',
  errorsFrom: 'Errors come from',
  levelIs: (level: number): string => `intervals at ${levelText(level)}`,
  takeInView: 'Take it in view below',
  theQuestion: 'This question',
  combinationOf: 'The combination: so many',
  evidenceLead: 'Point at a test for what it asks and how it reads.',
  estimateGoverned: 'How the estimate is found',
  weightsGoverned: 'What the weights aim at',
  intervalGoverned: 'How wide the interval is',
  errorGoverned: 'Where the error comes from',
  levelLabel: 'Level, in per cent',
  referenceHelp:
    'The ratio is estimate over error. Freedom counts cells less coefficients, never respondents, unless another rule is named.',
  inView: 'In view below',
  inViewHelp: 'The coefficient that prices, the beam and the scan are told for.',
  besideHeading: 'Under other structures',
  priceHeading: 'The price of a weighting',
  squareLead:
    'Read along a row: if that structure is the truth, the error of the coefficient by each weighting. Smallest on the diagonal.',
  breakEvenHeading: 'Where equal weights and weights by size break even',
  beamHeading: 'The beam',
  scanHeading: 'The exponent scan',
  evidenceHeading: 'Evidence about the structure',
  influenceHeading: 'Cells that move it',
  robustHeading: 'Robust errors beside',
  overturnHeading: 'What would overturn it',
  boundsHeading: 'Over values known to within limits',
  togetherHeading: 'Were sampling errors to go together',
  takesHeading: 'What it would take',
  goodnessHeading: 'How close the fit is',
  rulesHeading: 'τ² by several rules',
  questionsHeading: 'Questions',
  ask: 'Ask a question',
  askIt: 'Ask it',
  removeQuestion: 'Take it out',
  questionKind: 'What is asked',
  questionName: 'Its name, if it is to have one',
  family: 'Family, for Holm’s adjustment',
  jointTerms: 'Terms that are to be zero together',
  combinationFactor: 'times',
  equals: 'Held against',
  newSize: 'Size of the new cell',
  newError: 'Error of the new cell',
  at: 'Where',
  against: 'Less the average where',
  contrast: 'Compare with a second place',
  plansHeading: 'Plans beside each other',
  onePlan: 'The project holds one plan. A second one is set beside it here: one row a term, one mark a plan.',
  anotherPlan: 'Add a plan like this one',
  anotherPlanSays:
    'It begins as this plan stands, under a name of its own; what you change then is changed in it alone.',
  addPlan: 'Add it',
  planName: 'Its name',
  outcome: 'The outcome',
  share: 'Its share of the population',
  morePlaces: 'Another part of the population',
  plansLead: 'One row a term, one mark a plan.',
  cautionsHeading: 'Cautions',
  noCautions: 'No caution is due.',
  fitting: 'Fitting …',
  stale: 'What follows is of the plan before the last change, which could not be fitted: see above.',
  noFit: 'Nothing is fitted yet: state the variance structure first.',
  toVariance: 'State it under Variance',
  coveredNote: 'The answer is covered until the structure is accepted under Variance.',
} as const;

/** The sections of the page, by their names in it. */
export const fitSections = [
  { part: 'coefficients', name: 'Coefficients' },
  { part: 'errors', name: 'Errors' },
  { part: 'individuals', name: 'Respondents' },
  { part: 'answer', name: 'The one in view' },
  { part: 'price', name: 'Price' },
  { part: 'beam', name: 'Beam' },
  { part: 'influence', name: 'Influence' },
  { part: 'scan', name: 'Exponent scan' },
  { part: 'bounds', name: 'Bounds' },
  { part: 'takes', name: 'What it takes' },
  { part: 'together', name: 'Common correlation' },
  { part: 'evidence', name: 'Evidence' },
  { part: 'robust', name: 'Robust errors' },
  { part: 'goodness', name: 'Goodness of fit' },
  { part: 'questions', name: 'Questions' },
  { part: 'plans', name: 'Plans' },
  { part: 'cautions', name: 'Cautions' },
] as const;

/** What can be asked. */
export const questionKinds: { readonly [K in Question['kind']]: string } = {
  joint: 'Are several terms zero together?',
  combination: 'Does a combination of coefficients equal a value?',
  expect: 'What is expected of a cell with stated values?',
  average: 'What is the fitted average somewhere, or a difference of two?',
};

/** A method of estimation as a choice. */
export const methodChoices: { readonly [M in Estimate['method']]: string } = {
  'least-squares': 'least squares on whitened data, one scale from its residuals',
  restricted: 'restricted likelihood: allows for the freedom that the coefficients take up',
  full: 'full likelihood: its variances are a little too small with few cells',
  'two-step': 'two steps: the variance from unweighted residuals, then one weighted fit',
  moments: 'moments:',
};

export const momentRules: readonly MomentRule[] = ['dersimonian-laird', 'paule-mandel', 'hanushek'];

/** A moment rule as a choice. */
export function momentChoice(rule: MomentRule): string {
  return ruleName(rule);
}

/** A target of the weights as a choice. */
export const targetChoices: { readonly [T in Extract<Target, string>]: string } = {
  structure: 'the structure itself: the most exact weights if it holds',
  persons: 'persons: a cell counts by its size, whatever the structure',
  cells: 'cells: each counts alike, whatever the structure',
  diagonal: 'the variances alone, correlation left aside',
};

/** A target as it stands in a sentence: "weights by the structure". */
export function targetPhrase(target: Target): string {
  if (typeof target !== 'string') return `weights of ${quoted(structureName(target))}`;
  const phrases = {
    structure: 'weights by the structure',
    persons: 'weights by persons',
    cells: 'equal weights',
    diagonal: 'weights by the variances alone',
  } as const;
  return phrases[target];
}

/** A kind of inference as a choice. */
export const inferenceChoices: { readonly [K in Inference['kind']]: string } = {
  model: 'the stated structure',
  'knapp-hartung': 'the stated structure, times the scatter that was found (Knapp-Hartung)',
  'kenward-roger': 'the structure, adjusted for its estimated parameters (Kenward-Roger)',
  robust: 'squared residuals, whatever the structure (robust)',
  clustered: 'residuals summed by clusters',
  wild: 'signs of clusters drawn anew (wild bootstrap)',
};

/** The floor of Knapp-Hartung inference as a choice. */
export const floorChoice = 'never narrower than the structure alone';

/** The scale of the outcome as a choice. */
export const scaleChoices: { readonly [S in Plan['outcomeScale']]: { readonly text: string; readonly says: string } } =
  {
    identity: { text: 'as it stands', says: 'Coefficients are differences, in the outcome’s own unit.' },
    log: {
      text: 'its logarithm',
      says: 'Coefficients are differences of logarithms; given errors are divided by the value. The log of a mean is not the mean of logs.',
    },
    logit: { text: 'its logit', says: 'For shares.' },
  };

/** A form of a column as a term. */
export const formNames = {
  plain: 'as it is',
  log: 'its logarithm',
  sqrt: 'its square root',
  inverse: 'its inverse',
  power: 'a power of it',
  category: 'a category, one coefficient a level',
} as const;

/** How far a coefficient moved since the last fit: "was 0.83", "new", or nothing where it stands as it stood. */
export function movedText(before: Result | null, now: Coefficient): string {
  if (before === null) return '';
  const then = before.fit.coefficients.find(({ term }) => term === now.term);
  if (then === undefined) return fitTexts.newTerm;
  const decimals = decimalsBy(now.se ?? then.se, now.estimate);
  const [was, is] = [then.estimate, now.estimate].map((value) => number(value, { decimals })) as [string, string];
  return was === is ? '' : `was ${was}`;
}

/** What moved since the last fit, as one sentence; null without a fit before, or where its outcome was another. */
export function movedSentence(before: Result | null, now: Result): string | null {
  if (before === null || before.plan.outcomeScale !== now.plan.outcomeScale) return null;
  const moved = now.fit.coefficients.filter((one) => movedText(before, one).startsWith('was'));
  const came = now.fit.coefficients.filter((one) => movedText(before, one) === fitTexts.newTerm);
  const went = before.fit.coefficients.filter(({ term }) => !now.fit.coefficients.some((one) => one.term === term));
  const cells = now.cells.length - before.cells.length;
  const parts = [
    ...(moved.length > 0 ? [`${list(moved.map(({ term }) => term))} moved`] : []),
    ...(came.length > 0 ? [`${list(came.map(({ term }) => term))} came in`] : []),
    ...(went.length > 0 ? [`${list(went.map(({ term }) => term))} went out`] : []),
    ...(cells !== 0
      ? [
          `${plural(Math.abs(cells), 'cell')} ${cells > 0 ? 'more' : 'fewer'} ${Math.abs(cells) === 1 ? 'is' : 'are'} used`,
        ]
      : []),
  ];
  if (parts.length === 0)
    return `Since the last fit ${sameIntervals(before, now) ? fitTexts.nothingMoved : fitTexts.intervalsMoved}.`;
  return `Since the last fit ${list(parts)}.`;
}

function sameIntervals(before: Result, now: Result): boolean {
  const ends = ({ fit }: Result): string => JSON.stringify(fit.coefficients.map(({ low, high }) => [low, high]));
  return ends(before) === ends(now);
}

/** The letter of a plan among those beside each other. */
export const planLetters: readonly string[] = [...'ABCDEFGHIJKLMNOPQRSTUVWXYZ'];

/** "A Main": a plan's name with its letter before it. */
export function planLetter(index: number, name: string): string {
  const letter = planLetters[index];
  return letter === undefined ? name : `${letter} ${name}`;
}

/** In what plans beside each other differ besides their answers; null where there is but one. */
export function plansNote(plans: readonly { readonly name: string; readonly result: Result }[]): string | null {
  const [first, ...others] = plans;
  if (first === undefined || others.length === 0) return null;
  const structures = plans.map(({ name, result }) => `${quoted(name)}: ${structureName(result.plan.variance)}`);
  const labels = new Set(first.result.cells.map(({ label }) => label));
  const cells = others.flatMap(({ name, result }) => {
    const theirs = result.cells.map(({ label }) => label);
    const extra = theirs.filter((label) => !labels.has(label)).length;
    const lacking = labels.size - (theirs.length - extra);
    if (extra + lacking === 0) return [];
    const told = [
      ...(lacking > 0 ? [`lacks ${plural(lacking, 'cell')} of ${quoted(first.name)}`] : []),
      ...(extra > 0 ? [`has ${plural(extra, 'cell')} more`] : []),
    ];
    return [`${quoted(name)} ${list(told)}`];
  });
  const scales = new Set(plans.map(({ result }) => `${outcomeOf(result.plan)}`));
  const outcome = scales.size > 1 ? ' Their outcomes or scales differ: the coefficients are not of one kind.' : '';
  const used = cells.length === 0 ? ' They use the same cells.' : ` ${list(cells)}.`;
  return `Structures: ${list(structures)}.${used}${outcome}`;
}

function outcomeOf({ roles, outcomeScale }: Plan): string {
  return `${outcomeScale} ${roles.outcome ?? roles.count} ${roles.exposure ?? ''} ${roles.per}`;
}

/** Head of the part of the screen that is told for one coefficient. */
export function inViewHeading(term: string): string {
  return `The coefficient of ${term}`;
}
