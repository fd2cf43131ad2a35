import { beamOf, heaviestOf } from '@core/evidence/beam';
import { carriedByOf } from '@core/evidence/carried-by';
import { judgeOf } from '@core/evidence/judge';
import { describe, expect, it } from 'vitest';
import { fittedCase, fittedPlan, fittedTable } from './sensitivity-case';

describe('the beam', () => {
  it.each([
    ['library-influence', 'per-size'],
    ['schools-price', 'between-given-restricted'],
    ['library-no-intercept', 'per-size'],
  ])('of %s has pulls and contributions that add up to the coefficients', (id, fit) => {
    const { fitted, cells, plan } = fittedCase(id, fit);
    const beam = beamOf({ fitted, labels: cells.labels, judge: judgeOf(cells, plan) });
    for (const [j, { pulls, contributions }] of beam.entries()) {
      const b = fitted.coefficients[j] as number;
      const sum = pulls.reduce((total, c, g) => total + c * (fitted.response.high[g] as number), 0);
      expect(Math.abs(sum - b)).toBeLessThan(1e-10 * (1 + Math.abs(b)));
      expect(contributions === null).toBe(!plan.intercept || j === 0);
      const contributed = contributions?.reduce((total, value) => total + value, 0) ?? b;
      expect(Math.abs(contributed - b)).toBeLessThan(1e-10 * (1 + Math.abs(b)));
    }
  });

  it('names the fewest cells that carry half of the pull', () => {
    expect(heaviestOf(Float64Array.of(1 / 6, 1 / 2, 1 / 6, 1 / 6))).toEqual([1]);
    expect(heaviestOf(Float64Array.of(0.2, -0.3, 0.25, 0.25))).toEqual([1, 2]);
    expect(heaviestOf(Float64Array.of(0, 0))).toEqual([]);
  });

  it('tells the coefficient of an actual fit without the heaviest cells, interval included', () => {
    const { fitted, cells, plan } = fittedCase('library-influence', 'per-size');
    const income = beamOf({ fitted, labels: cells.labels, judge: judgeOf(cells, plan) })[1];
    const gone = new Set(income?.heaviest.cells);
    const rows = cells.labels.flatMap((label, g) => (gone.has(label) ? [] : [g]));
    const names = ['district', 'mean_visits', 'n', 'income', 'area', 'opening'];
    const lines = rows.map((g) => names.map((name) => cells.texts(name)[g]).join(','));
    const left = fittedTable([names.join(','), ...lines].join('\n'), plan);
    const own = judgeOf(left.cells, plan)(fittedPlan(plan, left.cells), null)?.[1];
    expect(gone.size).toBeGreaterThan(0);
    expect(income?.heaviest.change?.estimate).toBeCloseTo(own?.estimate ?? Number.NaN, 10);
    expect(income?.heaviest.change?.low).toBeCloseTo(own?.low ?? Number.NaN, 10);
    expect(income?.heaviest.change?.high).toBeCloseTo(own?.high ?? Number.NaN, 10);
  });

  it('tells no change where the cells left cannot carry the terms', () => {
    const { plan } = fittedCase('physics-influence', 'scale-free');
    const { fitted, cells } = fittedTable('run,x,y,se\na,0,1,1\nb,0,2,1\nc,0,4,1\nd,1,9,1', plan);
    const beam = beamOf({ fitted, labels: cells.labels, judge: judgeOf(cells, plan) });
    expect(beam[1]?.heaviest).toEqual({ cells: ['d'], change: null });
  });
});

describe('what carries a term', () => {
  const { plan } = fittedCase('physics-influence', 'scale-free');
  const panel = {
    ...plan,
    roles: { ...plan.roles, label: ['district', 'year'] },
    terms: [{ column: 'law' }, { column: 'x' }, { column: 'price' }],
  };
  // Five districts over three years: a law in two districts throughout, x free, price one value a year.
  const rows = ['a', 'b', 'c', 'd', 'e'].flatMap((district, d) =>
    [1, 2, 3].map(
      (year) =>
        `${district},${year},${d < 2 ? 1 : 0},${d * year + (d % 2)},${year * year},${d + year * 0.5 + (d * d) / 9},1`,
    ),
  );
  const { fitted, cells } = fittedTable(['district,year,law,x,price,y,se', ...rows].join('\n'), panel);
  const carried = carriedByOf({ fitted, cells });

  it('is the side of a category that has fewer cells and groups', () => {
    expect(carried[1]).toEqual({
      term: 'law',
      cells: 6,
      by: [
        { column: 'district', groups: 2, constantWithin: true },
        { column: 'year', groups: 3, constantWithin: false },
      ],
    });
  });

  it('is every cell and group for a number that no value fills by half, and for the intercept', () => {
    expect(carried[2]?.cells).toBe(15);
    expect(carried[0]).toMatchObject({ term: 'intercept', cells: 15 });
    expect(carried[0]?.by.map(({ groups }) => groups)).toEqual([5, 3]);
  });

  it('tells the groups within which a term is constant', () => {
    expect(carried[3]?.by).toEqual([
      { column: 'district', groups: 5, constantWithin: false },
      { column: 'year', groups: 3, constantWithin: true },
    ]);
  });

  it('knows no groups where the label tells every cell apart', () => {
    const single = fittedCase('physics-influence', 'scale-free');
    expect(carriedByOf(single).map(({ by }) => by)).toEqual([[], []]);
  });
});
