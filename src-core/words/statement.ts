import { isLinked, isOfCounts } from '../protocol/linked';
import type { Part, Plan } from '../protocol/plan';
import type { CellResult, Result, VarianceParameter } from '../protocol/result';
import { freedomText } from './coefficients';
import { classesPhrase, logLinearPhrase } from './estimated-variances';
import { linkedSentence } from './linked-cells';
import { decimalsBy, exact, levelText, list, number, numberWord, percent, sizeText } from './numbers';
import { parameterText } from './parameter-text';
import { methodPhrase } from './rules';
import { structureName } from './structures';
import { cellName, varianceUnit } from './units';

/** What one value of the outcome is called. */
export function outcomeNoun({ roles }: Plan): 'mean' | 'share' | 'rate' | 'proportion' {
  if (roles.count !== null) return roles.exposure === null ? 'proportion' : 'rate';
  return roles.outcomeUnit === 'number' ? 'mean' : 'share';
}

type Spoken = Pick<Result, 'plan' | 'fit' | 'evidence'>;

/** How the error variance of a cell arises, as one sentence. */
export function varianceSentence({ plan, fit }: Spoken): string {
  const { level } = fit.inference;
  const value = (name: string): string =>
    parameterText(
      fit.variance.find((one) => one.name === name),
      level,
    );
  const sampling = plan.variance.parts.filter((part) => part.kind !== 'between' && part.kind !== 'shared');
  const others = plan.variance.parts.filter((part) => part.kind === 'between' || part.kind === 'shared');
  const start = `The error variance of each ${outcomeNoun(plan)} is ${sampling.map((part) => samplingPhrase(part, { plan, variance: fit.variance, value })).join(' and ')}`;
  const more = others.map((part) =>
    part.kind === 'shared'
      ? `${value(`omega2: ${part.by.join(' × ')}`)} shared by all cells of the same ${part.by.join(' and ')}`
      : `${value('tau2')} for what sets cells apart beyond sampling, the same for every cell`,
  );
  return `${[start, ...more.map((phrase) => `plus ${phrase}`)].join(', ')}.`;
}

function samplingPhrase(
  part: Part,
  {
    plan,
    variance,
    value,
  }: {
    readonly plan: Plan;
    readonly variance: readonly VarianceParameter[];
    readonly value: (name: string) => string;
  },
): string {
  const size = sizePhrase(plan);
  switch (part.kind) {
    case 'constant':
      return `${value('phi')}, the same for every cell`;
    case 'per-size':
      return `${value('phi')} divided by ${size}`;
    case 'given':
      return part.scale === 'free'
        ? `${givenPhrase(plan)}, times a factor of ${value('phi')} that these data settle`
        : givenPhrase(plan);
    case 'size-power':
      return `${value('phi')} divided by ${size} to the power ${part.exponent === 'estimate' ? value('delta') : exact(part.exponent)}`;
    case 'proxy':
      return `${value('phi')} times ${part.column} to the power ${part.exponent === 'estimate' ? value('delta') : exact(part.exponent)}`;
    case 'binomial':
    case 'counts':
      return countedPhrase(part, plan, value);
    case 'matrix':
      return `its entry on the diagonal of the supplied matrix “${part.file}”${part.scale === 'free' ? `, times a factor of ${value('phi')} that these data settle` : ''}`;
    case 'per-class':
      return classesPhrase(part, { variance, size, value });
    case 'log-linear':
      return logLinearPhrase(part);
    default:
      return `that of its “${part.kind}” part`;
  }
}

function countedPhrase(
  part: Extract<Part, { kind: 'binomial' | 'counts' }>,
  plan: Plan,
  value: (name: string) => string,
): string {
  const from = plan.outcomeScale !== 'identity' && !isLinked(plan) ? 'observed' : 'fitted';
  const on = from === 'observed' ? `, taken over to the ${plan.outcomeScale} scale` : '';
  const own =
    part.kind === 'counts'
      ? `that of a count, which is its own mean: the ${from} rate over the exposure${on}`
      : `that of a share of ${sizePhrase(plan).replace(' behind it', '')}, at its ${from} value${on}`;
  return part.scale === 'free' ? `${own}, times a factor of ${value('phi')} that these data settle` : own;
}

