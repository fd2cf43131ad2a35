import { mixtureUpper, mixtureWeights } from '@core/evidence/mixture';
import { expect, test } from 'vitest';
import { loadCase, outside } from '../support/case';

const panel = loadCase('branch-panel-boundaries');
const both = 'tau_squared=0,omega_squared=0';
const fits = ['three-restricted', 'three-full'];

// branch-panel-boundaries: 50-digit likelihood ratios, correlations and weights.
test.each(fits)('the weights and the p value of two boundaries are those of %s', (fit) => {
  const weights = mixtureWeights(outside(panel, fit, `mixture_correlation:${both}`));
  weights.forEach((weight, at) => {
    expect(weight).toBeCloseTo(outside(panel, fit, `mixture_weight:${at}:${both}`), 12);
  });
  const p = mixtureUpper(outside(panel, fit, `lr_statistic:${both}`), weights);
  expect(Math.abs(p / outside(panel, fit, `lr_p_mixture:${both}`) - 1)).toBeLessThan(1e-12);
});

test.each(fits)('one boundary has half the chi-square tail in %s', (fit) => {
  for (const zero of ['tau_squared=0', 'omega_squared=0']) {
    const p = mixtureUpper(outside(panel, fit, `lr_statistic:${zero}`), mixtureWeights(null));
    expect(Math.abs(p / outside(panel, fit, `lr_p_mixture:${zero}`) - 1)).toBeLessThan(1e-12);
  }
});

test('an estimate on the boundary has p 1', () => {
  expect(mixtureUpper(0, mixtureWeights(null))).toBe(1);
});
