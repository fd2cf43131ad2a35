import { describe, expect, it } from 'vitest';
import { answered, refusedOrWhole, structures } from './hostile';
import { everyTable, found, nine, partsOf, run, tables } from './hostile-tables';

describe('hostile cells', () => {
  everyTable(tables.slice(0, Math.ceil(tables.length / 2)));

  it('refuse a method that has nothing to estimate in a structure', () => {
    const table = found('sizes over twelve orders');
    for (const [name, method] of [
      ['size-power estimated', { method: 'least-squares' }],
      ['per-size', { method: 'moments', rule: 'hanushek' }],
      ['per-size + between', { method: 'moments', rule: 'paule-mandel' }],
    ] as const)
      expect(refusedOrWhole(run(table, partsOf(name), { estimate: method }))).toEqual(['not-together']);
  });
});

describe('cells without residuals', () => {
  const answer = answered(run(found('as many cells as terms'), partsOf('per-size')));

  it('have coefficients and no errors, and the report is told why', () => {
    for (const { se, p, reference } of answer.fit.coefficients) expect([se, p, reference]).toEqual([null, null, null]);
    expect(answer.fit.coefficients[1]?.estimate).toBe(2);
    expect(answer.cautions.map(({ code }) => code)).toContain('no-residual-freedom');
  });

  it('have no price in units of the outcome, and none to pay: every weighting gives the same coefficients', () => {
    for (const { price, eigenvalues, actualCovariance } of answer.beside) {
      expect(price.map(({ actualSe, claimedSe }) => [actualSe, claimedSe])).toEqual([
        [null, null],
        [null, null],
      ]);
      for (const { cost } of price) expect(cost).toBeLessThan(1e-28);
      expect([...eigenvalues, ...actualCovariance.flat()].every((value) => value === null)).toBe(true);
    }
  });

  it('have errors where those are given', () => {
    const given = answered(run(found('as many cells as terms'), partsOf('given, fixed')));
    // The slope is y2 - y1: its variance is .01 + .04.
    expect(given.fit.coefficients[1]?.se).toBeCloseTo(Math.sqrt(0.05), 14);
  });
});

describe('a perfect fit', () => {
  const answer = answered(run(found('a perfect line'), partsOf('per-size')));

  it('has errors of 0, a cost that does not depend on the scale, and no likelihood', () => {
    expect(answer.fit.coefficients.map(({ estimate, se }) => [estimate, se])).toEqual([
      [2, 0],
      [3, 0],
    ]);
    expect(answer.fit.logLikelihood).toBeNull();
    const noisy = answered(run({ ...found('a perfect line'), y: [2, 5, 9, 11, 14, 16, 20, 23] }, partsOf('per-size')));
    for (const [i, { price, efficiency }] of answer.beside.entries()) {
      expect(efficiency).toBe(noisy.beside[i]?.efficiency);
      for (const [j, { cost }] of price.entries()) expect(cost).toBeCloseTo(noisy.beside[i]?.price[j]?.cost ?? 0, 12);
    }
  });

  it('leaves the tests of the structure nothing to say', () => {
    for (const { test, reading, p } of answer.evidence)
      if (test !== 'heterogeneity') expect([test, reading, p]).toEqual([test, 'not-applicable', null]);
  });
});

describe('an outcome in units 1e145 times larger or smaller', () => {
  const names = structures.map(({ name }) => name).filter((name) => !name.startsWith('size-power estimated'));
  it.each(names)('gives the same fit of %s in the other unit', (name) => {
    const [tiny, huge] = [1e-145, 1e145].map((unit) => {
      const { fit, evidence, cells } = answered(run(nine('', { y: unit }), partsOf(name)));
      const shown = (p: number | null) => p?.toPrecision(8);
      return {
        coefficients: fit.coefficients.map(({ estimate, se, ratio, p }) => [
          (estimate / unit).toPrecision(8),
          ((se as number) / unit).toPrecision(8),
          ratio?.toPrecision(7),
          shown(p),
        ]),
        parameters: fit.variance.map(({ name: parameter, estimate, atBoundary }) => [
          parameter,
          Math.sqrt(estimate as number)
            .toPrecision(4)
            .slice(0, 4),
          atBoundary,
        ]),
        tests: evidence.map(({ test, p }) => [test, shown(p)]),
        cells: cells.map(({ mse }) => mse !== null),
      };
    });
    expect(tiny).toEqual(huge);
  });
});

describe('what a double cannot square', () => {
  it('is refused at its cell, in the outcome and in the errors', () => {
    for (const [y, se] of [
      [1e200, 1],
      [1e-200, 1],
      [1, 1e-200],
      [1, 1e200],
    ] as const) {
      const table = nine('', { y, se: (g) => (g === 3 ? se : 1) });
      expect(refusedOrWhole(run(table, partsOf('given, fixed'), { beside: [] }))).toEqual(['transform-undefined']);
    }
  });

  it('leaves the errors of a coefficient as they are where its covariate alone cannot be squared', () => {
    const [, small] = answered(run(nine('', { x: 1e-300 }), partsOf('constant'))).fit.coefficients;
    const [, plain] = answered(run(nine('', {}), partsOf('constant'))).fit.coefficients;
    expect((small?.se as number) * 1e-300).toBeCloseTo(plain?.se as number, 12);
    expect(small?.p).toBeCloseTo(plain?.p as number, 12);
  });
});
