import { climbMeans } from '@core/estimate/mean-ascent';
import { separationAlong } from '@core/estimate/separation';
import type { Design } from '@core/model/design';
import type { MeanDependent } from '@core/model/mean-dependent';
import { fromDoubles } from '@core/numbers/decimals';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

interface Cell {
  readonly x: number;
  readonly n: number;
  readonly c: number;
}

const cells = fc
  .array(
    fc.record({
      x: fc.integer({ min: 0, max: 6 }),
      n: fc.integer({ min: 1, max: 30 }),
      kind: fc.constantFrom('none', 'all', 'none', 'all', 'mixed'),
    }),
    { minLength: 3, maxLength: 8 },
  )
  .filter((rows) => new Set(rows.map(({ x }) => x)).size > 1)
  .map((rows): Cell[] =>
    rows.map(({ x, n, kind }) => ({ x, n: n + 1, c: kind === 'none' ? 0 : kind === 'all' ? n + 1 : Math.ceil(n / 2) })),
  );

/** Whether a + b x is 0 at every mixed cell, not above 0 at none and not below 0 at all, without being 0 throughout: by trying every line that can matter. */
function hasNoMaximum(rows: readonly Cell[]): boolean {
  const points = [...new Set(rows.map(({ x }) => x))];
  const lines = [
    [1, 0],
    [-1, 0],
    ...points.flatMap((x) => [
      [-x, 1],
      [x, -1],
    ]),
    ...points.flatMap((x) => [
      [-x - 0.5, 1],
      [x + 0.5, -1],
    ]),
  ];
  return lines.some(([a, b]) => {
    const values = rows.map(({ x }) => (a as number) + (b as number) * x);
    const outwards = rows.every(({ n, c }, g) => {
      const d = values[g] as number;
      return c === 0 ? d <= 0 : c === n ? d >= 0 : d === 0;
    });
    return outwards && values.some((d) => d !== 0);
  });
}

describe('whether a likelihood of counts has a maximum', () => {
  it('is told rightly of 500 random logits on one column, against every line that could part the cells', () => {
    const seen = { parted: 0, there: 0 };
    fc.assert(
      fc.property(cells, (rows) => {
        const n = Float64Array.from(rows, (row) => row.n);
        const part: MeanDependent = {
          kind: 'binomial',
          scale: 'logit',
          observed: Float64Array.from(rows, ({ c, n: size }) => c / size),
          amounts: n,
          whole: 1,
          asCounted: true,
          labels: rows.map((_, g) => `${g}`),
        };
        const columns = [fromDoubles(rows.map(() => 1)), fromDoubles(rows.map(({ x }) => x))];
        const design: Design = { names: ['intercept', 'x'], columns, termOf: [-1, 0], intercept: true };
        const summit = climbMeans({ part, design }, new Float64Array(rows.length));
        const none = hasNoMaximum(rows);
        expect(summit.ended).toBe(none ? 'running' : 'there');
        seen[none ? 'parted' : 'there']++;
        if (summit.ended !== 'running') return;
        const found = separationAlong({ part, design }, summit.step);
        expect(found?.cells.length).toBeGreaterThan(0);
        for (const g of found?.cells ?? []) expect([0, 1]).toContain(part.observed[g]);
      }),
      { seed: 17, numRuns: 500 },
    );
    expect(Math.min(seen.parted, seen.there)).toBeGreaterThan(50);
  });
});
