import { list, listSome, number, plural, quoted } from './numbers';
import { meant, pairs, type Sentences } from './phrases';

type FitCode =
  | 'fewer-cells-than-terms'
  | 'dependent-columns'
  | 'one-level'
  | 'cluster-cuts-block'
  | 'unknown-coefficient'
  | 'leverage-one'
  | 'not-available'
  | 'no-convergence'
  | 'nothing-left-over';

/** What cannot be estimated, and why. */
export const fitSentences: Sentences<FitCode> = {
  'fewer-cells-than-terms': ({ cells, coefficients }) =>
    `${plural(cells, 'cell')} cannot carry ${plural(coefficients, 'coefficient')}. Leave terms out, or bring cells in.`,
  'dependent-columns': ({ coefficients }) =>
    coefficients.length === 1
      ? `The column of ${quoted(coefficients[0] as string)} is zero in every used cell. Leave it out.`
      : `${list(coefficients.map(quoted))} say the same thing: each can be computed from the others. Leave one of them out.`,
  'one-level': ({ column, level }) =>
    `${quoted(column)} has the one level ${quoted(level)} among the used cells, and so explains nothing. Leave the term out.`,
  'cluster-cuts-block': ({ by, part, partBy, group }) =>
    `Clusters by ${list(by.map(quoted))} cut cells apart that the part ${quoted(part)} correlates by ${list(partBy.map(quoted))}: those of ${pairs(group)} lie in several clusters. Choose clusters that hold them together.`,
  'unknown-coefficient': ({ found, nearest }) =>
    `There is no coefficient ${quoted(found)}.${meant(nearest, 'Check the terms.')}`,
  'leverage-one': ({ labels, correction }) =>
    `${listSome(labels.map(quoted))} ${labels.length === 1 ? 'has' : 'have'} leverage 1: the fit goes through ${labels.length === 1 ? 'it' : 'them'} whatever the value, and ${correction} divides by 0 there. Choose HC0 or HC1, or leave a term out.`,
  'not-available': ({ what }) =>
    `${quoted(what)} is valid, but this version does not fit it yet. Choose something else.`,

  'no-convergence': ({ parameter, value, iterations }) =>
    `The search for ${quoted(parameter)} found no maximum in ${plural(iterations, 'step')}; it stood at ${number(value)}. Set that parameter in "fixed", or choose a simpler structure.`,
  'nothing-left-over': ({ cells, coefficients }) =>
    `${plural(coefficients, 'coefficient')} reproduce all ${plural(cells, 'cell')} exactly, so that no residual is left to estimate a variance from. Leave terms out, or choose errors that are known.`,
};
