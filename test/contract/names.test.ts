import { nearestName, sameName } from '@core/protocol/nearest';
import { below, stepsOf } from '@core/protocol/pointer';
import { columnsOfTerms, termName } from '@core/protocol/term-names';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

/** Fewest changes by the definition, from the last letters on: a second route. */
function changes(from: string, to: string): number {
  if (from === '' || to === '') return from.length + to.length;
  const replaced = changes(from.slice(0, -1), to.slice(0, -1)) + (from.at(-1) === to.at(-1) ? 0 : 1);
  return Math.min(replaced, changes(from.slice(0, -1), to) + 1, changes(from, to.slice(0, -1)) + 1);
}

const short = fc.string({ unit: fc.constantFrom('a', 'b', 'c'), maxLength: 5 });

describe('the nearest name', () => {
  it('has the fewest single-character changes, and stands first among equals', () => {
    fc.assert(
      fc.property(short, fc.array(short, { minLength: 1, maxLength: 4 }), (found, names) => {
        const counted = names.map((name) => changes(found, name));
        expect(nearestName(found, names)).toBe(names[counted.indexOf(Math.min(...counted))]);
      }),
      { numRuns: 300, seed: 8 },
    );
  });

  it('is none only where there is no name', () => {
    expect(nearestName('a', [])).toBeNull();
    expect(nearestName('', ['abc'])).toBe('abc');
  });

  it('counts characters, not halves of them, and compares in normal form C', () => {
    expect(nearestName('😀', ['ab', 'x'])).toBe('x');
    expect(nearestName('cafe\u0301', ['cafes', 'caf\u00e9'])).toBe('caf\u00e9');
    expect(sameName('cafe\u0301', 'caf\u00e9')).toBe(true);
    expect(sameName('cafe', 'caf\u00e9')).toBe(false);
  });

  it('is found at once for a name of a million letters', () => {
    expect(nearestName('a'.repeat(1_000_000), ['abc', 'def'])).toBe('abc');
  });
});

describe('JSON pointers', () => {
  it('escape ~ and / (RFC 6901, section 5: "/m~0n", "/a~1b")', () => {
    expect(below('', 'm~n')).toBe('/m~0n');
    expect(below('', 'a/b')).toBe('/a~1b');
    expect(below('/x', '~1', 0)).toBe('/x/~01/0');
  });

  it('lead back to the steps they were made of', () => {
    const steps = fc.array(fc.string({ unit: fc.constantFrom('~', '/', '0', '1', 'a') }), { maxLength: 4 });
    fc.assert(
      fc.property(steps, (list) => {
        expect(stepsOf(below('', ...list))).toEqual(list);
      }),
      { seed: 8 },
    );
  });
});

describe('names of terms (CONTRACT.md, Terms)', () => {
  it.each([
    [{ column: 'income' } as const, 'income'],
    [{ column: 'income', transform: 'log' } as const, 'log(income)'],
    [{ column: 'x', transform: 'sqrt' } as const, 'sqrt(x)'],
    [{ column: 'x', transform: 'inverse' } as const, '1/x'],
    [{ column: 'age', power: 2 } as const, 'age^2'],
    [{ column: 'region', as: 'category', baseline: null } as const, 'region'],
    [{ product: [{ column: 'income' }, { column: 'age', power: 2 }] }, 'income × age^2'],
  ])('%j is called %s', (term, name) => {
    expect(termName(term)).toBe(name);
  });

  it('columns are told once, in the order in which terms name them', () => {
    const product = { product: [{ column: 'c' }, { column: 'a' }] };
    expect(columnsOfTerms([{ column: 'b' }, product, { column: 'b', power: 2 }])).toEqual(['b', 'c', 'a']);
  });
});
