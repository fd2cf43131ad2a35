import type { MarginNote } from '../protocol/document';
import type { Result } from '../protocol/result';
import { count, number } from './numbers';
import { cellValueName } from './units';

/** What stands in and under the figures that only the screens draw. */
export const plotWords = {
  weights: {
    yName: 'weight, the mean cell 1',
    caption:
      'What each structure makes of a cell’s weight, against its size, on log scales. A structure that is steeper trusts large cells more.',
    alt: (structures: readonly string[]): string => `Lines of weight against size under ${structures.join('; ')}.`,
  },
  fitted: {
    xName: ({ plan }: Pick<Result, 'plan'>): string => `fitted ${cellValueName(plan)}`,
    whitenedName: 'whitened residual',
    rawName: ({ plan }: Pick<Result, 'plan'>): string => `residual of ${cellValueName(plan)}`,
    caption: (raw: boolean): string =>
      raw
        ? 'Raw residuals against fitted values: small cells scatter more widely, as they should.'
        : 'Whitened residuals against fitted values: under the stated structure they scatter alike everywhere. Dotted rules: two standard deviations.',
    alt: (cells: number, raw: boolean): string =>
      `A scatter of ${count(cells)} ${raw ? 'raw' : 'whitened'} residuals against fitted values.`,
  },
  normal: {
    xName: 'where a normal one would stand',
    yName: 'whitened residual, in order',
    caption: (slope: number): string =>
      `Whitened residuals in order, against where those of a normal distribution would stand; the line has the slope of their standard deviation, ${number(slope, { digits: 3 })}.`,
    alt: (cells: number): string =>
      `${count(cells)} whitened residuals in order against normal quantiles, with a line.`,
  },
  heads: {
    cell: 'cell',
    size: 'size',
    weight: 'weight',
    fitted: 'fitted',
    whitened: 'whitened residual',
    raw: 'residual',
    normal: 'normal quantile',
  },
} as const;

/** The plots of the variance screen, one at a time; `raw` is the switch of the second. */
export const plotChoices = {
  squared: { text: 'squared residuals against size', says: 'With the variance that every structure gives.' },
  weights: { text: 'weights against size', says: 'What each structure makes of them.' },
  concentration: { text: 'concentration of the weight', says: 'How few cells carry half of it.' },
  fitted: { text: 'whitened residuals against fitted values', says: 'Alike everywhere, if the structure holds.' },
  raw: { text: 'raw residuals against fitted values', says: 'Before whitening.' },
  normal: { text: 'whitened residuals against the normal', says: 'What the tests of normality look at.' },
} as const;

export type PlotChoice = keyof typeof plotChoices;

export const plotTexts = {
  chooser: 'What is drawn',
  shown: 'Drawn:',
  notHere: 'Not defined for these cells.',
} as const;

/** Set in the margin beside the figure. */
export const plotNotes: readonly MarginNote[] = [
  {
    about: 'Whitened residual',
    text: 'a residual divided by the root of its stated variance; a free scale is left out. Under the right structure all are alike.',
  },
];
