import type { CautionCode, CautionFacts } from '../protocol/cautions';
import type { CautionSentences } from './caution-parts';
import { freedomText } from './coefficients';
import { count, list, listSome, listWithin, number, pIs, plural, pluralWord, quoted } from './numbers';
import { ruleName } from './rules';
import { parameterSign } from './structures';

type ClaimCode = Extract<
  CautionCode,
  | 'no-residual-freedom'
  | 'leave-one-out-undefined'
  | 'leverage-one'
  | 'freedom-below-four'
  | 'few-clusters'
  | 'two-ways-below-zero'
  | 'clusters-cannot-judge'
  | 'one-block'
  | 'correction-undefined'
  | 'matrix-estimated'
  | 'knapp-hartung-narrowed'
  | 'between-interval-empty'
  | 'parameters-hardly-separate'
  | 'errors-estimated'
  | 'errors-from-outcome'
  | 'halves-added'
  | 'log-of-means'
  | 'variation-above-one'
  | 'cells-suppressed'
  | 'limits-not-followed'
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
  'few-clusters': ({ by, clusters }) =>
    `Clusters by ${list(by)} are only ${count(clusters)}. With fewer than 10 clustered errors are themselves uncertain, and come out too small more often than too large. Rely on CR2 with its own freedom or on the wild bootstrap, and take more clusters where they can be had.`,
  'two-ways-below-zero': ({ terms, by, alsoBy }) =>
    `The variance of ${listSome(terms)} comes out below 0 when clustered by ${list(by)} and by ${list(alsoBy)}: the sum of both ways less their crossing need not be a variance with few clusters. Its error is undefined. Cluster by one of the two alone, the one with the larger errors.`,
  'clusters-cannot-judge': ({ terms, by }) =>
    `Nothing is left between clusters by ${list(by)} to judge ${listSome(terms)} by: each such coefficient is decided inside one cluster. It has no reference, interval or p value. Cluster by smaller groups, or leave the term out.`,
  'one-block': ({ cells }) =>
    `All ${plural(cells, 'cell')} go together in the stated covariance: robust errors, which need two blocks or more that do not, cannot stand beside the model’s own. These rest on that covariance alone; say where it comes from.`,
  'correction-undefined': ({ parameters }) =>
    `The correction of Kenward and Roger is undefined: the cells do not tell ${list(parameters.map(parameterSign))} apart at the fit, so that their uncertainty is unknown. Errors and p values are left out. Fix one of them, or choose model-based errors.`,
  'matrix-estimated': ({ freedom, cells, inverted, noisy }) =>
    `The given matrix is an estimate itself, on ${freedomText(freedom)} degrees of freedom for ${plural(cells, 'cell')}. ${
      inverted
        ? noisy
          ? 'Its inverse is noisier than it is: with fewer than ten times as many as cells, weights from it can cost more than they gain. Compare weights by its diagonal (target “diagonal”).'
          : 'That is enough for weights from its inverse.'
        : 'With no more than there are cells it is not inverted: weights come from its diagonal, and the matrix serves the errors alone.'
    }`,
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
    cause === 'minimum-chi-square'
      ? `${causes[cause]} Chance that moves a cell moves its weight with it, and in small cells that biases the fit. Compare maximum likelihood (method “full”), whose variances come from fitted values.`
      : `${causes[cause]} Low cells then look more precise than they are, and pull the fit down. Compare variances from fitted values, or equal weights, beside.`,
  'halves-added': ({ to, cells, labels }) =>
    to === 'all-cells'
      ? `One half was added to both counts of ${cells === 1 ? 'the cell' : `all ${plural(cells, 'cell')}`}, those of none and all among them: every share is drawn towards one half, small cells most. Compare maximum likelihood (method “full”), which takes counts as they are.`
      : `One half was added to both counts of ${pluralWord(cells, 'cell').toLowerCase()} that ${cells === 1 ? 'holds' : 'hold'} none or all, since their logits would not exist: ${listWithin(labels)}. What the fit says of them rests on that half. Compare maximum likelihood (method “full”), which takes counts as they are.`,
  'log-of-means': () =>
    'The outcome is the log of a mean, which is not the mean of logs: coefficients describe the former. Where spread differs between cells the two can part; say which one the question needs.',
  'variation-above-one': ({ column, cells, largest }) =>
    `${pluralWord(cells, 'cell')} ${cells === 1 ? 'has a coefficient' : 'have coefficients'} of variation above 1 in ${column}, up to ${number(largest, { digits: 3 })}. It is taken as error over outcome (0.05, not 5): if the column holds percentages, divide it by 100; else those outcomes say next to nothing.`,
  'cells-suppressed': ({ cells, labels, bounded }) =>
    `${pluralWord(cells, 'cell')} ${cells === 1 ? 'is' : 'are'} left out because ${cells === 1 ? 'its value is' : 'their values are'} suppressed: ${listWithin(labels)}. Suppressed cells are mostly small ones, so that the cells left are not a fair draw of all. ${boundedSentence(cells, bounded ?? 0)}`,
  'limits-not-followed': ({ columns, failed }) =>
    failed
      ? `Limits are stated, and the cells with limited values cannot carry the model: no bounds are given. Look at what these cells have in common.`
      : `Limits of ${list(columns.map(quoted))} are not followed where the column enters through sizes, errors, exposures, a variance part or a derived column: its values are taken there as they stand. Bounds say nothing of that uncertainty.`,
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

function boundedSentence(cells: number, bounded: number): string {
  if (bounded === 0) return 'State limits for them if the custodian allows it, with what else the fit needs of them.';
  const some = bounded === cells ? (cells === 1 ? 'it' : 'all of them') : `${count(bounded)} of them`;
  return `The bounds take in ${some}: read each coefficient with its range.`;
}

const causes: { readonly [C in CautionFacts['errors-from-outcome']['cause']]: string } = {
  cv: 'Errors are computed from the outcome itself, as coefficients of variation.',
  log: 'Errors on the log scale are the given ones divided by the outcome itself.',
  logit: 'Errors on the logit scale are the given ones divided by p (1 − p) of the outcome itself.',
  'minimum-chi-square': 'Weights are computed from the observed outcome itself (minimum chi-square).',
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
