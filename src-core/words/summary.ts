import type { Coefficient, Overturn, Result } from '../protocol/result';
import { interceptName } from '../protocol/term-names';
import { changePhrase, crossingPhrase } from './changes';
import { estimateInUnit, pText, referenceText, withheldText } from './coefficients';
import { count, decimalsBy, exact, levelText, list, number, numberWord, plural, rangeText } from './numbers';
import { tiesCells } from './structures';
import { outcomeName, stepOf } from './units';

/** The answer for one coefficient, in its units. */
export function answerFor(result: Result, own: Coefficient): string {
  const { plan, fit } = result;
  const value = estimateInUnit(result, own);
  if (own.term === interceptName && fit.coefficients.length === 1)
    return `The mean of ${outcomeName(plan)}, with the cells weighted as stated below, is ${value}.`;
  const { more, per } = stepOf(result, own.term);
  if (more === null) return `The coefficient of ${own.term} (${per}) is ${value}.`;
  const others = fit.coefficients.filter(({ term }) => term !== own.term && term !== interceptName).length;
  const start = others === 0 ? capital(more) : `With the other ${others === 1 ? 'term' : 'terms'} held, ${more}`;
  return `${start} goes with a difference of ${value}.`;
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

/** Where the interval stands: against zero, and against the smallest difference that matters. */
export function standingSentence({ plan, fit }: Result, own: Coefficient): string {
  const { low, high, estimate } = own;
  if (low === null || high === null) {
    if (fit.residualFreedom <= 0)
      return 'It has no interval: there are as many coefficients as cells, and no residual to judge by.';
    return own.se === null
      ? 'It has no interval: its error is undefined here.'
      : `It has no interval${plan.inference.kind === 'wild' ? ': the wild bootstrap tells p values alone' : ''}.`;
  }
  const matters = plan.matters[own.term];
  const zero = low > 0 || high < 0 ? 'The interval excludes zero' : 'The interval takes zero in';
  if (matters === undefined || !(matters > 0)) return `${zero}; the plan states no smallest difference that matters.`;
  const mark = exact(matters);
  if (low >= matters || high <= -matters)
    return `The smallest difference that matters was set at ${mark}: the whole interval lies beyond it.`;
  if (low > -matters && high < matters)
    return `The smallest difference that matters was set at ${mark}: the interval holds no difference of that size, in either direction.`;
  const sign = estimate < 0 ? 'below' : 'above';
  return `${zero}. The smallest difference that matters was set at ${mark}: the interval reaches beyond it ${low < -matters && high > matters ? 'on both sides' : sign === 'below' && low < -matters ? 'below' : high > matters ? 'above' : 'below'}, and holds smaller differences too.`;
}

/** On what the interval rests, and what robust errors would make of it. */
export function uncertaintySentence(result: Result, own: Coefficient): string | null {
  if (own.se === null) return null;
  const decimals = decimalsBy(own.se) + 1;
  const shown = pText(own);
  const p =
    own.p === null || shown === withheldText
      ? ''
      : shown.startsWith('<') || shown.startsWith('>')
        ? `, p ${shown}`
        : `, p = ${shown}`;
  const start = `Its standard error is ${number(own.se, { decimals })} (${inferenceName(result)}${own.reference === null ? '' : `, ${referenceText(own.reference)}`}${p})`;
  const robust = result.robustBeside?.find((one) => one.term === own.term);
  if (result.fit.inference.kind !== 'model' || robust?.se == null) return `${start}.`;
  return `${start}; the robust one (${tiesCells(result.plan.variance) ? 'CR2' : 'HC3'}) is ${number(robust.se, { decimals })}.`;
}

/** The kind of inference, as it stands beside an error. */
export function inferenceName({ fit }: Result): string {
  const { inference } = fit;
  switch (inference.kind) {
    case 'model':
      return 'model-based';
    case 'knapp-hartung':
      return inference.floor ? 'Knapp-Hartung, factor at least 1' : 'Knapp-Hartung';
    case 'kenward-roger':
      return 'Kenward-Roger';
    case 'robust':
      return `robust, ${inference.correction}`;
    case 'clustered':
      return `clustered by ${list([...inference.by, ...(inference.alsoBy ?? [])])}, ${inference.correction}`;
    case 'wild':
      return `wild bootstrap by ${list(inference.by)}`;
  }
}

/** What was tried against the finding, and whether anything overturns it. */
export function overturnSentences(result: Result, own: Coefficient): string {
  const tried = result.overturn.filter(({ term }) => term === own.term);
  const [largest] = tried;
  if (largest === undefined) return `Nothing could be tried against the coefficient of ${own.term}.`;
  const crossing = tried.filter(({ crosses }) => crosses !== null);
  const [first] = crossing;
  const marks = (result.plan.matters[own.term] ?? 0) > 0 ? 'zero or the smallest difference that matters' : 'zero';
  const range = own.low === null ? 'it' : 'it or its interval';
  if (first === undefined || first.crosses === null)
    return `${numberWord(tried.length)} ${tried.length === 1 ? 'change' : 'changes'} ${tried.length === 1 ? 'was' : 'were'} tried on it (${kindsTold(tried)}); none takes ${range} across ${marks}. The largest shift: ${changePhrase(largest.change, result.plan)} gives ${changed(result, largest, own)}.`;
  return `${numberWord(crossing.length)} of ${plural(tried.length, 'change')} tried on it (${kindsTold(tried)}) ${crossing.length === 1 ? 'takes' : 'take'} ${range} across ${marks}${crossing.length === 1 ? '' : '. The largest such shift'}: ${changePhrase(first.change, result.plan)} gives ${changed(result, first, own)}, across ${crossingPhrase(first.crosses)}.`;
}

function changed(result: Result, { estimate, low, high }: Overturn, own: Coefficient): string {
  const decimals = decimalsBy(own.se, own.estimate);
  const shown = number(estimate, { decimals });
  if (low === null || high === null) return shown;
  return `${shown} (${levelText(result.fit.inference.level)} interval ${rangeText(low, high, decimals)})`;
}

/** What was tried, by kind; cells and groups in the result are the most influential of all. */
const kinds: readonly [Overturn['change']['kind'], (number: number) => string][] = [
  ['rival', (n) => plural(n, 'other structure')],
  ['exponent', (n) => plural(n, 'size exponent')],
  ['cell', (n) => (n === 1 ? 'the cell' : `the ${count(n)} cells`)],
  ['block', (n) => (n === 1 ? 'the group of cells' : `the ${count(n)} groups of cells`)],
  ['bound', (n) => plural(n, 'extreme of values known to within limits', 'extremes of values known to within limits')],
  ['robust', (n) => (n === 1 ? 'the other kind of error' : `${count(n)} other kinds of error`)],
];

function kindsTold(tried: readonly Overturn[]): string {
  const of = (kind: Overturn['change']['kind']): number => tried.filter(({ change }) => change.kind === kind).length;
  const phrases = (wanted: readonly string[]): string[] =>
    kinds.flatMap(([kind, say]) => (wanted.includes(kind) && of(kind) > 0 ? [say(of(kind))] : []));
  const left = phrases(['cell', 'block']);
  const one = of('cell') + of('block') === 1;
  const deleted =
    left.length === 0 ? [] : [`leaving out, one by one, ${list(left)} that ${one ? 'moves' : 'move'} it most`];
  return list([...phrases(['rival', 'exponent', 'bound', 'robust']), ...deleted]);
}

/** On a log or logit scale: the coefficient as a factor on the outcome itself, or on its odds. */
export function factorSentence(
  { plan, fit }: Pick<Result, 'plan' | 'fit'>,
  factor: { readonly estimate: number; readonly low: number | null; readonly high: number | null },
): string {
  const text = (value: number | null): string => number(value, { digits: 3 });
  const range =
    factor.low === null || factor.high === null
      ? ''
      : ` (${levelText(fit.inference.level)} interval ${text(factor.low)} to ${text(factor.high)})`;
  return plan.outcomeScale === 'logit'
    ? `The odds of ${outcomeName(plan)} are multiplied by ${text(factor.estimate)}${range}.`
    : `On the scale of ${outcomeName(plan)} that is a factor of ${text(factor.estimate)}${range}.`;
}

/** Where more cautions stand than page one carries. */
export function moreCautions(left: number): string {
  return `${plural(left, 'further caution')} ${left === 1 ? 'stands' : 'stand'} in the section “Cautions”.`;
}
