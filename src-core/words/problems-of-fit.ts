import { list, listSome, number, plural, quoted } from './numbers';
import { meant, pairs, type Sentences } from './phrases';

type FitCode =
  | 'fewer-cells-than-terms'
  | 'dependent-columns'
  | 'one-level'
  | 'cluster-cuts-block'
  | 'too-few-clusters'
  | 'cluster-decides'
  | 'block-too-large'
  | 'unknown-coefficient'
  | 'leverage-one'
  | 'not-available'
  | 'no-convergence'
  | 'fitted-outside'
  | 'separated'
  | 'not-settled'
  | 'nothing-left-over';

/** What cannot be estimated, and why. */
export const fitSentences: Sentences<FitCode> = {
  'fewer-cells-than-terms': ({ cells, coefficients }) =>
    `${plural(cells, 'cell')} cannot carry ${plural(coefficients, 'coefficient')}. Leave terms out, or bring cells in.`,
  'dependent-columns': ({ coefficients, underWeights }) => {
    const named = list(coefficients.map(quoted));
    if (underWeights)
      return `Weighted by the structure’s variances ${named} cannot be told apart: the cells that tell ${coefficients.length === 1 ? 'anything about it' : 'them apart'} weigh nothing beside the others. Choose a structure whose variances differ less, or leave a term out.`;
    return coefficients.length === 1
      ? `The column of ${quoted(coefficients[0] as string)} is zero in every used cell. Leave it out.`
      : `${named} say the same thing: each can be computed from the others. Leave one of them out.`;
  },
  'one-level': ({ column, level }) =>
    `${quoted(column)} has the one level ${quoted(level)} among the used cells, and so explains nothing. Leave the term out.`,
  'cluster-cuts-block': ({ by, part, partBy, group }) =>
    partBy.length === 0
      ? `Clusters by ${list(by.map(quoted))} cut cells apart that the part ${quoted(part)} correlates: ${Object.keys(group).length === 0 ? 'it ties all cells together' : `${list(Object.values(group).map(quoted))} goes together with cells of other clusters`}. Choose clusters that hold them together, or another inference.`
      : `Clusters by ${list(by.map(quoted))} cut cells apart that the part ${quoted(part)} correlates by ${list(partBy.map(quoted))}: those of ${pairs(group)} lie in several clusters. Choose clusters that hold them together.`,
  'too-few-clusters': ({ by, clusters }) =>
    `Clusters by ${list(by.map(quoted))} are ${clusters === 0 ? 'none' : 'one and the same for all cells'}: errors between clusters need at least two. Choose columns that tell cells apart, or another inference.`,
  'cluster-decides': ({ by, group, correction }) =>
    `The cluster ${pairs(group)} alone decides a coefficient, or a combination of them: the fit goes through it whatever its values, and ${correction} divides by 0 there. Choose CR0, CR1 or CR2, leave the term out that rests on it, or cluster by something else than ${list(by.map(quoted))}.`,
  'block-too-large': ({ cells, most }) =>
    `${plural(cells, 'cell')} are tied to each other by the variance structure in a way that needs their whole covariance at once, and no more than ${most} can be taken together. Tie cells inside smaller groups, or leave out the part that joins the groups.`,
  'unknown-coefficient': ({ found, nearest }) =>
    `There is no coefficient ${quoted(found)}.${meant(nearest, 'Check the terms.')}`,
  'leverage-one': ({ labels, correction }) =>
    `${listSome(labels.map(quoted))} ${labels.length === 1 ? 'has' : 'have'} leverage 1: the fit goes through ${labels.length === 1 ? 'it' : 'them'} whatever the value, and ${correction} divides by 0 there. Choose HC0 or HC1, or leave a term out.`,
  'not-available': ({ what }) =>
    `${quoted(what)} is valid, but this version does not fit it yet. Choose something else.`,

  'no-convergence': ({ parameter, value, iterations }) =>
    // Beyond the last digit that is shown the correlation is 1.
    parameter.startsWith('rho') && value > 0.9999
      ? `The likelihood rises all the way as ${quoted(parameter)} runs to 1, so that it has no maximum: cells that go together share all that the part holds. A part "shared" says just that: take it in the place of the correlation, or set that parameter in "fixed".`
      : `The search for ${quoted(parameter)} found no maximum in ${plural(iterations, 'step')}; it stood at ${number(value)}. Set that parameter in "fixed", or choose a simpler structure.`,
  'fitted-outside': ({ part, labels, high }) =>
    `The ${part} part needs fitted ${high === null ? 'rates above 0' : 'shares between 0 and 1'}, and at the fixed point ${labels.length === 1 ? 'the one' : 'those'} of ${listSome(labels.map(quoted))} ${labels.length === 1 ? 'is' : 'are'} not. Choose the scale ${high === null ? '"log"' : '"logit"'} with the method "full", or other terms.`,
  separated: ({ labels, coefficients }) =>
    `${listSome(labels.map(quoted))} ${labels.length === 1 ? 'holds' : 'hold'} nothing or everything, and ${list(coefficients.map(quoted))} ${coefficients.length === 1 ? 'tells' : 'tell'} ${labels.length === 1 ? 'it' : 'them'} apart from the other cells: the likelihood rises without end and has no maximum. Leave a term out, join levels, or fit logits with halves added (method "least-squares").`,
  'not-settled': ({ part, rounds }) =>
    `Fitted means and the variances that the ${part} part takes from them did not come to rest in ${plural(rounds, 'round')}. Choose fewer terms, or a simpler structure.`,
  'nothing-left-over': ({ cells, coefficients }) =>
    `${plural(coefficients, 'coefficient')} reproduce all ${plural(cells, 'cell')} exactly, so that no residual is left to estimate a variance from. Leave terms out, or choose errors that are known.`,
};
