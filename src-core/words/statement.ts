import type { Part, Plan } from '../protocol/plan';
import type { CellResult, Result, VarianceParameter } from '../protocol/result';
import { freedomText } from './coefficients';
import { decimalsBy, exact, levelText, list, number, numberWord, percent, rangeText, sizeText } from './numbers';
import { methodPhrase } from './rules';
import { structureName } from './structures';
import { cellName, varianceUnit } from './units';

/** What one value of the outcome is called. */
export function outcomeNoun({ roles }: Plan): 'mean' | 'share' | 'rate' | 'proportion' {
  if (roles.count !== null) return roles.exposure === null ? 'proportion' : 'rate';
  return roles.outcomeUnit === 'number' ? 'mean' : 'share';
}

/** An estimated variance parameter inside a sentence: "0.70 (95 % interval 0.15 to 1.96)". */
export function parameterText(one: VarianceParameter | undefined, level: number): string {
  if (one === undefined || one.estimate === null) return 'a value that these cells leave undefined';
  if (one.fixed) return `${exact(one.estimate)}, set by the plan`;
  const width = one.low === null || one.high === null ? null : (one.high - one.low) / 4;
  // Two digits of the estimate are told even where its interval is wide.
  const decimals = Math.min(
    decimalsBy(width, one.estimate) + 2,
    Math.max(decimalsBy(width, one.estimate), decimalsBy(one.estimate)),
  );
  const shown = number(one.estimate, width === null ? { digits: 3 } : { decimals });
  if (one.atBoundary)
    return `${one.estimate === 0 ? '0' : shown} (at its boundary${one.high === null ? '' : `; up to ${number(one.high, { digits: 2 })} by the ${levelText(level)} interval`})`;
  if (width === null) return shown;
  return `${shown} (${levelText(level)} interval ${rangeText(one.low, one.high, decimals)})`;
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
  const start = `The error variance of each ${outcomeNoun(plan)} is ${sampling.map((part) => samplingPhrase(part, plan, value)).join(' and ')}`;
  const more = others.map((part) =>
    part.kind === 'shared'
      ? `${value(`omega2: ${part.by.join(' × ')}`)} shared by all cells of the same ${part.by.join(' and ')}`
      : `${value('tau2')} for what sets cells apart beyond sampling, the same for every cell`,
  );
  return `${[start, ...more.map((phrase) => `plus ${phrase}`)].join(', ')}.`;
}

function samplingPhrase(part: Part, plan: Plan, value: (name: string) => string): string {
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
    default:
      return `that of its “${part.kind}” part`;
  }
}

function sizePhrase({ roles }: Plan): string {
  return roles.designEffect === null ? 'the number of respondents behind it' : 'the effective size behind it';
}

function givenPhrase({ roles, outcomeScale }: Plan): string {
  const onScale = outcomeScale === 'log' ? ', taken over to the log scale by dividing by the value itself' : '';
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
  if (free.some(({ estimate }) => estimate === null))
    return `What is unknown in it cannot be estimated from these cells.${errors}`;
  if (free.length === 0) return `Nothing in it was estimated here.${errors}`;
  return `What is unknown in it was estimated here by ${methodPhrase(fit.estimate)}.${errors}`;
}

/** Whether cells are independent, and how far that was tested. */
export function independenceSentence({ evidence }: Spoken): string {
  const tests = evidence.filter(({ test }) => test === 'dependence');
  const by = (reading: string): string[] => tests.filter((one) => one.reading === reading).map(pairingPhrase);
  const against = by('rejects');
  const quiet = by('does-not-contradict');
  const start = 'Cells are taken as independent';
  if (against.length > 0)
    return `${start}, and the data contradict that: residuals go together ${list(against)}${quiet.length > 0 ? `, though not detectably ${list(quiet)}` : ''}.`;
  if (quiet.length > 0) return `${start}; that was tested ${list(quiet)} and not contradicted.`;
  return `${start}; that was not tested.`;
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
