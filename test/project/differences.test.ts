import { firstDifference, firstMovedNumber } from '@main/project/differences';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

describe('the first difference of two values', () => {
  it('is none for a value and its copy, and the changed leaf for one change, whatever the value', () => {
    fc.assert(
      fc.property(fc.jsonValue(), (value) => {
        const copy = structuredClone(value);
        expect(firstDifference(value, copy)).toBeNull();
        expect(firstDifference({ before: 1, value }, { before: 1, value: [copy] })?.at).toMatch(/^\/value/);
      }),
      { seed: 3 },
    );
  });

  it.each([
    [{ a: [1, 2] }, { a: [1, 3] }, '/a/1', '3', '2'],
    [{ a: [1, 2] }, { a: [1] }, '/a/1', '—', '2'],
    [{ a: 1 }, { a: 1, 'b/c': null }, '/b~1c', 'null', '—'],
    [{ a: null }, { a: 0 }, '/a', '0', 'null'],
    [{ a: [] }, { a: {} }, '/a', '{}', '[]'],
  ])('of %j and %j stands at its pointer', (expected, found, at, now, then) => {
    expect(firstDifference(expected, found)).toEqual({ at, found: now, expected: then });
  });
});

describe('numbers of two versions', () => {
  const frozen = {
    fit: {
      coefficients: [
        { term: 'x', estimate: 1e-7 },
        { term: 'z', estimate: 2e6 },
      ],
    },
    cells: [{ residual: 3 }, { residual: 1e-13 }],
    bounds: [],
    individualLevel: null,
    cautions: [{ code: 'one' }],
    selfChecks: [{ figure: 1e-15 }],
    made: { version: '1' },
  };
  const later = (change: (value: typeof frozen) => void) => {
    const value = structuredClone(frozen);
    change(value);
    return value;
  };

  it('agree where each is found again, whatever was added and whatever was null or empty then', () => {
    const more = {
      ...later((value) => (value.selfChecks = [])),
      bounds: [{ low: 1 }],
      individualLevel: { a: 1 },
      whatItTakes: [1, 2],
      made: { version: '2' },
    };
    expect(firstMovedNumber(frozen, more)).toBeNull();
  });

  it('are each held against themselves, so that a small one cannot hide beside a large one', () => {
    const small = later((value) => (value.fit.coefficients[0] = { term: 'x', estimate: 1.00001e-7 }));
    expect(firstMovedNumber(frozen, small)?.at).toBe('/fit/coefficients/0/estimate');
  });

  it('of cells are held against the largest of their kind, since a residual near zero is rounding', () => {
    expect(
      firstMovedNumber(
        frozen,
        later((value) => (value.cells[1] = { residual: -2e-13 })),
      ),
    ).toBeNull();
    const moved = later((value) => (value.cells[1] = { residual: 1e-8 }));
    expect(firstMovedNumber(frozen, moved)).toEqual({ at: '/cells/1/residual', found: '1e-8', expected: '1e-13' });
  });

  it('differ where one is lost or a list has another length', () => {
    expect(firstMovedNumber(frozen, { ...frozen, fit: null })?.at).toBe('/fit/coefficients');
    expect(firstMovedNumber(frozen, { ...frozen, cells: [{ residual: 3 }] })).toEqual({
      at: '/cells',
      found: '[1]',
      expected: '[2]',
    });
  });
});
