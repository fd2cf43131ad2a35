import { spanOf } from '@core/algebra/orthonormal';
import { momentsOf } from '@core/evidence/moran';
import { type Pairs, pairingsOf, partnerSums } from '@core/evidence/pairs';
import { seeded } from '@core/numbers/random';
import { expect, test } from 'vitest';
import { fittedCase } from './fitted-case';

const { cells, plan } = fittedCase('library-panel-dependence', 'per-size', (before) => ({
  ...before,
  data: {
    ...before.data,
    derive: [{ name: 'before', as: 'lag', of: 'opening', by: ['district'], order: 'year', steps: 1 }],
  },
}));
const pairings = pairingsOf(cells, plan);

test('each label column that groups cells and each order of a derived lag is one pairing', () => {
  expect(pairings.map(({ by, order }) => ({ by, order }))).toEqual([
    { by: ['district'], order: null },
    { by: ['year'], order: null },
    { by: ['district'], order: 'year' },
  ]);
});

test('an order that several lags share is tested once', () => {
  const derive = [
    ...plan.data.derive,
    { name: 'moved', as: 'change', of: 'funding', by: ['district'], order: 'year', steps: 2 },
  ];
  const twice = pairingsOf(cells, { ...plan, data: { ...plan.data, derive: derive as typeof plan.data.derive } });
  expect(twice).toHaveLength(pairings.length);
});

test('a neighbour list is a pairing of its own', () => {
  const list = { ...plan, tests: { columns: null, whiteColumns: null, neighbours: 'borders.csv' } };
  const found = pairingsOf(
    {
      ...cells,
      neighbours: [
        [0, 5],
        [5, 9],
      ],
    },
    list,
  ).at(-1) as Pairs;
  expect(found).toMatchObject({ by: [], order: null, neighbours: 'borders.csv', total: 4 });
  const sums = partnerSums(
    found,
    Float64Array.from({ length: cells.count }, (_, g) => g + 1),
  );
  expect([sums[0], sums[5], sums[9], sums[1]]).toEqual([6, 11, 6, 0]);
});

test.each(pairings.map((pairs) => [pairs.order ?? pairs.by[0], pairs] as const))(
  'the moments of I by %s are the traces of the full matrices',
  (_, pairs) => {
    const { normal } = seeded(3);
    const { count } = cells;
    const basis = spanOf([0, 1, 2].map(() => new Float64Array(count).map(() => normal())));
    const freedom = count - 3;
    const unit = (g: number) => new Float64Array(count).map((__, h) => (g === h ? 1 : 0));
    const b = cells.labels.map((__, g) => partnerSums(pairs, unit(g)));
    const m = cells.labels.map((__, g) =>
      unit(g).map((x, h) => x - basis.reduce((sum, q) => sum + (q[g] as number) * (q[h] as number), 0)),
    );
    const mb = product(m, b);
    const trace = traceOf(mb);
    const square =
      traceOf(product(mb, mb)) +
      traceOf(
        product(
          mb,
          product(
            m,
            b.map((__, g) => b.map((row) => row[g] as number)),
          ),
        ),
      );
    const scale = count / pairs.total;
    const expectation = (scale * trace) / freedom;
    const variance = (scale * scale * (square + trace * trace)) / (freedom * (freedom + 2)) - expectation * expectation;
    const found = momentsOf({ basis, count, freedom }, pairs);
    expect(found.expectation).toBeCloseTo(expectation, 13);
    expect(found.variance).toBeCloseTo(variance, 13);
  },
);

function product(a: readonly ArrayLike<number>[], b: readonly ArrayLike<number>[]): Float64Array[] {
  return a.map((row) =>
    Float64Array.from({ length: b.length }, (_, j) => {
      let sum = 0;
      for (let i = 0; i < b.length; i++) sum += (row[i] as number) * ((b[i] as ArrayLike<number>)[j] as number);
      return sum;
    }),
  );
}

function traceOf(a: readonly Float64Array[]): number {
  return a.reduce((sum, row, g) => sum + (row[g] as number), 0);
}
