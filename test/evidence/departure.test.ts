import { structureEvidence } from '@core/evidence/structure-evidence';
import { exp, log } from '@core/numbers/elementary';
import type { Evidence, EvidenceTest } from '@core/protocol/result';
import { expect, test } from 'vitest';
import { type FittedCase, fittedCase } from './fitted-case';
import { type Redrawn, rejectionShare } from './redrawn';

// Simulations: 800 outcomes drawn under the departure, each fitted and tested anew; the stream is not the program's own.
const draws = 800;

const constant = fittedCase('library-structure-tests', 'constant');
const perSize = fittedCase('library-structure-tests', 'per-size');

const ofVariances: [string, FittedCase, Redrawn[]][] = [
  ['constant', constant, ['size-score', 'size-score-studentised', 'size-slope', 'goldfeld-quandt', 'brown-forsythe']],
  ['per-size', perSize, ['size-score', 'size-score-studentised', 'size-slope', 'goldfeld-quandt', 'brown-forsythe']],
];

for (const [name, of, tests] of ofVariances) {
  const evidence = structureEvidence(of);
  test.each(tests)(
    `under ${name} variances off by the smallest departure are found by %s in about 80 of 100 draws`,
    (which) => {
      const found = departureOf(evidence, which);
      expect(found.measure).toBe('variance-ratio');
      const ratios = multipliersWithRatio(of, found.size);
      const share = rejectionShare({
        of,
        test: which,
        draws,
        errors: (normal) => of.fitted.variances.map((v, g) => Math.sqrt(v * (ratios[g] as number)) * normal()),
      });
      expect(share).toBeGreaterThan(0.75);
      expect(share).toBeLessThan(0.85);
    },
  );
}

const ofBetween: [string, FittedCase, Redrawn][] = [
  ['bcg-latitude, common', fittedCase('bcg-latitude', 'common'), 'heterogeneity'],
  ['bcg-latitude, restricted', fittedCase('bcg-latitude', 'restricted'), 'boundary-likelihood-ratio'],
  ['bcg-latitude, full', fittedCase('bcg-latitude', 'full'), 'boundary-likelihood-ratio'],
  [
    'library-between-per-size, restricted',
    fittedCase('library-between-per-size', 'between-per-size-restricted'),
    'boundary-likelihood-ratio',
  ],
];

test.each(ofBetween)('in %s the smallest tau2 is found in about 80 of 100 draws', (_, of, which) => {
  const found = departureOf(structureEvidence(of), which);
  expect(found.measure).toBe('tau2');
  const { structure, theta } = of.fitted;
  const phi = structure.scaleAt < 0 ? 1 : (theta[structure.scaleAt] as number);
  const share = rejectionShare({
    of,
    test: which,
    draws,
    errors: (normal) => structure.sampling.map((a) => Math.sqrt(phi * a + found.size) * normal()),
  });
  expect(share).toBeGreaterThan(0.75);
  expect(share).toBeLessThan(0.85);
});

test('a common correlation of the smallest size inside areas is found in about 80 of 100 draws', () => {
  const found = departureOf(structureEvidence(perSize), 'dependence');
  const area = perSize.cells.texts('area');
  const roots = perSize.fitted.variances.map((v) => Math.sqrt(v));
  const share = rejectionShare({
    of: perSize,
    test: 'dependence',
    draws,
    errors: (normal) => {
      const shared = new Map([...new Set(area)].map((name) => [name, normal()]));
      return roots.map(
        (root, g) =>
          root *
          (Math.sqrt(found.size) * (shared.get(area[g] as string) as number) + Math.sqrt(1 - found.size) * normal()),
      );
    },
  });
  expect(share).toBeGreaterThan(0.75);
  expect(share).toBeLessThan(0.85);
});

function departureOf(evidence: readonly Evidence[], which: EvidenceTest) {
  const found = evidence.find((entry) => entry.test === which)?.smallestDeparture;
  if (!found) throw new Error(`${which} has no smallest departure`);
  return found;
}

/** m^-a with the mean in the smallest quarter over that in the largest as given; 15 cells a quarter, sorted with ties in data order. */
function multipliersWithRatio(of: FittedCase, ratio: number): Float64Array {
  const sizes = of.cells.effectiveSize as Float64Array;
  const rows = [...sizes.keys()].sort((a, b) => (sizes[a] as number) - (sizes[b] as number));
  const quarter = rows.length / 4;
  const at = (a: number) => sizes.map((m) => exp(-a * log(m / 100)));
  const mean = (d: Float64Array, cells: number[]) => cells.reduce((sum, g) => sum + (d[g] as number), 0) / cells.length;
  let [low, high] = [0, 5];
  while (high - low > 1e-10) {
    const middle = (low + high) / 2;
    const d = at(middle);
    if (mean(d, rows.slice(0, quarter)) / mean(d, rows.slice(-quarter)) < ratio) low = middle;
    else high = middle;
  }
  return at(high);
}
