import { fitStructure } from '@core/estimate/fit';
import { likelihoodRows } from '@core/estimate/likelihood-rows';
import { maximise } from '@core/estimate/maximise';
import { bootstrapBoundary } from '@core/evidence/bootstrap';
import { responsesFrom } from '@core/evidence/bootstrap-draws';
import { mixtureUpper } from '@core/evidence/mixture';
import { withFixed } from '@core/model/structure';
import { fromDoubles } from '@core/numbers/decimals';
import { seeded } from '@core/numbers/random';
import { describe, expect, it } from 'vitest';
import { fittedCase, took } from './fitted-case';

const library = fittedCase('library-between-per-size', 'between-per-size-restricted').fitted;

describe('draws for a variance that vanishes', () => {
  it('count those whose ratio, both maxima searched for from every start, reaches the one of the data', () => {
    for (const fit of ['between-per-size-restricted', 'between-per-size-full']) {
      const { fitted } = fittedCase('library-between-per-size', fit);
      const { response, design, structure, estimate } = fitted;
      const rows = likelihoodRows({ response, design, structure });
      const restricted = estimate.method === 'restricted';
      const none = withFixed(structure, 'tau2', 0);
      const ratio = (drawn: typeof rows) => {
        const [high, low] = [structure, none].map((one) => took(maximise({ rows: drawn, structure: one, restricted })));
        return 2 * ((high?.logLikelihood as number) - (low?.logLikelihood as number));
      };
      const { theta } = took(maximise({ rows, structure: none, restricted }));
      const draw = responsesFrom({ rows, structure: none, theta, random: seeded(7) });
      const statistic = ratio(rows);
      const ratios = Array.from({ length: 150 }, () => ratio(draw()));
      const found = bootstrapBoundary({ fitted, zero: ['tau2'], replications: 150, seed: 7 });
      expect(found?.statistic).toBeCloseTo(statistic, 8);
      expect(found?.count).toBe(ratios.filter((one) => one >= statistic).length);
      expect(found?.p).toBeCloseTo((1 + (found?.count as number)) / 151, 14);
    }
  }, 60_000);

  it('give about the mixture where that holds: 60 libraries, and two variances at once by a grid of them', () => {
    const one = bootstrapBoundary({ fitted: library, zero: ['tau2'] });
    // Reference: statistic 7.190448 (library-between-per-size); half a chi-square on 1.
    expect(one?.statistic).toBeCloseTo(7.1904480756, 6);
    expect(one).toMatchObject({ replications: 999, seed: 1, floor: 0.001 });
    expect(Math.abs((one?.p as number) - mixtureUpper(7.1904480756, [0.5, 0.5, 0]))).toBeLessThan(0.006);
    const { fitted } = fittedCase('branch-panel-boundaries', 'three-restricted');
    const two = bootstrapBoundary({ fitted, zero: ['tau2', 'omega2: branch'] });
    // Four standard errors of 999 draws beside the mixture's own p.
    const mixture = mixtureUpper(two?.statistic as number, [0.25, 0.5, 0.25]);
    expect(Math.abs((two?.p as number) - mixture)).toBeLessThan(4 * Math.sqrt(mixture / 999) + 0.002);
  }, 60_000);

  it('need no draw at the boundary itself, where p is 1, and none are told of a cancelled run or another method', () => {
    const { fitted } = fittedCase('branches-tau-zero', 'restricted');
    expect(bootstrapBoundary({ fitted, zero: ['tau2'] })).toMatchObject({
      statistic: 0,
      p: 1,
      count: 999,
      replications: 999,
    });
    const hooks = { cancelled: () => true, progress: () => {} };
    expect(bootstrapBoundary({ fitted: library, zero: ['tau2'], hooks })).toBeNull();
    const moments = { ...library, estimate: { method: 'moments', rule: 'paule-mandel' } as const };
    expect(bootstrapBoundary({ fitted: moments, zero: ['tau2'] })).toBeNull();
  });

  it('hold their size at few cells, where the mixture of the full likelihood is conservative', () => {
    const { fitted } = fittedCase('branches-tau-zero', 'full');
    const { design, structure } = fitted;
    const random = seeded(3);
    const roots = structure.sampling.map(Math.sqrt);
    let rejected = 0;
    const sets = 300;
    for (let set = 0; set < sets; set++) {
      const response = fromDoubles(roots.map((s) => s * random.normal()));
      const again = took(fitStructure({ response, design, structure, estimate: { method: 'full' } }));
      if ((bootstrapBoundary({ fitted: again, zero: ['tau2'], replications: 99, seed: set })?.p ?? 1) <= 0.1)
        rejected++;
    }
    // 10 % of 300, four standard errors to either side.
    expect(rejected).toBeGreaterThanOrEqual(10);
    expect(rejected).toBeLessThanOrEqual(51);
  }, 60_000);
});
