import type { Fitted } from '@core/estimate/fitted';
import { describe, expect, it } from 'vitest';
import { fitCase } from '../estimate/fitting';
import { outside } from '../support/case';

/** Digits of agreement with a certified value; an exact zero must be met exactly. */
function digits(found: number, certified: number): number {
  if (found === certified) return 17;
  return certified === 0 ? 0 : -Math.log10(Math.abs((found - certified) / certified));
}

function worst(fitted: Fitted, of: Parameters<typeof outside>[0]): Record<string, number> {
  const fewest = (values: number[]) => Math.min(...values);
  const { names } = fitted.design;
  const error = (j: number) => Math.sqrt((fitted.covariance[j] as Float64Array)[j] as number);
  return {
    coefficients: fewest(
      names.map((name, j) => digits(fitted.coefficients[j] as number, outside(of, 'ols', `coefficient:${name}`))),
    ),
    errors: fewest(names.map((name, j) => digits(error(j), outside(of, 'ols', `standard_error:${name}`)))),
    residualSd: digits(Math.sqrt(fitted.scale as number), outside(of, 'ols', 'residual_sd')),
  };
}

/** 1 - r'r / (y - ybar)'(y - ybar), uncentred without an intercept, in the outcome's own digits. */
function rSquared(fitted: Fitted): number {
  const y = fitted.response.high;
  const centre = fitted.design.intercept ? y.reduce((sum, value) => sum + value, 0) / y.length : 0;
  const total = y.reduce((sum, value) => sum + (value - centre) ** 2, 0);
  return 1 - fitted.residuals.reduce((sum, r) => sum + r * r, 0) / total;
}

// NIST Statistical Reference Datasets, linear regression: certified values. Limits: the notes of the cases (the digits that the certified
// figures and 15-digit storage leave).
describe.each([
  ['nist-filip', 14.0],
  ['nist-longley', 14.4],
  ['nist-noint1', 14.4],
  ['nist-wampler1', 14.4],
  ['nist-wampler2', 14.4],
  ['nist-wampler3', 14.4],
])('%s', (id, limit) => {
  const { of, fitted } = fitCase(id, 'ols');

  it(`gives coefficients, errors and residual deviation to ${limit} digits of the certified values`, () => {
    for (const found of Object.values(worst(fitted, of))) expect(found).toBeGreaterThan(limit);
  });

  it('gives the certified R squared', () => {
    const quantity = fitted.design.intercept ? 'r_squared:weighted_centred' : 'r_squared:weighted_uncentred';
    const certified = of.expected.find((e) => e.quantity === quantity);
    expect(certified).toBeDefined();
    expect(Math.abs(rSquared(fitted) - (certified?.value as number))).toBeLessThan(2e-14);
  });
});

it('the polynomial of degree 10 keeps 8 digits by plain reflections, which the fit says of itself', () => {
  const { fitted } = fitCase('nist-filip', 'ols');
  expect(fitted.condition).toBeGreaterThan(1e9);
  expect(fitted.digits).toBeGreaterThan(6);
  expect(fitted.digits).toBeLessThan(11);
});
