import { independent } from '@core/algebra/covariance';
import { fitStructure, underStructure } from '@core/estimate/fit';
import { identificationOf } from '@core/estimate/identified';
import { heterogeneityAt, momentTau2 } from '@core/estimate/moments';
import { withFixed } from '@core/model/structure';
import { joinParts } from '@core/model/structure-join';
import type { SamplingPart } from '@core/model/variance-part';
import { fromDoubles } from '@core/numbers/decimals';
import type { Outcome } from '@core/protocol/outcome';
import type { Estimate } from '@core/protocol/plan';
import { describe, expect, it } from 'vitest';
import { open } from './fitting';
import { draw, structureFor } from './problems';

const likelihoods: readonly Estimate[] = [{ method: 'full' }, { method: 'restricted' }];
const problems = (outcome: Outcome<unknown>) => (outcome.ok ? [] : outcome.problems);
const sampling = (a: Float64Array, scale: 'free' | 'fixed'): SamplingPart => ({
  kind: scale === 'free' ? 'constant' : 'given',
  scale,
  at: () => a,
  slopeAt: null,
});
const line = (x: readonly number[]) => ({
  names: ['intercept', 'x'],
  columns: [fromDoubles(x.map(() => 1)), fromDoubles(x)],
  termOf: [-1, 0],
  intercept: true,
});
const ones = (count: number) => new Float64Array(count).fill(1);
const free = (cells: number) =>
  joinParts({ cells, sampling: sampling(ones(cells), 'free'), between: 'none', fixed: {} });
const known = (cells: number, between: 'none' | 'last') =>
  joinParts({ cells, sampling: sampling(ones(cells), 'fixed'), between, fixed: {} });

describe('as many cells as coefficients', () => {
  const design = line([1, 2]);
  const response = fromDoubles([3, 7]);

  it('leave a free scale and all errors undefined, the coefficients not', () => {
    const fitted = open(fitStructure({ response, design, structure: free(2), estimate: { method: 'least-squares' } }));
    expect([...fitted.coefficients]).toEqual([-1, 4]);
    expect(fitted.scale).toBeNaN();
    expect(fitted.covariance.every((row) => row.every(Number.isNaN))).toBe(true);
    expect(fitted.residualFreedom).toBe(0);
    expect([...fitted.leverages]).toEqual([expect.closeTo(1, 14), expect.closeTo(1, 14)]);
  });

  it('keep the errors of known variances', () => {
    const fitted = open(
      fitStructure({ response, design, structure: known(2, 'none'), estimate: { method: 'least-squares' } }),
    );
    expect(fitted.covariance[1]?.[1]).toBeCloseTo(2, 14);
  });

  it.each([...likelihoods, { method: 'moments', rule: 'paule-mandel' }] as Estimate[])(
    'leave nothing over for %o',
    (estimate) => {
      const structure = known(2, 'last');
      expect(problems(fitStructure({ response, design, structure, estimate }))).toMatchObject([
        { code: 'nothing-left-over', facts: { cells: 2, coefficients: 2 } },
      ]);
    },
  );
});

describe('a perfect fit', () => {
  const design = line([1, 2, 4, 7, 11]);
  const response = fromDoubles([5, 7, 11, 17, 25]);

  it('has a scale of exactly zero and residuals of exactly zero under least squares', () => {
    const fitted = open(fitStructure({ response, design, structure: free(5), estimate: { method: 'least-squares' } }));
    expect(fitted.scale).toBe(0);
    expect([...fitted.residuals]).toEqual([0, 0, 0, 0, 0]);
    expect([...fitted.coefficients]).toEqual([3, 2]);
  });

  it.each(likelihoods)('leaves nothing over for $method', (estimate) => {
    for (const structure of [free(5), known(5, 'last')])
      expect(problems(fitStructure({ response, design, structure, estimate }))).toMatchObject([
        { code: 'nothing-left-over' },
      ]);
  });
});

describe('a method', () => {
  const problem = draw(8, 20, 2);
  const { response, design } = problem;
  const structure = structureFor('between-given', problem);

  it('is refused what it cannot estimate', () => {
    const facts = { keys: ['estimate', 'variance'] };
    expect(problems(fitStructure({ response, design, structure, estimate: { method: 'least-squares' } }))).toEqual([
      { code: 'not-together', at: '/estimate/method', facts },
    ]);
    const perSize = structureFor('between-per-size', problem);
    expect(
      problems(
        fitStructure({ response, design, structure: perSize, estimate: { method: 'moments', rule: 'hanushek' } }),
      ),
    ).toEqual([{ code: 'not-together', at: '/estimate/method', facts }]);
  });

  it('divides a common scale by the cells under full likelihood and two-step, by what is free otherwise', () => {
    const scale = (method: 'least-squares' | 'full' | 'restricted' | 'two-step') =>
      open(fitStructure({ response, design, structure: free(20), estimate: { method } })).scale as number;
    expect(scale('restricted')).toBe(scale('least-squares'));
    expect(scale('full') * 20).toBeCloseTo(scale('least-squares') * 18, 12);
    expect(scale('two-step')).toBeCloseTo(scale('full'), 13);
  });

  it('leaves fixed parameters as they are and counts them as known', () => {
    const fitted = open(
      fitStructure({
        response,
        design,
        structure: withFixed(structure, 'tau2', 0.7),
        estimate: { method: 'least-squares' },
      }),
    );
    expect([...fitted.theta]).toEqual([0.7]);
    expect(fitted.estimatedParameters).toBe(0);
    expect(fitted.scale).toBeNull();
    expect([...fitted.variances]).toEqual([...problem.errors].map((s) => s * s + 0.7));
  });

  it('meets weights of another target: its own errors, and the structure’s fit back', () => {
    const weighting = independent(problem.sizes.map((n) => 1 / n));
    const estimate: Estimate = { method: 'restricted' };
    const aside = open(fitStructure({ response, design, structure, estimate, weighting }));
    const own = open(fitStructure({ response, design, structure, estimate }));
    expect(aside.targetIsStructure).toBe(false);
    expect([...aside.theta]).toEqual([...own.theta]);
    for (const j of [0, 1])
      expect(aside.covariance[j]?.[j] as number).toBeGreaterThan(own.covariance[j]?.[j] as number);
    expect(underStructure(aside).coefficients).toEqual(own.coefficients);
    expect(underStructure(own)).toBe(own);
  });
});

