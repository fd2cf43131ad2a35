import { likelihoodAt } from '@core/estimate/likelihood';
import { informationCriteria } from '@core/inference/criteria';
import { holmAdjusted } from '@core/inference/holm';
import { intraclassOf } from '@core/inference/intraclass';
import { likelihoodsOf } from '@core/inference/likelihoods';
import { profileInterval } from '@core/inference/profile';
import { qProfile } from '@core/inference/q-profile';
import { estimatedOf, judged, numberOrNull, studentOn } from '@core/inference/reference';
import { satterthwaiteFreedom } from '@core/inference/satterthwaite';
import { varianceParametersOf } from '@core/inference/variance-parameters';
import { chiSquareQuantile, chiSquareUpper } from '@core/numbers/distributions';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cellsOf, loadCase, planOf } from '../support/case';
import { fitOf } from './whole-fit';

function fittedCase(id: string, fit: string) {
  const reference = loadCase(id);
  const own = reference.fits.find((each) => each.fit === fit);
  if (!own) throw new Error(`${id} has no fit ${fit}`);
  const plan = planOf(reference, own);
  return fitOf(plan, cellsOf(id, plan)).fitted;
}

describe('Holm’s adjustment', () => {
  it('multiplies by the number of hypotheses left and never falls', () => {
    // By hand: 3 x .01, 2 x .03, then no less than the one before.
    expect(holmAdjusted([0.01, 0.04, 0.03]).map((p) => Number(p.toFixed(12)))).toEqual([0.03, 0.06, 0.06]);
    expect(holmAdjusted([])).toEqual([]);
    expect(holmAdjusted([0.4])).toEqual([0.4]);
    expect(holmAdjusted([0.6, 0.7])).toEqual([1, 1]);
  });

  it('keeps the order, stays between p and m p, and is at most 1', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { minLength: 1, maxLength: 8 }), (p) => {
        const adjusted = holmAdjusted(p);
        for (const [i, value] of adjusted.entries()) {
          expect(value).toBeGreaterThanOrEqual(p[i] as number);
          expect(value).toBeLessThanOrEqual(Math.min(1, p.length * (p[i] as number)));
          for (const [j, other] of adjusted.entries())
            if ((p[i] as number) < (p[j] as number)) expect(value).toBeLessThanOrEqual(other);
        }
      }),
      { seed: 3 },
    );
  });
});

describe('a profile interval', () => {
  const reach = chiSquareQuantile(0.95, 1);
  const parabola = (x: number) => -((x - 4) * (x - 4)) / 2;
  const ask = { estimate: 4, maximum: 0, level: 0.95, floor: -Infinity, ceiling: Infinity, step: 1 };

  it('of a parabola is the estimate and 1.96 to either side', () => {
    const { low, high } = profileInterval({ ...ask, of: parabola });
    expect(low).toBeCloseTo(4 - Math.sqrt(reach), 12);
    expect(high).toBeCloseTo(4 + Math.sqrt(reach), 12);
  });

  it('does not depend on the first step', () => {
    for (const step of [1e-6, 0.1, 50])
      expect(profileInterval({ ...ask, of: parabola, step }).high).toBeCloseTo(4 + Math.sqrt(reach), 10);
  });

  it('ends at a floor or ceiling that is still within reach', () => {
    expect(profileInterval({ ...ask, of: parabola, floor: 3, ceiling: 5 })).toEqual({ low: 3, high: 5 });
    expect(profileInterval({ ...ask, of: parabola, floor: 4 }).low).toBe(4);
  });

  it('is open where the likelihood never falls far enough, or cannot be followed until it does', () => {
    expect(profileInterval({ ...ask, of: () => 0 })).toEqual({ low: null, high: null });
    expect(profileInterval({ ...ask, of: (x) => (x > 5 ? null : parabola(x)) }).high).toBeNull();
  });

  it('closes where the likelihood falls to nothing, and this side of where it cannot be had', () => {
    const nothing = profileInterval({ ...ask, of: (x) => (x > 5 ? -Infinity : parabola(x)) });
    expect(nothing.high).toBeCloseTo(5, 10);
    const lost = profileInterval({ ...ask, step: 50, of: (x) => (x > 7 ? null : parabola(x)) });
    expect(lost.high).toBeCloseTo(4 + Math.sqrt(reach), 10);
  });
});

