import type { Structure } from '@core/model/structure';
import { structureOf } from '@core/model/structure-of';
import { seeded } from '@core/numbers/random';
import type { Correlation, Part } from '@core/protocol/plan';
import type { Cells } from '@core/table/cells';
import fc from 'fast-check';
import { open } from '../estimate/fitting';
import { smallCells } from './small';

/** Regions of unequal size with times that jump, and a kind that crosses them; a matrix of pairs a few cells apart. */
export function panelCells(count: number, seed: number): Cells {
  const random = seeded(seed);
  const regions = Math.max(2, Math.floor(count / 4));
  const times = new Map<number, number>();
  const lines = Array.from({ length: count }, (_, g) => {
    const region = Math.floor(random.uniform() * regions);
    const time = (times.get(region) ?? 2000) + 1 + Math.floor(2.5 * random.uniform());
    times.set(region, time);
    const size = 1 + Math.floor(200 * random.uniform() * random.uniform());
    const x = random.normal();
    const y = 3 + x + random.normal() * (0.5 + 4 / Math.sqrt(size)) + 0.7 * region;
    return [y, size, 0.2 + random.uniform(), 0.3 + 3 * random.uniform(), x, `r${region}`, time, `k${g % 3}`, time / 4];
  });
  const csv = ['y,n,se,z,x,region,time,kind,quarter', ...lines.map((line) => line.join(','))].join('\n');
  const cells = smallCells(`${csv}\n`);
  const columns = new Map(cells.columns.map((name) => [name, cells.numbers(name)]));
  const texts = new Map(cells.columns.map((name) => [name, cells.texts(name)]));
  return {
    ...cells,
    numbers: (name) => columns.get(name) ?? cells.numbers(name),
    texts: (name) => texts.get(name) ?? cells.texts(name),
    matrices: new Map([['s.csv', bandMatrix(count, random.uniform)]]),
  };
}

/** Positive definite, every third cell tied to the next alone. */
function bandMatrix(count: number, uniform: () => number): Float64Array {
  const entries = new Float64Array(count * count);
  for (let g = 0; g < count; g++) entries[g * count + g] = 0.2 + uniform();
  for (let g = 0; g + 1 < count; g += 3) {
    const [own, next] = [entries[g * count + g] as number, entries[(g + 1) * count + g + 1] as number];
    entries[g * count + g + 1] = entries[(g + 1) * count + g] = (uniform() - 0.5) * Math.sqrt(own * next);
  }
  return entries;
}

const correlation = fc.constantFrom<Correlation | null>(
  null,
  { kind: 'exchangeable', by: ['region'] },
  { kind: 'serial', by: ['region'], order: 'time' },
  { kind: 'serial', by: ['region'], order: 'quarter' },
);

const sampling = fc.tuple(fc.integer({ min: 0, max: 11 }), correlation).map(([kind, own]): Part => {
  const parts: Part[] = [
    { kind: 'constant', correlation: own },
    { kind: 'per-size', correlation: own },
    { kind: 'given', scale: 'fixed', freedom: null, correlation: own },
    { kind: 'given', scale: 'free', freedom: null, correlation: own },
    { kind: 'size-power', exponent: 0.5, correlation: own },
    { kind: 'size-power', exponent: 'estimate', correlation: own },
    { kind: 'proxy', column: 'z', exponent: 'estimate', correlation: own },
    { kind: 'per-class', column: 'kind', perSize: false, correlation: own },
    { kind: 'per-class', column: 'kind', perSize: true, correlation: own },
    { kind: 'log-linear', terms: [{ column: 'n', transform: 'log' }, { column: 'z' }], correlation: own },
    { kind: 'matrix', file: 's.csv', scale: 'fixed', freedom: null },
    { kind: 'matrix', file: 's.csv', scale: 'free', freedom: null },
  ];
  return parts[kind] as Part;
});

const shared = fc.constantFrom<Part[]>(
  [],
  [{ kind: 'shared', by: ['region'] }],
  [{ kind: 'shared', by: ['kind'] }],
  [
    { kind: 'shared', by: ['region'] },
    { kind: 'shared', by: ['region', 'kind'] },
  ],
);

/** Every sum of parts that METHODS.md 1 allows by its kinds, whether the data can tell its parameters apart or not. */
export const everySum: fc.Arbitrary<Part[]> = fc
  .tuple(sampling, fc.option(correlation, { nil: undefined }), shared)
  .map(([first, between, others]) => [
    first,
    ...(between === undefined ? [] : [{ kind: 'between' as const, correlation: between }]),
    ...others,
  ]);

export function structureOn(cells: Cells, parts: Part[], fixed: Record<string, number> = {}): Structure {
  return open(structureOf({ variance: { parts, fixed }, cells }));
}

/** A point inside every parameter's range. */
export function pointIn(structure: Structure, seed: number): Float64Array {
  const { uniform } = seeded(seed);
  return Float64Array.from(structure.parameters, ({ role, low, high }) => {
    if (role === 'correlation') return low + (high - low) * (0.1 + 0.8 * uniform());
    if (role === 'gamma') return uniform() - 0.5;
    return role === 'exponent' ? 2 * uniform() : 0.2 + 2 * uniform();
  });
}
