import { byNormalEquations } from '@core/evidence/other-route';
import { selfChecksOf } from '@core/evidence/self-checks';
import { selfCheckCodes } from '@core/protocol/cautions';
import { expect, it } from 'vitest';
import { type FittedCase, fittedCase, fittedTable, rivalsOf } from './sensitivity-case';

function checked(known: Omit<FittedCase, 'of'>) {
  return selfChecksOf({ ...known, rivals: rivalsOf(known) });
}

it.each([
  ['library-influence', 'per-size'],
  ['library-size-power', 'size-power-full'],
  ['library-between-per-size', 'between-per-size-restricted'],
  ['library-no-intercept', 'per-size'],
  ['schools-price', 'between-given-restricted'],
  ['physics-known-se', 'scale-fixed'],
  ['physics-influence', 'scale-free'],
  ['branches-tau-zero', 'restricted'],
  ['library-targets', 'cells'],
])('all hold on %s under %s, each of a known name', (id, fit) => {
  const known = fittedCase(id, fit);
  const checks = checked(known);
  expect(checks.filter(({ passed }) => !passed)).toEqual([]);
  const names = checks.map(({ check }) => check);
  expect(new Set(names).size).toBe(names.length);
  for (const name of names) expect(selfCheckCodes).toContain(name);
  for (const name of ['rows-reversed', 'outcome-unit-changed', 'other-route', 'heaviest-deleted', 'digits'])
    expect(names).toContain(name);
});

it('take the laws that the structure obeys', () => {
  const names = (id: string, fit: string) => checked(fittedCase(id, fit)).map(({ check }) => check);
  expect(names('physics-known-se', 'scale-fixed')).toEqual(expect.arrayContaining(['errors-scaled', 'cell-split']));
  expect(names('physics-influence', 'scale-free')).toContain('errors-scaled');
  expect(names('physics-influence', 'scale-free')).not.toContain('cell-split');
  const priced = names('schools-price', 'between-given-restricted');
  expect(priced).toContain('price-not-negative');
  expect(priced).not.toContain('errors-scaled');
  expect(names('library-influence', 'per-size')).toContain('sizes-scaled');
});

it('fail on a fit that is not what its cells say', () => {
  const known = fittedCase('library-influence', 'per-size');
  const coefficients = known.fitted.coefficients.map((b) => b * (1 + 1e-5));
  const failed = checked({ ...known, fitted: { ...known.fitted, coefficients } }).filter(({ passed }) => !passed);
  expect(failed.map(({ check }) => check)).toEqual(
    expect.arrayContaining(['rows-reversed', 'pulls-sum', 'other-route', 'heaviest-deleted']),
  );
  const residuals = known.fitted.residuals.map((r, g) => (g === 0 ? r + 0.1 : r));
  const bent = checked({ ...known, fitted: { ...known.fitted, residuals } }).filter(({ passed }) => !passed);
  expect(bent.map(({ check }) => check)).toContain('residuals-orthogonal');
});

it('need residuals, and say only what is left without them', () => {
  const { plan } = fittedCase('physics-influence', 'scale-free');
  const known = fittedTable('run,x,y,se\na,0,1,1\nb,1,2,1', plan);
  const checks = checked(known);
  expect(checks.map(({ check }) => check)).toEqual([
    'residuals-orthogonal',
    'leverages-sum',
    'pulls-sum',
    'other-route',
    'digits',
  ]);
  expect(checks.every(({ passed }) => passed)).toBe(true);
});

it('solve by normal equations in twice the digits what reflections solve', () => {
  const known = fittedCase('nist-longley', 'ols');
  const other = byNormalEquations(known.fitted) ?? new Float64Array(0);
  for (const [j, b] of known.fitted.coefficients.entries())
    expect(Math.abs((other[j] as number) / b - 1)).toBeLessThan(1e-12);
});
