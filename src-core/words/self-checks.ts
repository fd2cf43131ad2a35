import type { SelfCheckCode } from '../protocol/cautions';
import type { SelfCheck } from '../protocol/result';
import { number } from './numbers';

interface CheckWords {
  /** What was done, and what had to hold. */
  readonly says: string;
  /** What the figure is. */
  readonly figure: 'departure' | 'shift' | 'least' | 'digits';
}

const checks: { readonly [C in SelfCheckCode]: CheckWords } = {
  'rows-reversed': { says: 'The rows were taken in reverse order: nothing may change.', figure: 'departure' },
  'sizes-scaled': {
    says: 'All sizes were multiplied by ten: the free scale takes it up, and no coefficient or error may change.',
    figure: 'departure',
  },
  'errors-scaled': {
    says: 'All given errors were multiplied by ten: coefficients may not change, and their errors only by that factor under a fixed scale.',
    figure: 'departure',
  },
  'outcome-unit-changed': {
    says: 'The outcome was put in tenths of its unit: every coefficient and error must become ten times as large.',
    figure: 'departure',
  },
  'column-unit-changed': {
    says: 'The first column was put in thousandths of its unit: only its own coefficient and error may change, by that factor.',
    figure: 'departure',
  },
  'cell-split': {
    says: 'The first cell was split into two of half the information each: nothing may change.',
    figure: 'departure',
  },
  'residuals-orthogonal': {
    says: 'The whitened residuals must stand at a right angle to every whitened column.',
    figure: 'departure',
  },
  'leverages-sum': { says: 'The leverages must add up to the number of coefficients.', figure: 'departure' },
  'pulls-sum': { says: 'Pulls times observations must add up to the coefficients.', figure: 'departure' },
  'other-route': {
    says: 'The coefficients were computed again by another route, normal equations in doubled precision.',
    figure: 'departure',
  },
  'price-not-negative': {
    says: 'No rival weighting may be more precise than the structure’s own where that structure holds.',
    figure: 'least',
  },
  'leave-one-out-extreme': {
    says: 'The cell whose loss moves a coefficient most was left out and the fit done again: it must agree with the formula.',
    figure: 'shift',
  },
  'heaviest-deleted': {
    says: 'The heaviest cell was left out and the fit done again: it must agree with the formula.',
    figure: 'departure',
  },
  digits: {
    says: 'The fit was solved twice, the second time with refinement in doubled precision; digits that agree:',
    figure: 'digits',
  },
};

function wordsOf(check: string): CheckWords | null {
  return (checks as { readonly [check: string]: CheckWords | undefined })[check] ?? null;
}

/** What a check did and what had to hold; its code where it is not known here. */
export function checkSentence(check: string): string {
  return wordsOf(check)?.says ?? check;
}

/** The figure of a check, with what it is. */
export function checkFigure({ check, figure }: SelfCheck): string {
  if (figure === null) return 'could not be done';
  switch (wordsOf(check)?.figure) {
    case 'shift':
      return `largest shift ${number(figure, { digits: 2 })} errors`;
    case 'least':
      return `least cost ${number(figure, { digits: 2 })}`;
    case 'digits':
      return `${number(figure, { decimals: 1 })} digits`;
    default:
      return figure === 0 ? 'no departure' : `departure ${number(figure, { digits: 2 })}`;
  }
}

export function passedText(passed: boolean): string {
  return passed ? 'yes' : 'no';
}
