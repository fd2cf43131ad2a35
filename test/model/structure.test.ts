import { freeParameters, interiorPoint, type Structure, withFixed } from '@core/model/structure';
import { structureOf, varianceOf } from '@core/model/structure-of';
import type { Part, Variance } from '@core/protocol/plan';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { open } from '../estimate/fitting';
import { smallCells } from './small';

const cells = smallCells('y,n,se,z\n1,4,0.5,2\n2,9,0.25,3\n3,16,2,5\n');
const variance = (parts: Part[], fixed: Variance['fixed'] = {}): Variance => ({ parts, fixed });
const plain = { correlation: null };
const given = (scale: 'fixed' | 'free'): Part => ({ kind: 'given', scale, freedom: null, ...plain });
const power = (exponent: number | 'estimate'): Part => ({ kind: 'size-power', exponent, ...plain });
const proxy = (exponent: number | 'estimate'): Part => ({ kind: 'proxy', column: 'z', exponent, ...plain });
const between: Part = { kind: 'between', ...plain };
const of = (parts: Part[], fixed?: Variance['fixed']): Structure =>
  open(structureOf({ variance: variance(parts, fixed), cells }));
const at = (structure: Structure, ...theta: number[]) => [...structure.variancesAt(Float64Array.from(theta))];

describe('a variance structure', () => {
  it('is the variance of each cell by its kind', () => {
    expect(at(of([{ kind: 'constant', ...plain }]), 3)).toEqual([3, 3, 3]);
    expect(at(of([{ kind: 'per-size', ...plain }]), 144)).toEqual([36, 16, 9]);
    expect(at(of([given('fixed')]))).toEqual([0.25, 0.0625, 4]);
    expect(at(of([given('free')]), 2)).toEqual([0.5, 0.125, 8]);
    expect(at(of([power(0.5)]), 6)).toEqual([3, 2, 1.5]);
    expect(at(of([power('estimate')]), 6, 0.5)).toEqual([3, 2, 1.5]);
    expect(at(of([proxy(2)]), 1)).toEqual([4, 9, 25]);
    expect(at(of([given('fixed'), between]), 10)).toEqual([10.25, 10.0625, 14]);
  });

  it('names its parameters as results do, in the order of the parts', () => {
    const names = (structure: Structure) => structure.parameters.map(({ name }) => name);
    expect(names(of([power('estimate'), between]))).toEqual(['phi', 'delta', 'tau2']);
    expect(names(of([between, { kind: 'per-size', ...plain }]))).toEqual(['tau2', 'phi']);
    expect(names(of([given('fixed')]))).toEqual([]);
  });

  it('has one common scale exactly where a free phi multiplies all of it', () => {
    expect(of([given('free')]).commonScale).toBe(true);
    expect(of([power('estimate')]).commonScale).toBe(true);
    expect(of([given('fixed')]).commonScale).toBe(false);
    expect(of([{ kind: 'per-size', ...plain }, between]).commonScale).toBe(false);
    expect(of([given('free')], { phi: 2 }).commonScale).toBe(false);
  });

  it('has the derivatives of its variances', () => {
    const structures = [
      of([power('estimate'), between]),
      of([proxy('estimate'), between]),
      of([between, given('free')]),
    ];
    fc.assert(
      fc.property(
        fc.constantFrom(...structures),
        fc.array(fc.double({ min: 0.2, max: 2, noNaN: true }), { minLength: 3, maxLength: 3 }),
        (structure, point) => {
          const theta = Float64Array.from(point.slice(0, structure.parameters.length));
          const columns = structure.derivativesAt(theta);
          for (const [i, column] of columns.entries()) {
            const step = 1e-6;
            const up = structure.variancesAt(theta.with(i, (theta[i] as number) + step));
            const down = structure.variancesAt(theta.with(i, (theta[i] as number) - step));
            for (const [g, d] of column.entries()) {
              const difference = ((up[g] as number) - (down[g] as number)) / (2 * step);
              expect(Math.abs(d - difference)).toBeLessThan(1e-7 * (1 + Math.abs(d)));
            }
          }
        },
      ),
    );
  });

  it('keeps fixed parameters apart and can be fixed and freed again', () => {
    const structure = of([{ kind: 'per-size', ...plain }, between], { tau2: 4 });
    expect(structure.parameters[1]?.fixed).toBe(4);
    expect(freeParameters(structure)).toEqual([0]);
    expect(freeParameters(withFixed(structure, 'tau2', null))).toEqual([0, 1]);
    expect(withFixed(of([given('free')]), 'phi', 2).commonScale).toBe(false);
    expect(() => withFixed(structure, 'delta', 1)).toThrow(RangeError);
  });

  it('has an interior point where its parts weigh alike', () => {
    const structure = of([{ kind: 'per-size', ...plain }, between]);
    const theta = interiorPoint(structure);
    const mean = (at(structure, theta[0] as number, 0).reduce((sum, v) => sum + v, 0) as number) / 3;
    expect(theta[1]).toBeCloseTo(mean, 14);
    const held = interiorPoint(withFixed(structure, 'tau2', 12));
    expect(held[1]).toBe(12);
    expect(at(structure, held[0] as number, 0).reduce((sum, v) => sum + v, 0) / 3).toBeCloseTo(12, 12);
  });

  it('takes a rival by its word', () => {
    expect(varianceOf('given')).toEqual(variance([given('free')]));
    expect(varianceOf('constant')).toEqual(variance([{ kind: 'constant', correlation: null }]));
    expect(at(open(structureOf({ variance: 'per-size', cells, at: '/beside/0' })), 1)).toEqual([1 / 4, 1 / 9, 1 / 16]);
  });

  it('refuses a proxy that is not above zero, as its logarithm would be', () => {
    const outcome = structureOf({
      variance: variance([proxy(1)]),
      cells: smallCells('y,n,se,z\n1,4,0.5,2\n2,9,0.25,0\n'),
    });
    expect(outcome.ok ? [] : outcome.problems).toEqual([
      {
        code: 'transform-undefined',
        at: '/variance/parts/0/column',
        facts: { file: 'data.csv', row: 2, column: 'z', found: '0', transform: 'log' },
      },
    ]);
  });
});
