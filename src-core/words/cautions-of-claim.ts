import type { CautionCode, CautionFacts } from '../protocol/cautions';
import type { CautionSentences } from './caution-parts';
import { freedomText } from './coefficients';
import { list, listSome, listWithin, number, pIs, plural, pluralWord, quoted } from './numbers';
import { ruleName } from './rules';
import { parameterSign } from './structures';

type ClaimCode = Extract<
  CautionCode,
  | 'no-residual-freedom'
  | 'leave-one-out-undefined'
  | 'leverage-one'
  | 'freedom-below-four'
  | 'knapp-hartung-narrowed'
  | 'between-interval-empty'
  | 'parameters-hardly-separate'
  | 'errors-estimated'
  | 'errors-from-outcome'
  | 'log-of-means'
  | 'variation-above-one'
  | 'cells-suppressed'
  | 'term-constant-within-groups'
  | 'term-carried-by-few'
  | 'residuals-not-normal'
  | 'dependence-not-tested'
>;

/** What limits the claim. */
export const claimCautions: CautionSentences<ClaimCode> = {
  'no-residual-freedom': ({ cells, coefficients }) =>
    `${pluralWord(cells, 'cell')} and ${plural(coefficients, 'coefficient')} leave no residual: errors that need one are undefined, and no test can speak. Drop terms or find more cells.`,
  'leave-one-out-undefined': ({ residualFreedom }) =>
    `With ${plural(residualFreedom, 'degree')} of freedom left no cell can be spared: what a fit without it would say of its own error is undefined. Drop a term or find more cells.`,
  'leverage-one': ({ labels }) =>
    `${pluralWord(labels.length, 'cell is', 'cells are')} fitted exactly whatever the value there: ${listWithin(labels)}. A term rests on it alone, and robust errors are undefined. Drop that term, or say that the cell decides it.`,
  'freedom-below-four': ({ terms }) =>
    `${listSome(
      terms.map(({ term, freedom }) => `${term} has ${freedomText(freedom)}`),
      4,
    )} degrees of freedom. Below 4 a p value cannot be relied on, and is withheld here. Rely on the interval, and say how few cells or groups carry the term.`,
  'knapp-hartung-narrowed': ({ q, betweenAtZero }) =>
    betweenAtZero
      ? `The Knapp-Hartung factor is ${number(q, { digits: 3 })} and τ² is 0: the intervals are narrower than the given errors alone would make them. State the floor of 1 in the inference, and compare.`
      : `The Knapp-Hartung factor is ${number(q, { digits: 3 })}, below 1: it made the intervals narrower. Compare them with a floor of 1.`,
  'between-interval-empty': ({ rules }) =>
    `No value of τ² agrees with the scatter at the stated level: there is less of it than the given errors imply, and the Q-profile interval is empty (${list(rules.map(ruleName))}). The given errors may be too large; ask how they were made.`,
  'parameters-hardly-separate': ({ first, second, correlation }) =>
    `The cells hardly tell ${parameterSign(first)} from ${parameterSign(second)} (correlation ${number(correlation, { digits: 3 })}). Their sum is better known than either. Fix one from outside knowledge, or read them together.`,
  'errors-estimated': (facts) => estimatedErrors(facts),
  'errors-from-outcome': ({ cause }) =>
    `${causes[cause]} Low cells then look more precise than they are, and pull the fit down. Compare variances from fitted values, or equal weights, beside.`,
  'log-of-means': () =>
    'The outcome is the log of a mean, which is not the mean of logs: coefficients describe the former. Where spread differs between cells the two can part; say which one the question needs.',
  'variation-above-one': ({ column, cells, largest }) =>
    `${pluralWord(cells, 'cell')} ${cells === 1 ? 'has a coefficient' : 'have coefficients'} of variation above 1 in ${column}, up to ${number(largest, { digits: 3 })}. It is taken as error over outcome (0.05, not 5): if the column holds percentages, divide it by 100; else those outcomes say next to nothing.`,
  'cells-suppressed': ({ cells, labels }) =>
    `${pluralWord(cells, 'cell')} ${cells === 1 ? 'is' : 'are'} left out because ${cells === 1 ? 'its value is' : 'their values are'} suppressed: ${listWithin(labels)}. Suppressed cells are mostly small ones, so that the cells left are not a fair draw of all. State bounds for them if the custodian allows it.`,
  'term-constant-within-groups': ({ term, column, groups, cells }) =>
    `${term} does not vary within ${column}: it is carried by ${plural(groups, 'group')}, and not by ${plural(cells, 'cell')}, while cells are taken as independent. If cells of one group share a shock its standard error is too small. Cluster by ${column} or add a part shared by it.`,
  'term-carried-by-few': ({ term, column, count: carried }) =>
    column === null
      ? `${term} rests on ${plural(carried, 'cell')}. Whatever its p value, that is thin evidence; name the cells where it is reported.`
      : `${term} rests on ${plural(carried, 'group')} of ${column}. Whatever its p value, that is thin evidence; name the groups where it is reported.`,
  'residuals-not-normal': ({ statistic, p }) =>
    `Whitened residuals are not normal (Shapiro-Wilk W = ${number(statistic, { digits: 3 })}, ${pIs(p)}). Intervals on few degrees of freedom and the tests that assume normal errors are approximate. Look at the outlying cells.`,
  'dependence-not-tested': ({ cells }) =>
    `Whether cells move together was not tested: no label column groups the ${plural(cells, 'cell')}, and no order or list of neighbours was given. They are taken as independent. State what they share if they share anything.`,
};

const causes: { readonly [C in CautionFacts['errors-from-outcome']['cause']]: string } = {
  cv: 'Errors are computed from the outcome itself, as coefficients of variation.',
  log: 'Errors on the log scale are the given ones divided by the outcome itself.',
  share: 'The outcome is a share, and errors of shares are computed from the share itself.',
  count: 'The outcome is a count, and errors of counts are computed from the count itself.',
};

function estimatedErrors({ median, low, high, noisy }: CautionFacts['errors-estimated']): string {
  const range = low === high ? '' : ` (${freedomText(low)} to ${freedomText(high)})`;
  const start = `The given errors are estimates themselves, on about ${freedomText(median)} degrees of freedom each${range}.`;
  return noisy
    ? `${start} Weights from errors on fewer than 30 can cost more than they gain, and intervals cover less than they say. Compare ${quoted('per-size')} beside, or smooth the errors on size.`
    : `${start} That is enough for weights.`;
}
