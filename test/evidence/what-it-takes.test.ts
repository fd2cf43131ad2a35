import { COMMON_CORRELATIONS, commonCorrelationOf } from '@core/evidence/common-correlation';
import { judgeOf } from '@core/evidence/judge';
import { whatItTakesOf } from '@core/evidence/what-it-takes';
import { noncentralTUpper, tUpperQuantile } from '@core/numbers/distributions';
import type { Coefficient } from '@core/protocol/result';
import { describe, expect, it } from 'vitest';
import { type FittedCase, fittedCase } from './fitted-case';

const cases: readonly (readonly [string, string])[] = [
  ['library-between-per-size', 'between-per-size-restricted'],
  ['bcg-latitude', 'restricted'],
  ['physics-known-se', 'scale-fixed'],
  ['physics-known-se', 'scale-free'],
  ['library-size-power', 'size-power-full'],
];

function coefficientsOf({ fitted, cells, plan }: FittedCase): readonly Coefficient[] {
  return judgeOf(cells, plan)(fitted, null) as readonly Coefficient[];
}

describe('a common correlation of sampling errors', () => {
  it('gives the errors of the whole matrix, weights held, and the model’s own at 0', () => {
    for (const [id, fit] of cases) {
      const known = fittedCase(id, fit);
      const { fitted } = known;
      const sampling = fitted.structure.samplingAt(fitted.theta);
      const rows = commonCorrelationOf(known);
      expect(rows.map(({ rho }) => rho)).toEqual(
        COMMON_CORRELATIONS.flatMap((rho) => fitted.design.names.map(() => rho)),
      );
      for (const { rho, term, se } of rows) {
        const j = fitted.design.names.indexOf(term);
        const c = fitted.pulls[j] as Float64Array;
        let variance = 0;
        for (let g = 0; g < c.length; g++)
          for (let h = 0; h < c.length; h++) {
            const together = rho * Math.sqrt((sampling[g] as number) * (sampling[h] as number));
            variance += (c[g] as number) * (c[h] as number) * (g === h ? (fitted.variances[g] as number) : together);
          }
        expect(Math.abs(se / Math.sqrt(variance) - 1)).toBeLessThan(1e-9);
        if (rho === 0) expect(se).toBe(fitted.errors[j]);
      }
    }
  });

  it('says nothing where the plan states how sampling errors go together', () => {
    const known = fittedCase('physics-known-se', 'scale-fixed');
    const correlation = { kind: 'exchangeable', by: ['x'] } as const;
    const parts = [{ kind: 'given', scale: 'fixed', freedom: null, correlation }] as never;
    expect(commonCorrelationOf({ ...known, plan: { ...known.plan, variance: { parts, fixed: {} } } })).toEqual([]);
  });
});

describe('what it would take', () => {
  it('counts the fewest cells whose interval is half as wide, freedom grown with them', () => {
    for (const [id, fit] of cases) {
      const known = fittedCase(id, fit);
      const coefficients = coefficientsOf(known);
      for (const { term, halfWidth } of whatItTakesOf({ ...known, coefficients })) {
        const own = coefficients.find((one) => one.term === term) as Coefficient;
        const G = known.cells.count;
        const width = (own.high as number) - (own.low as number);
        const at = (cells: number) => {
          const freedom = own.reference?.freedom ?? null;
          const reach = freedom === null ? 1.959963984540054 : tUpperQuantile(0.025, freedom + cells - G);
          return 2 * reach * (own.se as number) * Math.sqrt(G / cells);
        };
        const cells = halfWidth?.cells as number;
        expect(at(cells)).toBeLessThanOrEqual((width / 2) * (1 + 1e-12));
        expect(at(cells - 1)).toBeGreaterThan(width / 2);
        if (own.reference?.kind === 'normal') expect(cells).toBe(4 * G);
      }
    }
  });

  it('gives the persons at which the pulls and the shrunken sampling variances halve the error, or none where the other parts forbid it', () => {
    let some = 0;
    let none = 0;
    for (const [id, fit] of cases) {
      const known = fittedCase(id, fit);
      const { fitted } = known;
      const coefficients = coefficientsOf(known);
      const sampling = fitted.structure.samplingAt(fitted.theta);
      const delta = fitted.structure.exponentAt < 0 ? 1 : (fitted.theta[fitted.structure.exponentAt] as number);
      for (const [j, { halfWidth, floor }] of whatItTakesOf({ ...known, coefficients }).entries()) {
        const c = fitted.pulls[j] as Float64Array;
        const at = (times: number) =>
          Math.sqrt(
            c.reduce((sum, pull, g) => {
              const kept = (sampling[g] as number) * (1 - times ** -delta);
              return sum + pull * pull * ((fitted.variances[g] as number) - kept);
            }, 0),
          );
        expect(Math.abs(at(1e300) - (floor as number))).toBeLessThan(1e-9 * (fitted.errors[j] as number));
        const persons = halfWidth?.persons ?? null;
        if (persons === null) {
          none++;
          expect(at(1e300)).toBeGreaterThan((fitted.errors[j] as number) / 2);
        } else {
          some++;
          expect(at(persons) / (fitted.errors[j] as number)).toBeCloseTo(0.5, 9);
        }
      }
    }
    expect(some).toBeGreaterThan(3);
    expect(none).toBeGreaterThan(0);
  });

  it('finds the smallest difference that matters with power .8 at the cells it names, and not at one fewer', () => {
    const known = fittedCase('library-between-per-size', 'between-per-size-restricted');
    const coefficients = coefficientsOf(known);
    const [, own] = coefficients as [Coefficient, Coefficient];
    const matters = { [own.term]: 1.5 * (own.se as number) };
    const plan = { ...known.plan, matters };
    const found = whatItTakesOf({ ...known, plan, coefficients })[1]?.matters;
    const G = known.cells.count;
    const freedom = own.reference?.freedom as number;
    const power = (cells: number, se = (own.se as number) * Math.sqrt(G / cells)) => {
      const reach = tUpperQuantile(0.025, freedom + cells - G);
      const away = (matters[own.term] as number) / se;
      return noncentralTUpper(reach, freedom + cells - G, away) + noncentralTUpper(reach, freedom + cells - G, -away);
    };
    expect(power(found?.cells as number)).toBeGreaterThanOrEqual(0.8);
    expect(power((found?.cells as number) - 1)).toBeLessThan(0.8);
    expect(power(G, found?.se as number)).toBeCloseTo(0.8, 9);
    expect(found?.difference).toBe(matters[own.term]);
  });

  it('says nothing of an error that is not there', () => {
    const known = fittedCase('physics-known-se', 'scale-fixed');
    const bare = coefficientsOf(known).map((one) => ({ ...one, se: null, reference: null, low: null, high: null }));
    expect(whatItTakesOf({ ...known, coefficients: bare }).every(({ halfWidth }) => halfWidth === null)).toBe(true);
  });
});