function sizePhrase({ roles }: Plan): string {
  return roles.designEffect === null ? 'the number of respondents behind it' : 'the effective size behind it';
}

const onScalePhrases: { readonly [S in Plan['outcomeScale']]: string } = {
  identity: '',
  log: ', taken over to the log scale by dividing by the value itself',
  logit: ', taken over to the logit scale by dividing by p (1 − p) of the value itself',
};

function givenPhrase({ roles, outcomeScale }: Plan): string {
  const onScale = onScalePhrases[outcomeScale];
  switch (roles.errorKind) {
    case 'se':
      return `the square of its supplied standard error${onScale}`;
    case 'variance':
      return `its supplied error variance${onScale}`;
    case 'half-width':
      return `the square of the standard error behind its supplied ${levelText(roles.errorLevel ?? 0.95)} half-width${onScale}`;
    case 'cv':
      return `the square of its supplied coefficient of variation times its value${onScale}`;
  }
}

/** By what the variance was found, and what the given errors rest on. */
export function methodSentence({ plan, fit }: Spoken): string {
  const free = fit.variance.filter((one) => !one.fixed);
  const given = plan.variance.parts.some((part) => part.kind === 'given');
  const freedom = fit.errorFreedom;
  const errors = !given
    ? ''
    : freedom === null
      ? ' The supplied errors are taken as exact.'
      : ` The supplied errors are estimates themselves, on about ${freedomText(freedom.median)} degrees of freedom.`;
  const counted = countedMethod(plan);
  if (counted !== null) return counted;
  if (free.some(({ estimate }) => estimate === null))
    return `What is unknown in it cannot be estimated from these cells.${errors}`;
  if (free.length === 0) return `Nothing in it was estimated here.${errors}`;
  return `What is unknown in it was estimated here by ${methodPhrase(fit.estimate)}.${errors}`;
}

/** How a fit whose variances follow from its means was found; null for any other. */
function countedMethod(plan: Plan): string | null {
  if (!isOfCounts(plan)) return null;
  const alone = plan.variance.parts.length === 1;
  const free = plan.variance.parts.some((part) => 'scale' in part && part.scale === 'free');
  const phi = free ? ' The factor φ is the sum of squared whitened residuals over the residual freedom.' : '';
  if (isLinked(plan))
    return `The coefficients were found by maximum likelihood of the counts, with the ${plan.outcomeScale} of the mean on the terms; ${plan.roles.exposure === null ? 'cells of none and all' : 'cells without a count'} are taken as they are.${phi}`;
  if (plan.outcomeScale !== 'identity')
    return `The coefficients are those of minimum chi-square: the ${plan.outcomeScale} of each observed value, weighted by what its own size and value say${alone ? '' : `, with what else is unknown estimated by ${methodPhrase(plan.estimate)}`}.${alone ? phi : ''}`;
  if (plan.estimate.method === 'two-step')
    return 'The variances follow from the means of unweighted least squares; then one weighted fit, without iteration.';
  return `The variances follow from the fitted means, and these from the variances: both were iterated until nothing changed${alone ? '' : `, and what else is unknown estimated by ${methodPhrase(plan.estimate)} in every round`}.${alone ? phi : ''}`;
}

/** How cells go together, or that they are taken as independent and how far that was tested. */
export function independenceSentence({ plan, fit, evidence }: Spoken): string {
  const linked = linkedSentence({ plan, fit });
  if (linked !== null) return linked;
  const tests = evidence.filter(({ test }) => test === 'dependence');
  const by = (reading: string): string[] => tests.filter((one) => one.reading === reading).map(pairingPhrase);
  const against = by('rejects');
  const quiet = by('does-not-contradict');
  const grouped = groupedErrors(plan);
  const start = grouped === null ? 'Cells are taken as independent' : 'The weights take cells as independent';
  const errors = grouped === null ? '' : ` The errors do not: they let ${grouped} go together in any way.`;
  if (against.length > 0)
    return `${start}, and the data contradict that: residuals go together ${list(against)}${quiet.length > 0 ? `, though not detectably ${list(quiet)}` : ''}.${errors}`;
  if (quiet.length > 0) return `${start}; that was tested ${list(quiet)} and not contradicted.${errors}`;
  return `${start}; that was not tested.${errors}`;
}