describe('moment rules', () => {
  it('solve their own equations', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const problem = draw(seed, 15, 3);
      const model = { ...problem, structure: structureFor('between-given', problem) };
      const paule = momentTau2(model, 'paule-mandel');
      const at = heterogeneityAt(model, paule);
      if (paule > 0) expect(at.q).toBeCloseTo(12, 9);
      else expect(at.q).toBeLessThanOrEqual(12);
      const zero = heterogeneityAt(model, 0);
      expect(momentTau2(model, 'dersimonian-laird')).toBeCloseTo(Math.max(0, (zero.q - 12) / zero.trace), 12);
      const step = 1e-6;
      const difference = (heterogeneityAt(model, 1 + step).q - heterogeneityAt(model, 1 - step).q) / (2 * step);
      expect(heterogeneityAt(model, 1).slope / difference).toBeCloseTo(1, 6);
    }
  });

  // Eight coaching programmes: tau^2 = 0 by every rule (PRACTICE, worked example C).
  it('give zero for the coaching programmes', () => {
    const errors = Float64Array.of(15, 10, 16, 11, 9, 11, 10, 18);
    const part = sampling(
      errors.map((s) => s * s),
      'fixed',
    );
    const structure = joinParts({ cells: 8, sampling: part, between: 'last', fixed: {} });
    const design = { names: ['intercept'], columns: [fromDoubles(ones(8))], termOf: [-1], intercept: true };
    const response = fromDoubles([28, 8, -3, 7, -1, 1, 18, 12]);
    for (const rule of ['dersimonian-laird', 'paule-mandel', 'hanushek'] as const)
      expect(momentTau2({ response, design, structure }, rule)).toBe(0);
    for (const estimate of likelihoods) {
      const fitted = open(fitStructure({ response, design, structure, estimate }));
      expect([...fitted.theta]).toEqual([0]);
      expect(fitted.coefficients[0]).toBeCloseTo(7.685616725, 9);
      expect(Math.sqrt(fitted.covariance[0]?.[0] as number)).toBeCloseTo(4.0719191584, 10);
    }
  });
});

describe('identification', () => {
  const problem = draw(5, 20, 3);

  it('is refused where the sizes are all equal, naming the parts that say the same', () => {
    const sizes = ones(20).map(() => 25);
    const structure = structureFor('between-per-size', { ...problem, sizes });
    expect(problems(identificationOf({ design: problem.design, structure }))).toEqual([
      { code: 'not-identified', at: '/variance/parts', facts: { parts: ['per-size', 'between'] } },
    ]);
    expect(
      open(identificationOf({ design: problem.design, structure: withFixed(structure, 'tau2', 1) })).smallest,
    ).toBe(1);
  });

  it('is refused where what the design leaves has cells of one size alone: the restricted information sees it', () => {
    // One cell of another size, with an indicator of its own.
    const sizes = ones(20).map((_, g) => (g === 0 ? 4 : 25));
    const own = fromDoubles(sizes.map((n) => (n === 4 ? 1 : 0)));
    const design = {
      ...problem.design,
      names: [...problem.design.names, 'own'],
      columns: [...problem.design.columns, own],
    };
    const structure = structureFor('between-per-size', { ...problem, sizes });
    expect(problems(identificationOf({ design, structure })).length).toBe(1);
    expect(problems(identificationOf({ design: problem.design, structure })).length).toBe(0);
  });

  it('is hardly there where sizes are all but equal: the parameters’ correlation is told', () => {
    const sizes = ones(20).map((_, g) => 25 + (g % 2) / 8);
    const found = open(
      identificationOf({ design: problem.design, structure: structureFor('between-per-size', { ...problem, sizes }) }),
    );
    expect(found.smallest).toBeLessThan(1e-4);
    expect(found.hardlySeparate).toMatchObject({ first: 'phi', second: 'tau2' });
    expect(found.hardlySeparate?.correlation).toBeLessThan(-0.999);
  });

  it('is no question for sizes that differ', () => {
    const found = open(
      identificationOf({ design: problem.design, structure: structureFor('between-per-size', problem) }),
    );
    expect(found.hardlySeparate).toBeNull();
    expect(found.smallest).toBeGreaterThan(1e-3);
  });
});
