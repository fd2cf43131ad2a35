import { structureEvidence } from '@core/evidence/structure-evidence';
import { exp, log } from '@core/numbers/elementary';
import { seeded } from '@core/numbers/random';
import type { Plan } from '@core/protocol/plan';
import type { Evidence } from '@core/protocol/result';
import { expect, test } from 'vitest';
import { cellsFrom } from '../support/case';
import { type FittedCase, fitPlan, fittedCase } from './fitted-case';
import { type Redrawn, rejectionShare } from './redrawn';

// Simulation: 300 cells in pairs, above the count up to which powers are drawn; 800 outcomes under the departure.
const of = simulatedPairs(300);
const evidence = structureEvidence(of);
const sizes = of.cells.effectiveSize as Float64Array;

const tests: Redrawn[] = ['size-score', 'size-score-studentised', 'size-slope', 'goldfeld-quandt', 'brown-forsythe'];

test.each(tests)('above 200 cells the large-sample form of %s has power .8 at its departure', (which) => {
  const { detail } = entryOf(which);
  expect(detail['departureBy']).toBe('large-sample');
  const exponent = detail['departureExponent'] as number;
  const share = rejectionShare({
    of,
    test: which,
    draws: 800,
    errors: (normal) =>
      sizes.map((m, g) => Math.sqrt((of.fitted.variances[g] as number) * exp(-exponent * log(m))) * normal()),
  });
  expect(share).toBeGreaterThan(0.75);
  expect(share).toBeLessThan(0.85);
});

test('above 200 cells the normal form of I has power .8 at the common correlation of pairs', () => {
  const rho = entryOf('dependence').smallestDeparture?.size as number;
  const roots = of.fitted.variances.map((v) => Math.sqrt(v));
  const share = rejectionShare({
    of,
    test: 'dependence',
    draws: 800,
    errors: (normal) => {
      const shared = roots.slice(0, roots.length / 2).map(() => normal());
      return roots.map(
        (root, g) => root * (Math.sqrt(rho) * (shared[g >> 1] as number) + Math.sqrt(1 - rho) * normal()),
      );
    },
  });
  expect(share).toBeGreaterThan(0.75);
  expect(share).toBeLessThan(0.85);
});

function entryOf(which: string): Evidence {
  return evidence.find((entry) => entry.test === which) as Evidence;
}

function simulatedPairs(count: number): FittedCase {
  const { plan } = fittedCase('library-structure-tests', 'per-size');
  const { normal, uniform } = seeded(5);
  const rows = Array.from({ length: count }, (_, g) => {
    const size = Math.max(2, Math.round(exp(4 + normal())));
    return `${(10 * uniform()).toFixed(3)},${size},${normal().toFixed(4)},p${g >> 1}`;
  });
  const asked: Plan = {
    ...plan,
    terms: [{ column: 'x' }],
    tests: null,
    roles: { ...plan.roles, outcome: 'y', size: 'n', label: ['pair'] },
  };
  return fitPlan(asked, cellsFrom(`x,n,y,pair\n${rows.join('\n')}\n`, asked));
}
