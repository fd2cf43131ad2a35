import type { BesideResult, Interval, Price, Result, SquareEntry } from '../protocol/result';
import { count, decimalsBy, list, number, percent, smallPercent } from './numbers';
import { structureName, weightsOf } from './structures';

interface Priced {
  readonly rival: BesideResult;
  readonly price: Price;
  /** Error of the chosen fit. */
  readonly ownSe: number;
  /** Errors where the rival's structure holds: by our weighting, and by its own. */
  readonly reverse: { readonly ours: number; readonly theirs: number } | null;
}

/**
 * What a rival weighting costs, in two directions; each figure assumes its structure.
 *
 *     If the stated structure holds, weighting by size gives the income coefficient a standard error of 0.92 instead of 0.71. ...
 */
export function priceSentence({ rival, price, ownSe, reverse }: Priced): string {
  const { term, actualSe, claimedSe, cost } = price;
  if (actualSe === null) return '';
  const decimals = decimalsBy(ownSe) + 1;
  const error = (se: number): string => number(se, { decimals });
  const weights = weightsOf(rival.variance);
  const same = error(actualSe) === error(ownSe);
  const start = same
    ? `If the stated structure holds, ${weights} cost nothing that shows: the standard error of ${term} is ${error(ownSe)} either way.`
    : `If the stated structure holds, ${weights} give ${term} a standard error of ${error(actualSe)} instead of ${error(ownSe)}${cost === null ? '' : `, a variance ${percent(cost)} larger`}.`;
  const claim = claimedSe === null ? '' : ` Their usual formula reports ${error(claimedSe)} on these data.`;
  return `${start}${claim}${reverseSentence(rival, reverse)}`;
}

function reverseSentence(rival: BesideResult, reverse: Priced['reverse']): string {
  if (reverse === null || !(reverse.theirs > 0)) return '';
  const loss = (reverse.ours / reverse.theirs) * (reverse.ours / reverse.theirs) - 1;
  const held = `If “${structureName(rival.variance)}” held instead, our weighting`;
  return loss < 0.0005
    ? ` ${held} would lose nothing that shows.`
    : ` ${held} would have a variance ${percent(loss)} larger than its own.`;
}

/** Closes the account of prices. */
export const priceRemark = 'Each figure assumes its structure; none shows which is right.';

/** The two errors that the reverse price compares; null where the square lacks one. */
export function reverseOf(
  square: readonly SquareEntry[],
  of: { readonly rival: number; readonly term: string },
): Priced['reverse'] {
  const se = (weighting: number): number | null =>
    square.find((one) => one.truth === of.rival && one.weighting === weighting && one.term === of.term)?.se ?? null;
  const [ours, theirs] = [se(0), se(of.rival)];
  return ours === null || theirs === null ? null : { ours, theirs };
}

/**
 * Where equal weights and weights by size are equally precise, and what the data suggest.
 *
 *     Equal weights and weights by size are equally precise for income when 2.6 % of the variance of one person's answer lies between cells. ...
 */
export function breakEvenSentence(of: {
  readonly term: string;
  readonly share: number | null;
  readonly intraclass: Interval | null;
}): string {
  const { term, share, intraclass } = of;
  if (share === null) return `For ${term} equal weights and weights by size coincide: there is nothing to break even.`;
  const start = `Equal weights and weights by size are equally precise for ${term} when ${smallPercent(share)} of the variance of one person’s answer lies between cells.`;
  return `${start}${suggested(share, intraclass)} Weights from the right structure are at least as precise as either.`;
}

/** Break-even shares of the other terms. */
export function otherSharesSentence(
  others: readonly { readonly term: string; readonly intraclass: number | null }[],
): string | null {
  const known = others.flatMap(({ term, intraclass }) => (intraclass === null ? [] : [{ term, share: intraclass }]));
  if (known.length === 0) return null;
  if (known.length <= MOST_SHARES)
    return `For the other coefficients the share is ${list(known.map(({ term, share }) => `${smallPercent(share)} (${term})`))}.`;
  const shares = known.map(({ share }) => share);
  if (smallPercent(Math.min(...shares)) === smallPercent(Math.max(...shares)))
    return `For the other ${count(known.length)} coefficients it is ${smallPercent(Math.min(...shares))}.`;
  return `For the other ${count(known.length)} coefficients the share runs from ${smallPercent(Math.min(...shares))} to ${smallPercent(Math.max(...shares))}.`;
}

const MOST_SHARES = 8;

function suggested(share: number, intraclass: Interval | null): string {
  if (intraclass === null) return '';
  const { estimate, low, high } = intraclass;
  if (low === null || high === null) return ` These data suggest ${smallPercent(estimate)}, without an interval.`;
  const range = ` These data suggest ${smallPercent(estimate)} (${smallPercent(low)} to ${smallPercent(high)})`;
  if (low > share) return `${range}, more than that: of the two, equal weights are the more precise.`;
  if (high < share) return `${range}, less than that: of the two, weights by size are the more precise.`;
  return `${range}, so they do not settle which of the two is.`;
}

/** How the likelihoods of the structures compare, as one sentence; nothing without rivals that have one. */
export function candidatesSentence(
  differences: readonly { readonly name: string; readonly difference: number | null }[],
): string | null {
  const known = differences.filter((one): one is { name: string; difference: number } => one.difference !== null);
  if (known.length === 0) return null;
  const near = known.filter(({ difference }) => Math.abs(difference) < INDISTINCT);
  const worse = known.filter(({ difference }) => difference <= -INDISTINCT);
  const better = known.filter(({ difference }) => difference >= INDISTINCT);
  const told = (list: readonly { name: string; difference: number }[]): string =>
    list.map(({ name, difference }) => `“${name}” by ${number(Math.abs(difference), { digits: 2 })}`).join(', ');
  const sentences: string[] = [];
  if (worse.length > 0) sentences.push(`The stated structure has a higher log-likelihood than ${told(worse)}.`);
  if (better.length > 0)
    sentences.push(
      `The stated structure has a lower log-likelihood than ${told(better)}: say why it stands all the same.`,
    );
  if (near.length > 0)
    sentences.push(
      `From ${near.map(({ name }) => `“${name}”`).join(' and ')} these data do not distinguish it (less than ${count(INDISTINCT)} apart).`,
    );
  return sentences.join(' ');
}

/** Log-likelihoods less than this apart are told as not distinguishable: about the .05 point of half a chi-square on 1. */
export const INDISTINCT = 2;

/** Whether the two claims of a fit's weights agree with what they deliver. */
export function efficiencySentence(result: Result): string | null {
  const found = result.beside.find(({ efficiency }) => efficiency !== null);
  if (found === undefined || found.efficiency === null) return null;
  return `Over all coefficients together, equal weights have an efficiency of ${percent(found.efficiency)} under the stated structure.`;
}
