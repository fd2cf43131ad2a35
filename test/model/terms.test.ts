import { designOf } from '@core/model/design';
import { byCodePoint, learnTerms } from '@core/model/learn-terms';
import { rowOf } from '@core/model/row';
import type { Outcome } from '@core/protocol/outcome';
import type { Term } from '@core/protocol/plan';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { open } from '../estimate/fitting';
import { smallCells } from './small';

const csv = `y,n,se,income,rooms,region,soil
1,10,1,20,3,North,clay
2,20,1,30,4,South,sand
4,30,1,10,5,West,clay
3,15,1,25,2,North,sand
5,12,1,35,3,South,clay
7,40,1,15,4,West,sand
6,22,1,40,5,North,clay
`;
const cells = smallCells(csv);
const category = (column: string, baseline: string | null = null) => ({ column, as: 'category', baseline }) as const;
const learn = (terms: Term[], intercept = true) => learnTerms({ terms, intercept, cells });
const names = (terms: Term[], intercept = true) => open(learn(terms, intercept)).flatMap((term) => term.names);
const column = (terms: Term[], name: string, intercept = true) => {
  const design = open(designOf(open(learn(terms, intercept)), cells));
  return [...(design.columns[design.names.indexOf(name)]?.high ?? [])];
};
const problems = (outcome: Outcome<unknown>) => (outcome.ok ? [] : outcome.problems);

describe('terms that meet the data', () => {
  it('are named by their columns, transforms, powers, levels and products', () => {
    const terms: Term[] = [
      { column: 'income' },
      { column: 'income', transform: 'log' },
      { column: 'rooms', transform: 'sqrt' },
      { column: 'rooms', transform: 'inverse' },
      { column: 'income', power: 2 },
      category('region'),
    ];
    expect(names(terms)).toEqual([
      'intercept',
      'income',
      'log(income)',
      'sqrt(rooms)',
      '1/rooms',
      'income^2',
      'region: South',
      'region: West',
    ]);
  });

  it('leave out the baseline that is stated, and the first level where none is', () => {
    expect(names([category('region', 'South')])).toEqual(['intercept', 'region: North', 'region: West']);
  });

  it('keep all levels of the first category that stands alone where there is no intercept, and of that one only', () => {
    expect(names([{ column: 'income' }, category('region', 'West'), category('soil')], false)).toEqual([
      'income',
      'region: North',
      'region: South',
      'region: West',
      'soil: sand',
    ]);
  });

  it('lose the baseline inside a product, with and without an intercept, the first factor slowest', () => {
    const product: Term = { product: [category('region'), category('soil'), { column: 'income' }] };
    const expected = ['region: South × soil: sand × income', 'region: West × soil: sand × income'];
    expect(names([product], true)).toEqual(['intercept', ...expected]);
    expect(names([{ product: [{ column: 'income' }, category('region')] }], false)).toEqual([
      'income × region: South',
      'income × region: West',
    ]);
  });

  it('become columns whose products multiply their factors', () => {
    const terms: Term[] = [{ product: [{ column: 'income' }, category('soil')] }];
    expect(column(terms, 'income × soil: sand')).toEqual([0, 30, 0, 25, 0, 15, 0]);
    expect(column([{ column: 'income', power: 2 }], 'income^2')).toEqual([400, 900, 100, 625, 1225, 225, 1600]);
    expect(column([{ column: 'rooms', transform: 'inverse' }], '1/rooms')[1]).toBe(0.25);
    expect(column([{ column: 'income', transform: 'log' }], 'log(income)')[0]).toBeCloseTo(2.995732273553991, 15);
  });

  it('keep the decimals of a power beyond what a double holds', () => {
    const tenth = smallCells('y,n,se,x\n1,1,1,0.1\n2,1,1,0.2\n3,1,1,0.4\n');
    const design = open(
      designOf(open(learnTerms({ terms: [{ column: 'x', power: 2 }], intercept: false, cells: tenth })), tenth),
    );
    const [square] = design.columns;
    // 0.1^2 = 0.01: the nearest double, and what that double leaves of a hundredth, by exact decimal expansion of the double.
    expect(square?.high[0]).toBe(0.01);
    expect(Math.abs((square?.low[0] as number) - -2.0816681711721684e-19)).toBeLessThan(1e-33);
  });

  it('are refused a category with one level, in a product too, and a baseline that is no level, all together', () => {
    const one = smallCells(csv.replaceAll('South', 'North').replaceAll('West', 'North'));
    const terms: Term[] = [
      { column: 'income' },
      category('region'),
      { product: [{ column: 'income' }, category('region')] },
      category('soil', 'caly'),
    ];
    expect(problems(learnTerms({ terms, intercept: true, cells: one }))).toEqual([
      { code: 'one-level', at: '/terms/1', facts: { column: 'region', level: 'North' } },
      { code: 'one-level', at: '/terms/2/product/1', facts: { column: 'region', level: 'North' } },
      { code: 'unknown-kind', at: '/terms/3/baseline', facts: { found: 'caly', nearest: 'clay' } },
    ]);
  });

  it('are refused where there are none and no intercept', () => {
    expect(problems(learn([], false))).toEqual([{ code: 'empty-list', at: '/terms', facts: { key: 'terms' } }]);
  });
});

