import { exponentFit, sizeLogsOf } from '@core/evidence/exponent-fit';
import { exponentScanOf } from '@core/evidence/exponent-scan';
import { expect, it, test } from 'vitest';
import { valueOf as quantityIn } from '../reference/quantities-sensitivity';
import { outside } from '../support/case';
import { apart, fittedCase, fittedTable } from './sensitivity-case';

// library-size-power: nlme and 50 digits; given exponents, profile values and the ends of the profile intervals.
test.each([
  ['size-power-full', 2 + 7 + 35],
  ['size-power-restricted', 2 + 7],
])('coefficients, profile likelihood and supported exponents of %s are the reference', (fit, values) => {
  const { of, plan, cells, fitted } = fittedCase('library-size-power', fit);
  const { scan, support } = exponentScanOf({ fitted, cells, plan });
  const pieces = { exponentScan: scan, exponentSupport: support };
  const asked = of.expected.filter((one) => one.fit === fit && /^(profile_|sweep_|delta_profile)/.test(one.quantity));
  expect(asked.length).toBe(values);
  for (const { quantity, value } of asked) {
    const found = quantityIn(quantity, pieces, { plan, terms: fitted.design.names }) as number;
    expect(apart(found, value as number), quantity).toBeLessThan(/profile95/.test(quantity) ? 1e-8 : 1e-10);
  }
  expect(apart(support?.best as number, outside(of, fit, 'delta'))).toBeLessThan(1e-8);
  expect(support?.edge).toBeNull();
  expect(scan.map(({ delta }) => delta)).toEqual(Array.from({ length: 31 }, (_, i) => i / 20));
});

it('is the same profile from any structure on the same terms, by the likelihood of its method', () => {
  const restricted = fittedCase('library-between-per-size', 'between-per-size-restricted');
  const power = fittedCase('library-size-power', 'size-power-restricted');
  const found = [restricted, power].map((one) => exponentScanOf(one).support);
  expect(apart(found[0]?.low as number, found[1]?.low as number)).toBeLessThan(1e-9);
  expect(apart(found[0]?.best as number, found[1]?.best as number)).toBeLessThan(1e-9);
  // Least squares goes by the full likelihood.
  const { support } = exponentScanOf(fittedCase('library-influence', 'per-size'));
  const full = fittedCase('library-size-power', 'size-power-full');
  expect(apart(support?.high as number, outside(full.of, 'size-power-full', 'delta_profile95_high'))).toBeLessThan(
    1e-8,
  );
});

it('has ranges that hold every coefficient over the support, and reach no further', () => {
  const known = fittedCase('library-size-power', 'size-power-restricted');
  const { support } = exponentScanOf(known);
  const { low, high, ranges } = support ?? { low: 0, high: 0, ranges: [] };
  const rows = Array.from({ length: 201 }, (_, i) => low + ((high - low) * i) / 200).map(
    (delta) =>
      exponentFit({
        fitted: known.fitted,
        sizes: sizeLogsOf(known.cells.effectiveSize as Float64Array),
        delta,
      })?.fitted().coefficients,
  );
  for (const [j, range] of ranges.entries()) {
    const values = rows.map((row) => row?.[j] as number);
    const width = Math.max(...values) - Math.min(...values);
    expect(Math.max(...values)).toBeLessThanOrEqual(range.high + 1e-6 * width);
    expect(Math.min(...values)).toBeGreaterThanOrEqual(range.low - 1e-6 * width);
    expect(range.high - Math.max(...values)).toBeLessThan(1e-3 * width);
    expect(Math.min(...values) - range.low).toBeLessThan(1e-3 * width);
  }
  expect(ranges.find(({ term }) => term === 'income')?.excludesZero).toBe(true);
});

it('has slopes that are the derivatives of its likelihoods', () => {
  const { fitted, cells } = fittedCase('library-influence', 'per-size');
  const sizes = sizeLogsOf(cells.effectiveSize as Float64Array);
  const at = (delta: number) => exponentFit({ fitted, sizes, delta });
  for (const delta of [0, 0.4, 1, 1.4]) {
    const [above, below, own] = [at(delta + 1e-4), at(delta - 1e-4), at(delta)];
    const numeric = ((above?.logLikelihood ?? 0) - (below?.logLikelihood ?? 0)) / 2e-4;
    const restricted = ((above?.restrictedLogLikelihood ?? 0) - (below?.restrictedLogLikelihood ?? 0)) / 2e-4;
    expect(own?.slope).toBeCloseTo(numeric, 5);
    expect(own?.restrictedSlope).toBeCloseTo(restricted, 5);
  }
});

it('says nothing without sizes, with equal sizes, and where no residual is left', () => {
  const { plan } = fittedCase('library-influence', 'per-size');
  const simple = { ...plan, terms: [{ column: 'income' }] };
  const nothing = { scan: [], support: null, ends: [] };
  const equal = fittedTable('district,mean_visits,n,income\na,1,7,1\nb,2,7,2\nc,4,7,4\nd,5,7,6', simple);
  expect(exponentScanOf(equal)).toEqual(nothing);
  const bare = fittedCase('physics-influence', 'scale-free');
  expect(exponentScanOf(bare)).toEqual(nothing);
  const saturated = fittedTable('district,mean_visits,n,income\na,1,7,1\nb,2,9,2', simple);
  expect(exponentScanOf(saturated)).toEqual(nothing);
});

it('tells where the support is cut at 0 or 1.5', () => {
  const { plan } = fittedCase('library-influence', 'per-size');
  const simple = { ...plan, terms: [{ column: 'income' }] };
  const few = fittedTable('district,mean_visits,n,income\na,1,7,1\nb,2.2,9,2\nc,4,70,4\nd,5,30,6\ne,5.5,12,7', simple);
  const { support } = exponentScanOf(few);
  expect(support).toMatchObject({ edge: 'both', low: 0, high: 1.5 });
});