/** Cells whose residuals are summed for the errors: "those of the same firm"; null where each cell stands alone. */
function groupedErrors({ inference }: Plan): string | null {
  if (inference.kind !== 'clustered' && inference.kind !== 'wild') return null;
  const also = inference.kind === 'clustered' ? inference.alsoBy : null;
  const same = (by: readonly string[]): string => `of the same ${list(by)}`;
  return `those ${same(inference.by)}${also === null ? '' : `, or ${same(also)},`}`;
}

function pairingPhrase({ detail }: Result['evidence'][number]): string {
  const by = Array.isArray(detail['by']) ? detail['by'].filter((one) => typeof one === 'string') : [];
  const { order, neighbours } = detail;
  if (typeof neighbours === 'string') return `among the neighbours of “${neighbours}”`;
  const within = by.length === 0 ? '' : `by ${list(by)}`;
  return typeof order === 'string' ? `${within === '' ? '' : `${within} `}along ${order}` : within;
}

/** Whose weights the coefficients use, where they are not the structure's own. */
export function targetSentence({ plan }: Pick<Result, 'plan'>): string | null {
  const { target } = plan;
  if (target === 'structure' || target === 'diagonal') return null;
  const weights =
    target === 'persons'
      ? 'by persons: each cell counts by its size'
      : target === 'cells'
        ? 'equal: each cell counts alike'
        : `those of “${structureName(target)}”`;
  return `The weights of the coefficients are not those of this structure but ${weights}; the errors still come from it.`;
}

/** How much of a median cell's variance is sampling; nothing where no between part stands. */
export function samplingShareSentence({ fit }: Spoken): string | null {
  if (fit.samplingShare === null) return null;
  return `In a cell of median size, sampling makes up ${percent(fit.samplingShare)} of it.`;
}

/** How many structures were tried and over what range the coefficient ran. */
export function triedSentence(
  result: Pick<Result, 'fit' | 'beside'>,
  of: { readonly tried: number; readonly term: string | null },
): string {
  if (of.tried <= 1) return 'No other structure was tried.';
  const start = `${numberWord(of.tried)} structures were tried`;
  const own = result.fit.coefficients.find((one) => one.term === of.term);
  if (own === undefined || result.beside.length === 0) return `${start}.`;
  const all = [own, ...result.beside.flatMap(({ coefficients }) => coefficients.filter((c) => c.term === own.term))];
  const decimals = decimalsBy(own.se, own.estimate);
  const values = all.map(({ estimate }) => estimate);
  const [low, high] = [Math.min(...values), Math.max(...values)].map((value) => number(value, { decimals })) as [
    string,
    string,
  ];
  return low === high
    ? `${start}; the coefficient of ${own.term} was ${low} under each.`
    : `${start}; the coefficient of ${own.term} ran from ${low} to ${high}.`;
}

/** One cell worked out, so that the statement can be checked by hand. */
export function workedCell({ plan }: Spoken, cell: CellResult): string {
  const size = cell.effectiveSize ?? cell.size;
  const unit = varianceUnit(plan);
  const of =
    size === null ? '' : ` (${plan.roles.designEffect === null ? 'size' : 'effective size'} ${sizeText(size)})`;
  return `For example, ${cellName(cell.label, plan)}${of} has the error variance ${number(cell.variance)}${unit === null ? '' : ` ${unit}`}, a standard deviation of ${number(Math.sqrt(cell.variance), { digits: 3 })}, and ${percent(cell.weightShare)} of the weight.`;
}