describe('a design', () => {
  it('is refused where its columns depend on each other, naming those that take part alone', () => {
    const dependent = smallCells(
      'y,n,se,owners,income,tenants\n1,1,1,20.1,3,79.9\n2,1,1,30.7,9,69.3\n3,1,1,41.3,2,58.7\n4,1,1,55,4,45\n5,1,1,61.9,8,38.1\n',
    );
    const terms: Term[] = [{ column: 'owners' }, { column: 'income' }, { column: 'tenants' }];
    expect(problems(designOf(open(learnTerms({ terms, intercept: true, cells: dependent })), dependent))).toEqual([
      { code: 'dependent-columns', at: '/terms', facts: { coefficients: ['intercept', 'owners', 'tenants'] } },
    ]);
  });

  it('is refused with fewer cells than coefficients', () => {
    const terms: Term[] = [
      { column: 'income' },
      { column: 'rooms' },
      category('region'),
      category('soil'),
      { product: [category('region'), category('soil')] },
    ];
    expect(problems(designOf(open(learn(terms)), cells))).toEqual([
      { code: 'fewer-cells-than-terms', at: '/terms', facts: { cells: 7, coefficients: 8 } },
    ]);
  });

  it('is refused a power that a value cannot take, or that overflows', () => {
    const odd = smallCells('y,n,se,x\n1,1,1,3\n2,1,1,-2\n3,1,1,1e200\n');
    const refusal = (power: number) =>
      problems(designOf(open(learnTerms({ terms: [{ column: 'x', power }], intercept: true, cells: odd })), odd));
    expect(refusal(0.5)).toEqual([
      {
        code: 'transform-undefined',
        at: '/terms/0/power',
        facts: { file: 'data.csv', row: 2, column: 'x', found: '-2', transform: 'power 0.5' },
      },
    ]);
    expect(refusal(2)).toMatchObject([{ facts: { row: 3, found: '1e200' } }]);
  });

  it('counts a term of its own for each coefficient', () => {
    const design = open(designOf(open(learn([{ column: 'income' }, category('region')])), cells));
    expect(design.termOf).toEqual([-1, 0, 1, 1]);
    expect(design.intercept).toBe(true);
  });
});

describe('the row of a cell that is asked about', () => {
  const terms: Term[] = [
    { column: 'income' },
    { column: 'rooms', transform: 'log' },
    category('region'),
    { product: [{ column: 'income' }, category('region')] },
  ];

  it('is the row that the cell has in the design', () => {
    const known = open(learn(terms));
    const design = open(designOf(known, smallCells(csv)));
    for (let g = 0; g < cells.count; g++) {
      const where = {
        income: cells.numbers('income').values.high[g] as number,
        rooms: cells.numbers('rooms').values.high[g] as number,
        region: cells.texts('region')[g] as string,
      };
      expect([...open(rowOf(known, where))]).toEqual(design.columns.map((c) => c.high[g]));
    }
  });

  it('is refused an unknown level, a text for a number and an undefined log, each once and at its place', () => {
    const known = open(learn(terms));
    expect(problems(rowOf(known, { income: 'much', rooms: 0, region: 'Sout' }, '/questions/0/where'))).toEqual([
      { code: 'wrong-type', at: '/questions/0/where/income', facts: { found: 'string', expected: 'number' } },
      { code: 'out-of-range', at: '/questions/0/where/rooms', facts: { found: 0, low: 0, high: null } },
      { code: 'unknown-kind', at: '/questions/0/where/region', facts: { found: 'Sout', nearest: 'South' } },
    ]);
  });
});

it('levels stand in the order of their code points', () => {
  expect(['b', 'a', 'Z', 'é', '\u{1F600}', '\uFF5E', 'aa'].sort(byCodePoint)).toEqual([
    'Z',
    'a',
    'aa',
    'b',
    'é',
    '\uFF5E',
    '\u{1F600}',
  ]);
  fc.assert(
    fc.property(fc.string({ unit: 'binary' }), fc.string({ unit: 'binary' }), (a, b) => {
      expect(byCodePoint(a, b) + byCodePoint(b, a)).toBe(0);
      expect(byCodePoint(a, b) === 0).toBe(a === b);
    }),
  );
});
