import type { Evidence, Result } from '@core/protocol/result';
import { expect } from 'vitest';

/** Equal to a share of their size; nulls to nulls. */
export function expectClose(
  one: number | null | undefined,
  other: number | null | undefined,
  share = 1e-6,
  floor = 1e-12,
): void {
  if (one === null || one === undefined || other === null || other === undefined) {
    expect(one ?? null).toBe(other ?? null);
    return;
  }
  expect(Math.abs(one - other)).toBeLessThanOrEqual(share * Math.max(Math.abs(one), Math.abs(other)) + floor);
}

/** Coefficients and errors, each multiplied by what the law says of its term. */
export function expectCoefficients(one: Result, other: Result, times: (term: string) => number = () => 1): void {
  for (const [j, { term, estimate, se, p }] of one.fit.coefficients.entries()) {
    const own = other.fit.coefficients[j];
    // An estimate near 0 is told to a share of its error.
    expectClose(estimate * times(term), own?.estimate, 1e-6, 1e-6 * (own?.se ?? 0));
    expectClose((se as number) * times(term), own?.se);
    expectClose(p, own?.p, 1e-4);
  }
}

const withoutDraws = ({ test, statistic, freedom1, freedom2, p }: Evidence) => ({
  test,
  statistic,
  freedom1,
  freedom2,
  p,
});

export function expectEvidence(one: Result, other: Result, sameStatistic = true): void {
  const [a, b] = [one.evidence.map(withoutDraws), other.evidence.map(withoutDraws)];
  expect(a.map(({ test }) => test)).toEqual(b.map(({ test }) => test));
  for (const [i, evidence] of a.entries()) {
    expect(evidence.freedom1).toBe(b[i]?.freedom1);
    expectClose(evidence.p, b[i]?.p, 1e-4, 1e-9);
    if (sameStatistic) expectClose(evidence.statistic, b[i]?.statistic, 1e-4, 1e-7);
  }
}

export function expectPrices(one: Result, other: Result, times: (term: string) => number = () => 1): void {
  for (const [i, { price }] of one.beside.entries())
    for (const [j, { term, cost, actualSe, claimedSe }] of price.entries()) {
      const own = other.beside[i]?.price[j];
      expectClose(cost, own?.cost, 1e-5, 1e-9);
      expectClose((actualSe as number) * times(term), own?.actualSe);
      expectClose((claimedSe as number) * times(term), own?.claimedSe);
    }
}
