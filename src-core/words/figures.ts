import { isLinked } from '../protocol/linked';
import type { Result } from '../protocol/result';
import { count, number, percent, plural } from './numbers';
import { structureName } from './structures';
import { inOutcomeUnit, outcomeUnit, responseName, varianceUnit } from './units';

export const howToRead = 'How to read the figure';

/** What stands in, under and beside the figures. */
export const figureWords = {
  residuals: {
    yName: ({ plan }: Pick<Result, 'plan'>): string => `squared residual${unitAfter(varianceUnit(plan))}`,
    size: ({ plan }: Pick<Result, 'plan'>): string =>
      plan.roles.designEffect === null ? `size (${plan.roles.size ?? 'respondents'})` : 'effective size',
    variance: 'error variance as stated',
    mean: 'mean of a sixth',
    caption: (by: 'size' | 'variance', low: number): string =>
      `Squared residuals against ${by === 'size' ? 'size' : 'the stated error variance'}, log scales${low > 0 ? `; ${plural(low, 'residual')} below the axis ${low === 1 ? 'stands' : 'stand'} at its foot` : ''}`,
    read: (means: boolean): string =>
      `Points: cells. Lines: the error variance that each structure gives, the stated one heavy; small open marks where it does not follow the axis.${means ? ' Squares: means of squared residuals over a sixth of the cells each, divided by one less the leverage. Where the stated structure holds, the squares scatter about its line' : ' Where the stated structure holds, squared residuals have its line as their mean'}; single points lie mostly below it.`,
    alt: (cells: number, structures: readonly string[]): string =>
      `A scatter of ${count(cells)} squared residuals with ${structures.length === 1 ? 'the line' : 'lines'} of error variance under ${structures.join('; ')}.`,
  },
  beside: {
    caption: (terms: number): string =>
      `${terms === 1 ? 'The coefficient' : 'Coefficients'} under the stated structure and those beside it`,
    read: 'Strip: interval; upright stroke: estimate; heavy: the stated structure. Upright rules: zero, solid; the smallest difference that matters, dashed.',
    alt: (terms: readonly string[], rows: number): string =>
      `Strips of intervals of ${terms.join(', ')} under ${plural(rows, 'structure')}, one below the other.`,
    robust: (correction: string): string => `stated, robust ${correction}`,
    chosen: (result: Result): string => `${structureName(result.plan.variance)} (stated)`,
  },
  beam: {
    xName: (term: string): string => `pull on ${term}`,
    yName: ({ plan }: Pick<Result, 'plan'>, from: 'mean' | 'zero'): string => {
      const name = `${responseName(plan)}${isLinked(plan) ? ', working values' : ''}`;
      return from === 'mean' ? `${name} less ${isLinked(plan) ? 'their' : 'its'} weighted mean` : name;
    },
    caption: (term: string): string => `The beam of ${term}`,
    read: (of: { readonly half: number; readonly value: string; readonly from: 'mean' | 'zero' }): string =>
      `Each cell hangs at its pull, as far off the beam as its value is from ${of.from === 'mean' ? 'the weighted mean' : 'zero'}. Pull times distance, summed over cells, is the coefficient, ${of.value}. Filled: the ${of.half === 1 ? 'cell that carries' : `${count(of.half)} cells that carry`} half of the total pull.`,
    alt: (term: string, cells: number, named: readonly string[]): string =>
      `A beam with ${count(cells)} cells at their pull on ${term}. Farthest out: ${named.join(', ')}.`,
  },
  scan: {
    xName: 'size exponent d (0: equal weights, 1: weights by size)',
    caption: (terms: number): string => `${terms === 1 ? 'The coefficient' : 'Coefficients'} as the size exponent runs`,
    read: (level: string): string =>
      `Error variance falls as size to the power d. The ink fades as the likelihood falls; thin lines are the ends of the ${level} interval. Bracketed below: the exponents that the data support, with a stroke at the best.`,
    alt: (terms: readonly string[], low: string, high: string): string =>
      `Lines of ${terms.join(', ')} over the size exponent from 0 to 1.5; supported from ${low} to ${high}.`,
    supported: 'supported',
  },
  concentration: {
    xName: 'cells, heaviest first',
    yName: 'share of the weight',
    equal: 'all equal',
    caption: 'How the weight is spread over cells',
    read: (half: number, cells: number): string =>
      `Cells are added from the heaviest. Dotted: where half of the weight is reached, after ${count(half)} of ${plural(cells, 'cell')} under the stated structure.`,
    alt: (half: number, cells: number, heaviest: number): string =>
      `A rising curve of cumulated weight over ${plural(cells, 'cell')}: half is reached after ${count(half)}; the heaviest has ${percent(heaviest)}.`,
  },
} as const;

function unitAfter(unit: string | null): string {
  return unit === null ? '' : `, ${unit}`;
}

/** The name over a panel of one coefficient: "income, kg per plot". */
export function panelName(term: string, result: Pick<Result, 'plan'>): string {
  const unit = outcomeUnit(result.plan);
  return unit === null ? term : `${term}, ${unit}`;
}

/** An estimate with its interval beside a strip. */
export function stripText(of: { estimate: number; low: number | null; high: number | null }, decimals: number): string {
  const shown = number(of.estimate, { decimals });
  return of.low === null || of.high === null
    ? `${shown} (no interval)`
    : `${shown} (${number(of.low, { decimals })} to ${number(of.high, { decimals })})`;
}

/** A coefficient's value in a caption. */
export function captionValue(value: number, decimals: number, result: Pick<Result, 'plan'>): string {
  return inOutcomeUnit(number(value, { decimals }), result.plan);
}

/** Heads of the tables of numbers that figures carry. */
export const figureHeads = {
  cell: 'cell',
  size: 'size',
  stated: 'stated variance',
  squared: 'squared residual',
  structure: 'structure',
  estimate: 'estimate',
  low: 'low',
  high: 'high',
  pull: 'pull',
  distance: 'distance',
  exponent: 'exponent',
  relative: 'relative likelihood',
  rank: 'cells',
  share: 'cumulated share',
} as const;
