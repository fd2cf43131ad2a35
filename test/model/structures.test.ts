import type { Covariance } from '@core/algebra/covariance';
import { interiorPoint, levelsOf, omegaAt, partVariances, type Structure } from '@core/model/structure';
import { takeStructure } from '@core/model/structure-join';
import { structureOf } from '@core/model/structure-of';
import type { Part } from '@core/protocol/plan';
import type { Cells } from '@core/table/cells';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { everySum, panelCells, pointIn, structureOn } from './every-structure';

const problems = fc.record({
  parts: everySum,
  seed: fc.integer({ min: 1, max: 10000 }),
  count: fc.integer({ min: 6, max: 15 }),
});

function dense({ diagonal, blocks }: Covariance): number[][] {
  const omega = Array.from(diagonal, (v, g) => Array.from(diagonal, (_, h) => (g === h ? v : 0)));
  for (const { cells, matrix } of blocks ?? [])
    for (const [i, g] of cells.entries())
      for (const [j, h] of cells.entries()) (omega[g] as number[])[h] = matrix[i * cells.length + j] as number;
  return omega;
}

/** The variance of one cell under one part, by its definition. */
function varianceBy(part: Part, cells: Cells, at: (name: string) => number, g: number): number {
  const m = (cells.effectiveSize as Float64Array)[g] as number;
  const s = (cells.error as Float64Array)[g] as number;
  const z = cells.numbers('z').values.high[g] as number;
  const own = (exponent: number | 'estimate') => (exponent === 'estimate' ? at('delta') : exponent);
  switch (part.kind) {
    case 'constant':
      return at('phi');
    case 'per-size':
      return at('phi') / m;
    case 'given':
      return (part.scale === 'free' ? at('phi') : 1) * s * s;
    case 'size-power':
      return at('phi') * m ** -own(part.exponent);
    case 'proxy':
      return at('phi') * z ** own(part.exponent);
    case 'per-class':
      return at(`phi: ${cells.texts('kind')[g]}`) / (part.perSize ? m : 1);
    case 'log-linear':
      return Math.exp(at('gamma: intercept') + at('gamma: log(n)') * Math.log(m) + at('gamma: z') * z);
    case 'between':
      return at('tau2');
    case 'shared':
      return at(`omega2: ${part.by.join(' × ')}`);
    default:
      throw new Error(part.kind);
  }
}

/** Omega by its definition, pair by pair. */
function byDefinition(parts: Part[], cells: Cells, at: (name: string) => number): number[][] {
  const group = (by: readonly string[], g: number) => by.map((column) => cells.texts(column)[g]).join('|');
  const entry = (part: Part, g: number, h: number): number => {
    if (part.kind === 'matrix')
      return (part.scale === 'free' ? at('phi') : 1) * (cells.matrices.get('s.csv')?.[g * cells.count + h] as number);
    const size = Math.sqrt(varianceBy(part, cells, at, g) * varianceBy(part, cells, at, h));
    if (g === h) return size;
    if (part.kind === 'shared') return group(part.by, g) === group(part.by, h) ? size : 0;
    const { correlation } = part;
    if (!correlation || group(correlation.by, g) !== group(correlation.by, h)) return 0;
    const rho = at(`rho: ${part.kind}`);
    if (correlation.kind === 'exchangeable') return rho * size;
    const times = cells.numbers(correlation.order).values.high;
    return rho ** Math.abs((times[g] as number) - (times[h] as number)) * size;
  };
  const places = Array.from({ length: cells.count }, (_, g) => g);
  return places.map((g) => places.map((h) => parts.reduce((sum, part) => sum + entry(part, g, h), 0)));
}

/** The largest difference of two squares, relative to 1 and the entry. */
function farthest(found: readonly number[][], expected: readonly number[][]): number {
  const off = found.map((row, g) =>
    row.map((value, h) => Math.abs(value - (expected[g]?.[h] as number)) / (1 + Math.abs(value))),
  );
  return off.flat().reduce((most, value) => (Number.isNaN(value) ? Number.NaN : Math.max(most, value)), 0);
}

function named(structure: Structure, theta: Float64Array): (name: string) => number {
  return (name) => {
    const index = structure.parameters.findIndex((parameter) => parameter.name === name);
    if (index < 0) throw new Error(`no parameter ${name}`);
    return theta[index] as number;
  };
}