describe('a Q-profile interval', () => {
  // Ten cells of error variance 1 about a known 0, squares summing to 40: Q(t) = 40 / (1 + t) on 9.
  const ask = { statistic: (t: number) => 40 / (1 + t), freedom: 9, level: 0.95, scale: 1 };

  it('solves for both quantiles', () => {
    const { low, high } = qProfile(ask);
    expect(chiSquareUpper(40 / (1 + (low as number)), 9)).toBeCloseTo(0.025, 10);
    expect(chiSquareUpper(40 / (1 + (high as number)), 9)).toBeCloseTo(0.975, 10);
  });

  it('begins at 0 where Q(0) is unremarkable, and is empty where it is too small', () => {
    expect(qProfile({ ...ask, statistic: (t) => 9 / (1 + t) }).low).toBe(0);
    expect(qProfile({ ...ask, statistic: (t) => 1 / (1 + t) })).toEqual({ low: null, high: null });
    expect(qProfile({ ...ask, freedom: 0 })).toEqual({ low: null, high: null });
  });
});

describe('intervals of two variance parameters', () => {
  // Second route: the likelihood maximised over the other parameter on a fine grid that is narrowed eight times.
  function bestOver(value: (other: number) => number, low: number, high: number): number {
    let [from, to] = [low, high];
    let best = -Infinity;
    for (let round = 0; round < 14; round++) {
      const step = (to - from) / 20;
      const points = Array.from({ length: 21 }, (_, i) => from + i * step);
      const heights = points.map(value);
      best = Math.max(...heights);
      const at = points[heights.indexOf(best)] as number;
      [from, to] = [Math.max(low, at - step), Math.min(high, at + step)];
    }
    return best;
  }

  for (const fit of ['between-per-size-full', 'between-per-size-restricted'])
    it(`${fit}: at each end the likelihood has fallen by half the chi-square quantile`, () => {
      const likelihoods = likelihoodsOf(fittedCase('library-between-per-size', fit));
      const { fitted, rows } = likelihoods;
      const { structure } = fitted;
      const restricted = fit.endsWith('restricted');
      const l = (tau2: number, phi: number) => {
        const theta = new Float64Array(2);
        theta[structure.betweenAt] = tau2;
        theta[structure.scaleAt] = phi;
        return likelihoodAt({ rows, structure, restricted, theta })?.logLikelihood ?? -Infinity;
      };
      const maximum = (restricted ? likelihoods.restricted : likelihoods.full) as number;
      const fall = (height: number) => 2 * (maximum - height);
      const parameters = varianceParametersOf(likelihoods, 0.95);
      const tau2 = parameters.find(({ name }) => name === 'tau2');
      const phi = parameters.find(({ name }) => name === 'phi');
      const most = 20 * (phi?.estimate as number);
      const reach = chiSquareQuantile(0.95, 1);
      for (const end of [tau2?.low, tau2?.high])
        expect(fall(bestOver((other) => l(end as number, other), 0, most))).toBeCloseTo(reach, 7);
      for (const end of [phi?.low, phi?.high])
        expect(fall(bestOver((other) => l(other, end as number), 0, most))).toBeCloseTo(reach, 7);
      const share = intraclassOf(likelihoods, 0.95);
      for (const end of [share?.low, share?.high]) {
        const s = end as number;
        expect(fall(bestOver((total) => l(s * total, (1 - s) * total), 1e-9, most))).toBeCloseTo(reach, 7);
      }
      expect(share?.estimate).toBeCloseTo(
        (tau2?.estimate as number) / ((tau2?.estimate as number) + (phi?.estimate as number)),
        14,
      );
    });

  it('a scale alone has the interval of its closed form', () => {
    const reference = loadCase('schools-per-size');
    const plan = { ...planOf(reference, reference.fits[0] as never), estimate: { method: 'restricted' } as const };
    const { fitted } = fitOf(plan, cellsOf('schools-per-size', plan));
    const [phi] = varianceParametersOf(likelihoodsOf(fitted), 0.95);
    expect(phi?.se).toBeCloseTo((phi?.estimate as number) * Math.sqrt(2 / 155), 9);
    for (const end of [phi?.low, phi?.high]) {
      const ratio = (end as number) / (phi?.estimate as number);
      expect(155 * (Math.log(ratio) + 1 / ratio - 1)).toBeCloseTo(chiSquareQuantile(0.95, 1), 9);
    }
  });
});

