import { symmetricInverse } from '@core/algebra/dense';
import type { Fitted } from '@core/estimate/fitted';
import { likelihoodAt } from '@core/estimate/likelihood';
import { likelihoodRows } from '@core/estimate/likelihood-rows';
import { freeParameters } from '@core/model/structure';
import { describe, expect, it } from 'vitest';
import { type CaseFit, type Expected, isDiagonal, loadCase } from '../support/case';
import { fitCase } from './fitting';

// Outside values: published sources, R 4.2.2 and 50-digit recomputations, as each case names them.
const ids = [
  'areas-shrinkage',
  'bcg-latitude',
  'bcg-mean',
  'branches-tau-zero',
  'hand-per-size',
  'library-between-per-size',
  'library-no-intercept',
  'library-size-power',
  'library-targets',
  'physics-known-se',
  'physics-quadratic',
  'savings-hc',
  'schools-between-given',
  'schools-between-per-size',
  'schools-per-size',
  'schools-price',
  'schools-shrinkage',
  'schools-two-step',
];

const LINEAR = 1e-10;
const VARIANCE = 1e-10;

const parameters: Record<string, string> = { tau_squared: 'tau2', delta: 'delta', phi: 'phi', 'phi:per-size': 'phi' };

/** What a quantity of a case is in a fit; undefined where another room answers. */
function quantityOf(quantity: string, fitted: Fitted): { value: number; tolerance: number } | undefined {
  const [head, tail] = [quantity.slice(0, quantity.indexOf(':')), quantity.slice(quantity.indexOf(':') + 1)];
  const parameter = fitted.structure.parameters.findIndex(({ name }) => name === parameters[quantity]);
  if (parameter >= 0) return { value: fitted.theta[parameter] as number, tolerance: VARIANCE };
  if (quantity === 'log_likelihood' || quantity === 'restricted_log_likelihood')
    return { value: heightOf(fitted, quantity === 'restricted_log_likelihood'), tolerance: 1e-12 };
  const j = fitted.design.names.indexOf(tail);
  if (head === 'coefficient') return { value: fitted.coefficients[j] as number, tolerance: LINEAR };
  if (head !== 'standard_error') return undefined;
  if (j >= 0) return { value: Math.sqrt((fitted.covariance[j] as Float64Array)[j] as number), tolerance: LINEAR };
  return { value: parameterError(fitted, parameters[tail] as string), tolerance: VARIANCE };
}

/** Under least squares a free scale stands at each likelihood's own divisor. */
function heightOf(fitted: Fitted, restricted: boolean): number {
  const { structure, theta, estimate } = fitted;
  const rows = likelihoodRows(fitted);
  const cells = rows.cells;
  const place = theta.slice();
  if (estimate.method === 'least-squares' && structure.commonScale && !restricted)
    place[structure.scaleAt] = ((theta[structure.scaleAt] as number) * (cells - rows.terms)) / cells;
  return likelihoodAt({ rows, structure, restricted, theta: place })?.logLikelihood as number;
}

function parameterError(fitted: Fitted, name: string): number {
  const { structure, theta, estimate } = fitted;
  const at = likelihoodAt({
    rows: likelihoodRows(fitted),
    structure,
    restricted: estimate.method === 'restricted',
    theta,
  });
  const inverse = symmetricInverse(at?.information ?? []) as Float64Array[];
  const a = freeParameters(structure).findIndex((i) => structure.parameters[i]?.name === name);
  return Math.sqrt((inverse[a] as Float64Array)[a] as number) * (at?.units[a] as number);
}

const fits = ids.flatMap((id) => {
  const of = loadCase(id);
  const wanted = of.fits.filter((fit) => isDiagonal(fit) && fit.spec.inference.kind === 'model');
  return wanted.map((fit): [string, string, CaseFit, readonly Expected[]] => [id, fit.fit, fit, of.expected]);
});

describe.each(fits)('%s: %s', (id, name, _, expected) => {
  const { fitted } = fitCase(id, name);
  const known = expected.flatMap((e) => {
    const found = e.fit === name && e.value !== null ? quantityOf(e.quantity, fitted) : undefined;
    return found ? [{ quantity: e.quantity, outside: e.value as number, ...found }] : [];
  });

  it('gives coefficients, variance parameters, their errors and log-likelihoods as outside', () => {
    expect(known.length).toBeGreaterThan(0);
    for (const { quantity, outside, value, tolerance } of known)
      expect(Math.abs(value - outside), `${quantity}: ${value} instead of ${outside}`).toBeLessThanOrEqual(
        tolerance * Math.abs(outside),
      );
  });
});

describe('library-size-power with the exponent given', () => {
  const of = loadCase('library-size-power');
  const sweep = of.expected.filter((e) =>
    /^(sweep_coefficient|profile_log_likelihood|profile_restricted)/.test(e.quantity),
  );

  it.each([0, 0.25, 0.5, 0.75, 1, 1.25, 1.5])('gives the coefficients and both profile likelihoods at %d', (delta) => {
    for (const [name, restricted] of [
      ['size-power-full', false],
      ['size-power-restricted', true],
    ] as const) {
      const fitted = fitCase('library-size-power', name, { delta }).fitted;
      const own = sweep.filter((e) => e.fit === name && e.quantity.split(':')[1] === `delta=${delta}`);
      expect(own.length).toBe(restricted ? 1 : 6);
      for (const e of own) {
        const term = e.quantity.split(':').slice(2).join(':');
        const j = fitted.design.names.indexOf(term);
        const value = j >= 0 ? (fitted.coefficients[j] as number) : heightOf(fitted, restricted);
        expect(Math.abs(value - (e.value as number))).toBeLessThan(1e-12 * Math.abs(e.value as number));
      }
    }
  });
});

it('a variance between cells on its boundary is exactly zero by every rule', () => {
  const rules = ['dersimonian_laird', 'paule_mandel', 'full', 'restricted'];
  for (const rule of rules) expect([...fitCase('branches-tau-zero', rule).fitted.theta]).toEqual([0]);
});