describe('every structure', () => {
  it('is the sum of its parts, pair by pair, as METHODS.md 1 defines them', () => {
    fc.assert(
      fc.property(problems, ({ parts, seed, count }) => {
        const cells = panelCells(count, seed);
        const structure = structureOn(cells, parts);
        const theta = pointIn(structure, seed);
        const expected = byDefinition(parts, cells, named(structure, theta));
        expect(farthest(dense(omegaAt(structure, theta)), expected)).toBeLessThan(1e-13);
      }),
      { numRuns: 300 },
    );
  });

  it('has the derivatives of its Omega by every parameter, on the diagonal and in blocks', () => {
    fc.assert(
      fc.property(problems, ({ parts, seed, count }) => {
        const structure = structureOn(panelCells(count, seed), parts);
        const theta = pointIn(structure, seed);
        const diagonals = structure.derivativesAt(theta);
        for (const [i, value] of theta.entries()) {
          const step = 1e-6 * (1 + Math.abs(value));
          const up = dense(omegaAt(structure, theta.with(i, value + step)));
          const down = dense(omegaAt(structure, theta.with(i, value - step)));
          const slopes = up.map((row, g) => row.map((to, h) => (to - (down[g]?.[h] as number)) / (2 * step)));
          const blocks = (structure.links?.blocks ?? []).map((cells, b) => ({
            cells,
            matrix: structure.links?.blockDerivativesAt(theta, b)[i] ?? new Float64Array(cells.length * cells.length),
          }));
          const found = dense({ diagonal: diagonals[i] as Float64Array, blocks });
          expect(farthest(found, slopes)).toBeLessThan(2e-7);
          for (const [g, d] of (diagonals[i] as Float64Array).entries()) expect(found[g]?.[g]).toBeCloseTo(d, 12);
        }
      }),
      { numRuns: 200 },
    );
  });

  it('keeps together exactly the cells that a chain of links joins', () => {
    fc.assert(
      fc.property(problems, ({ parts, seed, count }) => {
        const cells = panelCells(count, seed);
        const structure = structureOn(cells, parts);
        const theta = pointIn(structure, seed).map((value, i) =>
          structure.parameters[i]?.role === 'correlation' ? Math.abs(value) : value,
        );
        const omega = byDefinition(parts, cells, named(structure, theta));
        const component = omega.map((_, g) => g);
        for (let pass = 0; pass < count; pass++)
          for (const [g, row] of omega.entries())
            for (const [h, value] of row.entries())
              if (value !== 0) component[g] = Math.min(component[g] as number, component[h] as number);
        const expected = [...new Set(component)]
          .map((first) => component.flatMap((own, g) => (own === first ? [g] : [])))
          .filter(({ length }) => length > 1);
        expect((structure.links?.blocks ?? []).map((block) => [...block])).toEqual(expected);
      }),
    );
  });

  it('is on some cells, in any order, what it was among them', () => {
    fc.assert(
      fc.property(problems, fc.infiniteStream(fc.double({ min: 0, max: 1, noNaN: true })), (problem, stream) => {
        const { parts, seed, count } = problem;
        const structure = structureOn(panelCells(count, seed), parts);
        const theta = pointIn(structure, seed);
        const keys = Array.from({ length: count }, () => stream.next().value as number);
        const rows = keys
          .flatMap((key, g) => (key < 0.8 ? [g] : []))
          .sort((a, b) => (keys[a] as number) - (keys[b] as number));
        if (rows.length === 0) return;
        const whole = dense(omegaAt(structure, theta));
        const taken = dense(omegaAt(takeStructure(structure, rows), theta));
        const expected = rows.map((g) => rows.map((h) => whole[g]?.[h] as number));
        expect(farthest(taken, expected)).toBeLessThan(1e-14);
      }),
    );
  });

  it('has an interior point at which every part has one mean variance', () => {
    fc.assert(
      fc.property(problems, ({ parts, seed, count }) => {
        const structure = structureOn(panelCells(count, seed), parts);
        const theta = interiorPoint(structure);
        const means = structure.parts.map((placed) => {
          const own = partVariances(placed, theta);
          return own.reduce((sum, v) => sum + v / count, 0);
        });
        for (const [p, placed] of structure.parts.entries())
          if (levelsOf(structure, placed).length > 0 || p === 0) expect(means[p]).toBeCloseTo(means[0] as number, 10);
        for (const { low, high, fixed } of structure.parameters) expect(fixed === null && low < high).toBe(true);
      }),
    );
  });
});

describe('a correlation', () => {
  const cells = panelCells(12, 3);
  const serial = (order: string): Part => ({
    kind: 'between',
    correlation: { kind: 'serial', by: ['region'], order },
  });
  const rangeOf = (part: Part) => {
    const rho = structureOn(cells, [{ kind: 'per-size', correlation: null }, part]).parameters.at(-1);
    return [rho?.low, rho?.high];
  };

  it('may be negative where times are whole numbers of which some steps are odd, and starts at 0 otherwise', () => {
    expect(rangeOf(serial('time'))).toEqual([-1, 1]);
    expect(rangeOf(serial('quarter'))).toEqual([0, 1]);
  });

  it('of equal standing goes down to what the largest group allows', () => {
    const counts = new Map<string, number>();
    for (const region of cells.texts('region')) counts.set(region, (counts.get(region) ?? 0) + 1);
    const largest = Math.max(...counts.values());
    expect(rangeOf({ kind: 'between', correlation: { kind: 'exchangeable', by: ['region'] } })).toEqual([
      -1 / (largest - 1),
      1,
    ]);
  });

  it('set outside that range is refused by name', () => {
    const variance = {
      parts: [{ kind: 'constant', correlation: { kind: 'serial', by: ['region'], order: 'quarter' } } as Part],
      fixed: { 'rho: constant': -0.4 },
    };
    const outcome = structureOf({ variance, cells });
    expect(outcome).toMatchObject({
      ok: false,
      problems: [
        { code: 'out-of-range', at: '/variance/fixed/rho: constant', facts: { found: -0.4, low: 0, high: 1 } },
      ],
    });
  });
});
