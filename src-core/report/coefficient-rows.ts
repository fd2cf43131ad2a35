import type { Cell, ColumnHead } from '../protocol/document';
import type { Coefficient, Result } from '../protocol/result';
import { pText, referenceText } from '../words/coefficients';
import { heads } from '../words/headings';
import { decimalsBy, levelText, number, rangeText } from '../words/numbers';
import { num, right, valued } from './blocks';

/** Decimals of a coefficient in a table: three significant digits of its error. */
export function decimalsOf({ se, estimate }: Pick<Coefficient, 'se' | 'estimate'>): number {
  return decimalsBy(se, estimate) + (se !== null && se > 0 ? 1 : 0);
}

/** Heads of estimate, interval, then error, reference, ratio, p. */
export function coefficientHeads({ fit }: Result): ColumnHead[] {
  return [
    right(heads.estimate),
    right(heads.interval(levelText(fit.inference.level))),
    right(heads.error),
    right(heads.reference),
    right(heads.ratio),
    right(heads.p),
  ];
}

/** The cells of one coefficient, to the decimals given; the interval's value is its low end. */
export function coefficientCells(
  one: Omit<Coefficient, 'term' | 'ratio'> & { readonly ratio?: number | null },
  decimals = decimalsOf(one),
): Cell[] {
  const ratio = one.ratio === undefined && one.se !== null && one.se > 0 ? one.estimate / one.se : (one.ratio ?? null);
  return [
    num(one.estimate, { decimals }),
    valued(one.low, rangeText(one.low, one.high, decimals)),
    num(one.se, { decimals }),
    valued(one.reference?.freedom ?? null, referenceText(one.reference)),
    valued(ratio, number(ratio, { digits: 3 })),
    valued(one.p, pText(one)),
  ];
}
