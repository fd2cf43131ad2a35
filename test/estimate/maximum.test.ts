import { bestScale } from '@core/estimate/ascent';
import { likelihoodAt } from '@core/estimate/likelihood';
import { likelihoodRows } from '@core/estimate/likelihood-rows';
import { type Maximum, maximise } from '@core/estimate/maximise';
import { freeParameters, type Structure, withFixed } from '@core/model/structure';
import { describe, expect, it } from 'vitest';
import { open } from './fitting';
import { draw, type Kind, structureFor } from './problems';

const seeds = Array.from({ length: 50 }, (_, i) => i + 1);

/** The highest likelihood on a dense grid: tau^2 from 0 in steps of a fifth of a logarithm, delta in steps of a tenth, a common scale at its best. */
function gridTop(model: Parameters<typeof bestScale>[0], deltas: readonly number[]): number {
  const { structure } = model;
  let top = -Infinity;
  for (let i = 0; i <= (structure.betweenAt < 0 ? 0 : 120); i++)
    for (const delta of deltas) {
      const theta = new Float64Array(structure.parameters.length).fill(1);
      if (structure.betweenAt >= 0) theta[structure.betweenAt] = i === 0 ? 0 : Math.exp(-12 + i / 5);
      if (structure.exponentAt >= 0) theta[structure.exponentAt] = delta;
      top = Math.max(top, bestScale(model, theta)?.logLikelihood ?? -Infinity);
    }
  return top;
}

function stationary(
  maximum: Maximum,
  model: { rows: Parameters<typeof likelihoodAt>[0]['rows']; structure: Structure; restricted: boolean },
): void {
  const at = likelihoodAt({ ...model, theta: maximum.theta });
  for (const [a, i] of freeParameters(model.structure).entries()) {
    const spread = Math.sqrt(at?.information[a]?.[a] as number);
    const score = (at?.score[a] as number) / spread;
    const name = model.structure.parameters[i]?.name as string;
    if (maximum.atBoundary.includes(name)) expect(score).toBeLessThan(1e-7);
    else expect(Math.abs(score)).toBeLessThan(1e-7);
  }
}

const cases: [Kind, number, readonly number[]][] = [
  ['between-per-size', 20, [1]],
  ['between-given', 20, [1]],
  ['between-per-size', 7, [1]],
  ['between-given', 7, [1]],
  ['size-power', 60, Array.from({ length: 61 }, (_, i) => -2 + i / 10)],
];

describe.each(cases)('%s on %d cells', (kind, cells, deltas) => {
  it.each([true, false])(
    'is not exceeded by any point of a dense grid on 50 problems, and is stationary (restricted: %s)',
    (restricted) => {
      for (const seed of seeds) {
        const problem = draw(seed, cells, 3);
        const structure = structureFor(kind, problem);
        const rows = likelihoodRows({ ...problem, structure });
        const maximum = open(maximise({ rows, structure, restricted }));
        expect(gridTop({ rows, structure, restricted }, deltas) - maximum.logLikelihood).toBeLessThan(1e-9);
        stationary(maximum, { rows, structure, restricted });
        for (const name of maximum.atBoundary)
          expect(maximum.theta[structure.parameters.findIndex((p) => p.name === name)]).toBe(0);
      }
    },
  );
});

describe('a maximum', () => {
  const problem = draw(4, 30, 3);
  const structure = structureFor('between-per-size', problem);
  const rows = likelihoodRows({ ...problem, structure });

  it('is the top of its own profile likelihood', () => {
    const top = open(maximise({ rows, structure, restricted: true }));
    const tau2 = top.theta[structure.betweenAt] as number;
    expect(tau2).toBeGreaterThan(0);
    const held = (value: number) =>
      open(maximise({ rows, structure: withFixed(structure, 'tau2', value), restricted: true }));
    expect(held(tau2).logLikelihood).toBeCloseTo(top.logLikelihood, 10);
    expect(held(tau2).theta[structure.scaleAt]).toBeCloseTo(top.theta[structure.scaleAt] as number, 7);
    for (const factor of [0.5, 0.9, 1.1, 2]) expect(held(tau2 * factor).logLikelihood).toBeLessThan(top.logLikelihood);
  });

  it('needs no search where every parameter is fixed, and says so', () => {
    const fixed = withFixed(withFixed(structure, 'tau2', 0.3), 'phi', 8);
    const top = open(maximise({ rows, structure: fixed, restricted: false }));
    expect([...top.theta]).toEqual([8, 0.3]);
    expect(top.startsTried).toBe(0);
  });

  it('can lie where all variance is between cells: then the sampling scale is exactly zero', () => {
    // Sizes that have nothing to do with the spread of the outcome: the cells vary alike.
    const sizes = Float64Array.of(1, 1000, 2, 500, 1, 2000, 3, 800, 1, 900);
    const even = Float64Array.of(1, -1.4, 0.2, 1.6, -0.1, -1.3, 0.3, 1.5, -0.2, -1.6);
    const made = { ...draw(1, 10, 1), sizes, response: { high: even, low: new Float64Array(10) } };
    const own = structureFor('between-per-size', made);
    const top = open(maximise({ rows: likelihoodRows({ ...made, structure: own }), structure: own, restricted: true }));
    expect(top.atBoundary).toEqual(['phi']);
    expect(top.theta[own.scaleAt]).toBe(0);
    expect(top.theta[own.betweenAt]).toBeGreaterThan(0);
  });

  it('is not looked for after a cancellation', () => {
    const outcome = maximise({
      rows,
      structure,
      restricted: true,
      hooks: { cancelled: () => true, progress: () => {} },
    });
    expect(outcome).toMatchObject({ ok: false, problems: [{ code: 'cancelled' }] });
  });
});
