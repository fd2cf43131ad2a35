import {
  chiSquareLower,
  chiSquareQuantile,
  chiSquareUpper,
  chiSquareUpperQuantile,
  fLower,
  fQuantile,
  fUpper,
  fUpperQuantile,
  normalLower,
  normalQuantile,
  normalUpper,
  normalUpperQuantile,
  tLower,
  tQuantile,
  tUpper,
  tUpperQuantile,
} from '@core/numbers/distributions';
import { describe, expect, it } from 'vitest';
import { loadCase } from '../support/case';

interface Arguments {
  readonly function: 'cdf' | 'quantile';
  readonly distribution: 'normal' | 't' | 'chi-square' | 'F';
  readonly tail: 'upper' | 'lower';
  readonly x: number;
  readonly df1: number | null;
  readonly df2: number | null;
}

/** One function for each kind of row of the case. */
const ROUTES: Record<string, (x: number, freedom1: number, freedom2: number) => number> = {
  'cdf normal upper': normalUpper,
  'cdf normal lower': normalLower,
  'cdf t upper': tUpper,
  'cdf t lower': tLower,
  'cdf chi-square upper': chiSquareUpper,
  'cdf chi-square lower': chiSquareLower,
  'cdf F upper': fUpper,
  'cdf F lower': fLower,
  'quantile normal upper': normalUpperQuantile,
  'quantile normal lower': normalQuantile,
  'quantile t upper': tUpperQuantile,
  'quantile t lower': tQuantile,
  'quantile chi-square upper': chiSquareUpperQuantile,
  'quantile chi-square lower': chiSquareQuantile,
  'quantile F upper': fUpperQuantile,
  'quantile F lower': fQuantile,
};

// Source of every value: test/reference/cases/distribution-tails, mpmath with 60 digits, printed to the digits that each row states.
describe('tails and quantiles', () => {
  const rows = loadCase('distribution-tails').expected as unknown as {
    quantity: string;
    value: number;
    digits: number;
    arguments: Arguments;
  }[];

  it('are checked at all 62 points of the reference', () => {
    expect(rows.length).toBe(62);
  });

  for (const row of rows)
    it(`agree with the reference at ${row.quantity}`, () => {
      const { function: kind, distribution, tail, x, df1, df2 } = row.arguments;
      const route = ROUTES[`${kind} ${distribution} ${tail}`];
      const found = route?.(x, df1 ?? 0, df2 ?? 0) ?? Number.NaN;
      const printed = 5 * Number(`1e-${row.digits}`);
      expect(Math.abs(found / row.value - 1)).toBeLessThan(Math.max(1e-14, printed));
    });
});
