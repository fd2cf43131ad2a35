import type { PreviewColumn } from '@core/protocol/bridge';
import { checkRoles } from '@core/protocol/check-roles';
import {
  type ColumnRole,
  columnRoles,
  holdsNumbers,
  proposeRoles,
  roleOf,
  useOf,
  withRole,
  withUse,
} from '@core/protocol/column-roles';
import { noRoles } from '@core/protocol/draft';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const column = (name: string, texts: readonly string[], more: Partial<PreviewColumn> = {}): PreviewColumn => ({
  name,
  type: texts.every((text) => /^[\d.,]+$/.test(text)) ? 'number' : 'category',
  reason: 'numbers',
  distinct: new Set(texts).size,
  decimal: '.',
  group: null,
  readsBothWays: false,
  tokens: [],
  texts,
  ...more,
});

const rolesOf = (columns: readonly PreviewColumn[]) =>
  Object.fromEntries(proposeRoles(columns).map((one) => [one.column, `${one.role}/${one.use}/${one.because}`]));

describe('proposeRoles', () => {
  it('tells the demo’s columns apart by name and values', () => {
    expect(
      rolesOf([
        column('parish', ['Arlow Green', 'Arlow Green', 'Brackwater']),
        column('year', ['2023', '2024', '2023']),
        column('carers', ['734', '671', '1040']),
        column('mean_hours', ['11.87', '12.36', '9.60']),
        column('distance_km', ['7.1', '7.1', '5.4']),
        column('older_percent', ['16.2', '16.4', '14.1']),
      ]),
    ).toEqual({
      parish: 'label/none/texts-name-cells',
      year: 'label/none/year-names-cells',
      carers: 'size/none/name',
      mean_hours: 'mean/none/name',
      distance_km: 'other/number/left-over',
      older_percent: 'other/number/left-over',
    });
  });

  it('lets a number of few whole values name no cell: it is what its name says, or a category; texts with leading zeros name cells', () => {
    const few = { type: 'category', reason: 'few-whole-numbers' } as const;
    expect(
      rolesOf([
        column('parish', ['Arlow Green', 'Arlow Green', 'Brackwater']),
        column('wave', ['1', '2', '1'], few),
        column('n', ['10', '20', '10'], few),
        column('code', ['01', '02', '03'], { type: 'category', reason: 'leading-zeros' }),
        column('mean', ['1.5', '2.5', '3.5']),
      ]),
    ).toEqual({
      parish: 'label/none/texts-name-cells',
      wave: 'other/category/left-over',
      n: 'size/none/name',
      code: 'label/none/texts-name-cells',
      mean: 'mean/none/name',
    });
  });

  it('takes a column with marks and footnotes between its numbers for one of numbers, and a blank one for none', () => {
    const hours = column('mean_hours', ['8,24', 'c', '10,43*', 'n.v.', '9,41'], {
      type: 'text',
      tokens: [{ token: 'c', rows: 1, status: 'suppressed-confidential' }],
    });
    expect(holdsNumbers(hours)).toBe(true);
    expect(rolesOf([hours, column('note', ['', ''], { type: 'text', distinct: 0 })])).toEqual({
      mean_hours: 'mean/none/name',
      note: 'other/none/blank',
    });
  });

  it('gives the size to the only column of positive whole numbers, and to none where two could be it', () => {
    const whole = (name: string) => column(name, ['40', '51', '1 077']);
    expect(rolesOf([column('mean', ['1.5', '2.5']), whole('volunteers')])['volunteers']).toBe(
      'size/none/only-whole-numbers',
    );
    const two = rolesOf([whole('volunteers'), whole('guests')]);
    expect(Object.values(two)).toEqual(['other/number/left-over', 'other/number/left-over']);
  });

  it('gives each single role once, whatever the names', () => {
    const names = fc.constantFrom(
      'n',
      'size',
      'mean',
      'rate',
      'se',
      'var',
      'cv',
      'count',
      'population',
      'percent',
      'x',
    );
    fc.assert(
      fc.property(fc.array(names, { maxLength: 12 }), (drawn) => {
        const columns = drawn.map((name, i) => column(`${name} ${'abcdefghijkl'[i]}`, ['1.5', '2.25', '3']));
        const roles = proposeRoles(columns).map(({ role }) => role);
        const kinds = roles.map((role) => (['mean', 'share', 'percent'].includes(role) ? 'outcome' : role));
        for (const kind of ['outcome', 'size', 'count', 'exposure'])
          expect(kinds.filter((one) => one === kind).length).toBeLessThanOrEqual(1);
        const errors = roles.filter((role) => ['se', 'variance', 'half-width', 'cv'].includes(role));
        expect(errors.length).toBeLessThanOrEqual(1);
      }),
    );
  });
});

describe('withRole', () => {
  const order = ['a', 'b', 'c'];
  const told = columnRoles.filter((role) => role !== 'survey-weight');

  it('is read back by roleOf; kinds of size as the size', () => {
    for (const role of told) {
      const back = roleOf({ roles: withRole(noRoles, { column: 'a', role, order }) }, 'a');
      expect(back).toBe(role === 'effective-size' || role === 'repeats' ? 'size' : role);
    }
  });

  it('never leaves a column in two roles, nor roles that exclude each other', () => {
    const steps = fc.array(fc.tuple(fc.constantFrom(...order), fc.constantFrom<ColumnRole>(...told)), {
      maxLength: 12,
    });
    fc.assert(
      fc.property(steps, (drawn) => {
        let roles = noRoles;
        for (const [one, role] of drawn) roles = withRole(roles, { column: one, role, order });
        const { label, outcome, size, error, count, exposure, designEffect, withinSd } = roles;
        const used = [...(label ?? []), outcome, size, error, count, exposure, designEffect, withinSd].filter(
          (x) => x !== null,
        );
        expect(new Set(used).size).toBe(used.length);
        // What is left to be said (an outcome, a size) may be lacking; contradictions may not stand.
        expect(checkRoles(roles).filter(({ code }) => code === 'not-together' || code === 'must-be-stated')).toEqual(
          [],
        );
      }),
    );
  });

  it('keeps label columns in the order of the table', () => {
    const last = withRole(noRoles, { column: 'c', role: 'label', order });
    expect(withRole(last, { column: 'a', role: 'label', order }).label).toEqual(['a', 'c']);
  });
});

describe('withUse', () => {
  it('puts a term in, turns it into a category in its place, and takes it out with the products that hold it', () => {
    const terms = withUse(withUse([], 'x', 'number'), 'z', 'number');
    expect(withUse(terms, 'x', 'category')).toEqual([{ column: 'x', as: 'category', baseline: null }, { column: 'z' }]);
    const product = { product: [{ column: 'x' }, { column: 'z' }] };
    expect(withUse([...terms, product], 'x', 'none')).toEqual([{ column: 'z' }]);
    expect(useOf({ terms: withUse(terms, 'x', 'category') }, 'x')).toBe('category');
    expect(useOf({ terms }, 'y')).toBe('none');
  });
});