describe('small parts', () => {
  it('Satterthwaite’s freedom of ten equal cells of freedom 5 is 50, and never above the sum or below the smallest', () => {
    const alike = (value: number) => new Float64Array(10).fill(value);
    const known = { pulls: alike(0.1), variances: alike(4), estimated: alike(4), freedoms: alike(5) };
    expect(satterthwaiteFreedom(known)).toBeCloseTo(50, 12);
    expect(satterthwaiteFreedom({ ...known, pulls: alike(0) })).toBeNull();
    expect(satterthwaiteFreedom({ ...known, freedoms: alike(0) })).toBeNull();
    const cells = fc.array(
      fc.record({
        c: fc.double({ min: -9, max: 9, noNaN: true }),
        v: fc.double({ min: 0.1, max: 50, noNaN: true }),
        d: fc.integer({ min: 1, max: 99 }),
      }),
      { minLength: 1, maxLength: 9 },
    );
    fc.assert(
      fc.property(cells, (rows) => {
        const variances = Float64Array.from(rows, ({ v }) => v);
        const freedoms = Float64Array.from(rows, ({ d }) => d);
        const pulls = rows.map(({ c }) => c);
        const freedom = satterthwaiteFreedom({ pulls, variances, estimated: variances, freedoms });
        if (freedom === null) return;
        expect(freedom).toBeGreaterThanOrEqual(Math.min(...freedoms) * (1 - 1e-12));
        expect(freedom).toBeLessThanOrEqual(freedoms.reduce((a, b) => a + b) * (1 + 1e-12));
      }),
      { seed: 5 },
    );
  });

  it('an interval needs an error and a reference, a ratio an error above 0', () => {
    const level = 0.95;
    expect(estimatedOf({ estimate: 2, se: Number.NaN, reference: studentOn(3), level })).toMatchObject({
      se: null,
      low: null,
    });
    expect(estimatedOf({ estimate: 2, se: 1, reference: null, level })).toMatchObject({ se: 1, low: null, high: null });
    expect(judged(2, { se: 0, reference: studentOn(3) })).toEqual({ ratio: null, p: null });
    expect(judged(2, { se: 1, reference: null })).toEqual({ ratio: 2, p: null });
    expect(studentOn(0)).toBeNull();
    expect([Number.NaN, Infinity, -Infinity, null].map(numberOrNull)).toEqual([null, null, null, null]);
  });

  it('information criteria are null without a likelihood, and AICc where its divisor is not above 0', () => {
    const known = { logLikelihood: -10, cells: 5, coefficients: 3, varianceParameters: 1, restricted: true };
    expect(informationCriteria(known)).toMatchObject({ aic: 28, aicc: null });
    expect(informationCriteria({ ...known, cells: 6 }).aicc).toBe(28 + 40);
    expect(informationCriteria({ ...known, logLikelihood: null })).toEqual({ aic: null, aicc: null, bic: null });
    expect(informationCriteria({ ...known, cells: 3 }).bic).toBeNull();
  });
});
