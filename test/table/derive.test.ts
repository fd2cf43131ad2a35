import { subtract } from '@core/numbers/double-double';
import { readNumber } from '@core/table/number-text';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cells, columns, problems } from './support';

const panel = 'place,t,y,n,x,z\nA,1,1,9,0.1,2\nA,2,1,9,0.3,0\nA,4,1,9,0.6,4\nB,1,1,9,..,5\nB,2,1,9,7,6\n';
const read = { statuses: { '..': 'not-collected' } };
const data = (...derive: object[]) => ({ data: { file: 'cells.csv', read, derive } });

/** Values of a derived column over all rows, null where there is a gap. */
function derived(derive: object, text = panel): (number | null)[] {
  const numbers = columns(data({ name: 'd', ...derive }), text)
    .holder('d')
    ?.numbers();
  return [...(numbers?.values.high ?? [])].map((value, row) => (numbers?.gaps[row] ? null : value));
}

describe('derived columns', () => {
  it('look a lag up by value, in the row’s own group', () => {
    expect(derived({ as: 'lag', of: 'x', by: ['place'], order: 't' })).toEqual([null, 0.1, null, null, null]);
    expect(derived({ as: 'lag', of: 'x', by: ['place'], order: 't', steps: 2 })).toEqual([null, null, 0.3, null, null]);
  });

  it('take a change in double-double, so that 0.3 less 0.1 is 0.2', () => {
    expect(derived({ as: 'change', of: 'x', by: ['place'], order: 't' })).toEqual([null, 0.2, null, null, null]);
  });

  it('take one series without groups', () => {
    expect(derived({ as: 'lag', of: 'y', by: [], order: 't' }, 't,y,n\n3,30,1\n1,10,1\n2,20,1\n')).toEqual([
      20,
      null,
      10,
    ]);
  });

  it('order decimal times exactly', () => {
    expect(derived({ as: 'lag', of: 'y', by: [], order: 't' }, 't,y,n\n2020.1,1,1\n2021.1,2,1\n')).toEqual([null, 1]);
  });

  it('form means over the rows that have a value', () => {
    expect(derived({ as: 'group-mean', of: 'x', by: ['place'] })).toEqual([1 / 3, 1 / 3, 1 / 3, 7, 7]);
    expect(derived({ as: 'within-group-deviation', of: 'x', by: ['place'] })[4]).toBe(0);
    expect(derived({ as: 'within-group-deviation', of: 'x', by: ['place'] })[3]).toBeNull();
    expect(derived({ as: 'centred', of: 'x' })[1]).toBe(-1.7);
  });

  it('hand the reason of a gap on, with the text of the ingredient', () => {
    const made = columns(
      data({ name: 'd', as: 'difference', of: 'x', minus: 'z' }, { name: 'e', as: 'ratio', of: 'd', over: 'z' }),
      panel,
    );
    const e = made.holder('e');
    expect(e?.numbers().gaps[3]).toBe('not-collected');
    expect(e?.gapText(3)).toBe('..');
  });

  it('that divide by zero are refused where a used cell has them, also through a lag, and only there', () => {
    const ratio = { name: 'd', as: 'ratio', of: 'y', over: 'z' };
    const lag = { name: 'before', as: 'lag', of: 'd', by: ['place'], order: 't', steps: 2 };
    const fault = {
      code: 'transform-undefined',
      at: '/data/derive/0/over',
      facts: { file: 'cells.csv', row: 2, column: 'z', found: '0', transform: 'ratio' },
    };
    expect(problems({ ...data(ratio), terms: [{ column: 'd' }] }, panel)).toEqual([fault]);
    expect(problems({ ...data(ratio, lag), terms: [{ column: 'before' }] }, panel)).toEqual([fault]);
    expect(problems(data(ratio), panel)).toEqual([]);
  });

  it('refuse an order that repeats inside a group', () => {
    const text = 'place,t,y,n\nA,1,1,9\nA,1.0,2,9\nB,1,1,9\n';
    const lag = { name: 'd', as: 'lag', of: 'y', by: ['place'], order: 't' };
    expect(problems({ ...data(lag), roles: { outcome: 'y', size: 'n', label: ['place', 'y'] } }, text)).toEqual([
      {
        code: 'order-repeats',
        at: '/data/derive/0/order',
        facts: { column: 't', found: '1', group: { place: 'A' }, labels: ['A · 1', 'A · 2'] },
      },
    ]);
  });

  it('refuse a word where a number is needed, at the place that needs it, unless a rule takes the row out', () => {
    const text = 'place,t,y,n\nA,first,1,9\nA,2,2,9\n';
    const lag = { name: 'd', as: 'lag', of: 'y', by: ['place'], order: 't' };
    const fault = {
      code: 'not-a-number',
      at: '/data/derive/0/order',
      facts: { file: 'cells.csv', row: 1, column: 't', found: 'first' },
    };
    expect(problems(data(lag), text)).toEqual([fault]);
    const omit = [{ column: 't', is: ['first'], because: 'no time' }];
    expect(problems({ data: { file: 'cells.csv', derive: [lag], omit } }, text)).toEqual([]);
  });

  it('come before the columns that use them, and after those they use', () => {
    const late = { name: 'a', as: 'centred', of: 'b' };
    const early = { name: 'b', as: 'centred', of: 'y' };
    expect(problems(data(late, early), panel)).toMatchObject([
      { code: 'unknown-column', at: '/data/derive/0/of', facts: { found: 'b' } },
    ]);
    expect(problems(data(early, { ...late, of: 'b' }), panel)).toEqual([]);
  });

  it('within a group sum to nothing, to the last digit that the values carry', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: -99999, max: 99999 }), { minLength: 1, maxLength: 12 }), (values) => {
        const text = `g,y,n\n${values.map((value) => `a,${value / 100},1`).join('\n')}\n`;
        const numbers = columns(data({ name: 'd', as: 'within-group-deviation', of: 'y', by: ['g'] }), text)
          .holder('d')
          ?.numbers();
        const total = [...(numbers?.values.high ?? [])].reduce(
          (sum, high, row) => sum + high + (numbers?.values.low[row] as number),
          0,
        );
        expect(Math.abs(total)).toBeLessThan(1e-12 * values.length * 1000);
      }),
    );
  });

  it('of decimals differ by what the decimals differ', () => {
    const [x] =
      columns(data({ name: 'd', as: 'difference', of: 'x', minus: 'z' }), panel)
        .holder('d')
        ?.numbers().values.high ?? [];
    expect(x).toBe(subtract(readNumber('0.1', { decimal: '.', group: null }) ?? [0, 0], [2, 0])[0]);
    expect(cells(data(), panel).columns).toEqual(['place', 't', 'y', 'n', 'x', 'z']);
  });
});
