import type { BootstrapBoundary, CommonCorrelation, Need, Result, WhatItTakes } from '../protocol/result';
import { count, decimalsBy, levelText, list, number, percent, pIs, plural, p as pText } from './numbers';
import { parameterSign } from './structures';
import { inOutcomeUnit } from './units';

/** "4.2 times", "no number": persons per cell as a multiple of the present ones. */
export function personsText(persons: number | null): string {
  return persons === null ? 'no number' : `${number(persons, { digits: persons >= 100 ? 3 : 2 })} times`;
}

/** "240", "no number". */
export function cellsText(cells: number | null): string {
  return cells === null ? 'no number' : count(cells);
}

/**
 * What one coefficient would take for a narrower interval, and for its smallest difference that matters.
 *
 *     An interval half as wide for income takes 236 cells like these 60, or 3.9 times the persons in each: sampling is 98 % of its variance. ...
 */
export function takesSentences(takes: WhatItTakes, result: Result): string {
  const { term, halfWidth, matters, samplingShare, floor } = takes;
  if (halfWidth === null) return `What ${term} would take cannot be said: it has no standard error.`;
  const own = result.fit.coefficients.find((one) => one.term === term);
  const decimals = decimalsBy(own?.se ?? null, own?.estimate ?? null) + 1;
  const half = `An interval half as wide for ${term} takes ${waysText(halfWidth, result)}`;
  const share = samplingShare === null ? '.' : `: sampling is ${percent(samplingShare)} of its error variance.`;
  const stays =
    floor !== null && floor > 0
      ? ` However many persons a cell has, its standard error stays above ${number(floor, { decimals })}.`
      : '';
  return `${half}${share}${stays}${mattersSentence(matters, result)}`;
}

function mattersSentence(matters: WhatItTakes['matters'], result: Result): string {
  if (matters === null) return '';
  const difference = inOutcomeUnit(number(matters.difference, { digits: 3 }), result.plan);
  return ` To find a difference of ${difference} with 80 % chance takes ${waysText(matters, result)}.`;
}

function waysText({ cells, persons }: Need, { data }: Result): string {
  const byCells =
    cells === null
      ? 'more cells than can be had'
      : cells <= data.used
        ? `no more than ${plural(cells, 'cell')} like these ${count(data.used)}`
        : `${count(cells)} cells like these ${count(data.used)}`;
  if (persons === null) return `${byCells}; more persons in each cannot do it`;
  return `${byCells}, or ${personsText(persons)} the persons in each`;
}

export const takesNote =
  'Cells like these: the same spread of covariates, sizes and variances, freedom grown with them. Persons: sampling variances fall, the other parts stay, weights held.';

/**
 * What a common correlation of the cells' sampling errors would make of one coefficient's error.
 *
 *     Were sampling errors of all cells to go together with a correlation of up to 0.5, the standard error of income would run from 0.21 to 0.16.
 */
export function togetherSentence(rows: readonly CommonCorrelation[], term: string): string | null {
  const own = rows.filter((one) => one.term === term);
  const [first, last] = [own[0], own.at(-1)];
  if (first === undefined || last === undefined || first === last) return null;
  const decimals = decimalsBy(first.se) + 1;
  const [from, to] = [first, last].map(({ se }) => number(se, { decimals }));
  const how = from === to ? 'stay at' : last.se > first.se ? 'grow from' : 'fall from';
  return `Were the sampling errors of all cells to go together with a correlation of up to ${number(last.rho, { digits: 2 })}, the standard error of ${term} would ${how} ${from === to ? from : `${from} to ${to}`}, weights and variances held.`;
}

export const togetherNote =
  'Cells that share interviewers, sampling units or a frame have sampling errors that go together. What all cells share blurs their common level and cancels from contrasts between them: an error can grow or fall, as the table shows.';

/**
 * What draws say of a likelihood ratio of vanishing parameters.
 *
 *     Against 999 draws from the fit without τ² (seed 1), 5 had a likelihood ratio as large as 7.19: p = 0.006.
 */
export function drawsSentence({
  zero,
  replications,
  count: found,
  p,
  statistic,
  seed,
  floor,
}: BootstrapBoundary): string {
  const signs = list(zero.map(parameterSign));
  if (!(statistic > 0))
    return `${signs} is at its boundary in the fit itself: every draw without it has a likelihood ratio as large as 0 (p = 1).`;
  const least = found === 0 ? `, the smallest p value that so many draws can give (${pText(floor)})` : '';
  return `Against ${count(replications)} draws from the fit without ${signs} (seed ${seed}), ${found === 0 ? 'none' : count(found)} had a likelihood ratio as large as ${number(statistic, { digits: 3 })}: ${pIs(p)}${least}. Draws hold at few cells, and where no mixture of chi-squares is known.`;
}

/** Level of the intervals that are to become half as wide. */
export function takesCaption({ fit }: Result): string {
  return `What each coefficient would take, ${levelText(fit.inference.level)} intervals`;
}
