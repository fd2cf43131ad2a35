import { spanOf } from '@core/algebra/orthonormal';
import { normalLower, normalUpper } from '@core/numbers/distributions';
import { log } from '@core/numbers/elementary';
import { plainDot } from '@core/numbers/sums';
import { expect, test } from 'vitest';
import { type FittedCase, fittedCase } from './fitted-case';
import { type Redrawn, rejectionShare } from './redrawn';

// Simulations: 600 outcomes drawn from the fitted structure. At level .05 the share has a standard error of .009.
const draws = 600;

const perSize = fittedCase('library-structure-tests', 'per-size');
const constant = fittedCase('library-structure-tests', 'constant');
const given = fittedCase('bcg-latitude', 'common');
const between = fittedCase('library-between-per-size', 'between-per-size-restricted');

/**
 * Those exact under normal errors, or nearly so, within three standard errors and a half; the others lower, as they are known to be in
 * small samples. The size scores are tried where leverages do not go with size; the last test shows what happens where they do.
 */
const sizes: [Redrawn, FittedCase, number, number][] = [
  ['breusch-pagan', perSize, 0.01, 0.08],
  ['koenker', perSize, 0.01, 0.08],
  ['size-score', constant, 0.02, 0.08],
  ['size-score-studentised', constant, 0.02, 0.08],
  ['size-slope', perSize, 0.01, 0.09],
  ['white', perSize, 0.005, 0.08],
  ['goldfeld-quandt', perSize, 0.02, 0.08],
  ['brown-forsythe', perSize, 0.01, 0.08],
  ['dumouchel-duncan', perSize, 0.02, 0.08],
  ['dependence', perSize, 0.02, 0.08],
  ['shapiro-wilk', perSize, 0.02, 0.08],
  ['heterogeneity', given, 0.02, 0.08],
];

test.each(sizes)('%s rejects a true structure in about 5 of 100 draws', (which, of, low, high) => {
  const share = rejectionShare({
    of,
    test: which,
    draws,
    errors: (normal) => of.fitted.variances.map((v) => Math.sqrt(v) * normal()),
  });
  expect(share).toBeGreaterThan(low);
  expect(share).toBeLessThan(high);
});

// Structures whose parameters are searched for again in every draw; 250 draws: a standard error of .014 at .05.
const searched: [Redrawn, FittedCase, string][] = (
  [
    ['schools-per-class', 'per-class-per-size-restricted'],
    ['library-log-linear', 'log-linear-restricted'],
    ['library-size-power', 'size-power-restricted'],
  ] as const
).flatMap(([id, fit]) => {
  const of = fittedCase(id, fit);
  const tests: readonly Redrawn[] = ['breusch-pagan', 'goldfeld-quandt', 'brown-forsythe', 'dumouchel-duncan'];
  return tests.map((which): [Redrawn, FittedCase, string] => [which, of, fit]);
});

test.each(searched)(
  '%s holds its level under a searched structure, or stays below it',
  { timeout: 60_000 },
  (which, of) => {
    const share = rejectionShare({
      of,
      test: which,
      draws: 250,
      errors: (normal) => of.fitted.variances.map((v) => Math.sqrt(v) * normal()),
    });
    expect(share).toBeLessThan(0.05 + 3.5 * 0.014);
    // Goldfeld-Quandt is below its level where the structure itself follows size: its parameters even out the two ends.
    if (which !== 'goldfeld-quandt') expect(share).toBeGreaterThan(0);
  },
);

test('the boundary likelihood ratio rejects in at most about 5 of 100 draws where tau2 is 0', () => {
  const { structure, theta } = between.fitted;
  const phi = theta[structure.scaleAt] as number;
  const share = rejectionShare({
    of: between,
    test: 'boundary-likelihood-ratio',
    draws,
    errors: (normal) => structure.sampling.map((a) => Math.sqrt(phi * a) * normal()),
  });
  expect(share).toBeGreaterThan(0.005);
  expect(share).toBeLessThan(0.08);
});

test('where large cells have large leverage the size score rejects as much oftener as their smaller residuals explain', () => {
  const { fitted, cells } = perSize;
  const constantColumn = spanOf([new Float64Array(cells.count).fill(1)]);
  const [z] = spanOf([(cells.effectiveSize as Float64Array).map((m) => log(m))], constantColumn);
  const expected = fitted.leverages.map((h) => ((1 - h) * cells.count) / fitted.residualFreedom);
  const shift = plainDot(z as Float64Array, expected) / Math.sqrt(2);
  const explained = normalUpper(1.959964 - shift) + normalLower(-1.959964 - shift);
  const share = rejectionShare({
    of: perSize,
    test: 'size-score',
    draws: 2000,
    errors: (normal) => fitted.variances.map((v) => Math.sqrt(v) * normal()),
  });
  expect(explained).toBeGreaterThan(0.07);
  expect(Math.abs(share - explained)).toBeLessThan(0.02);
});
