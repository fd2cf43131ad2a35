import { readJson } from '@core/protocol/json';
import { readPlan, readTabulation } from '@core/protocol/read';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

/** Where a text is refused, or null. */
function brokenAt(text: string): { line: number; column: number } | null {
  const read = readJson(text);
  if (read.ok) return null;
  const [first] = read.problems;
  if (read.problems.length !== 1 || first?.code !== 'not-json') throw new Error(JSON.stringify(read.problems));
  expect(first.at).toBe('');
  return first.facts;
}

/** Texts in which no key is repeated: two routes must agree on them. */
const json = fc.json({ maxDepth: 5, stringUnit: 'grapheme' }).filter((text) => !/-0[,\]}]|-0$/.test(text));

describe('reading JSON', () => {
  it('gives what JSON.parse gives for every JSON text', () => {
    fc.assert(
      fc.property(json, (text) => {
        const read = readJson(text);
        expect(read).toEqual({ ok: true, value: JSON.parse(text) });
      }),
      { numRuns: 500, seed: 8 },
    );
  });

  it('accepts and refuses the same damaged texts as JSON.parse', () => {
    const damaged = fc.tuple(json, fc.nat(), fc.constantFrom(...'{}[]:,"\\0-1.eE+tn \n')).map(([text, n, mark]) => {
      const i = n % (text.length + 1);
      return n % 2 === 0 ? text.slice(0, i) + mark + text.slice(i) : text.slice(0, i) + text.slice(i + 1);
    });
    fc.assert(
      fc.property(damaged, (text) => {
        let value: unknown;
        try {
          value = JSON.parse(text);
        } catch {
          expect(brokenAt(text)).not.toBeNull();
          return;
        }
        const read = readJson(text);
        // A doubled key, a number beyond the doubles or half a pair can come of the damage; JSON.parse lets them pass.
        if (read.ok) expect(JSON.stringify(read.value)).toBe(JSON.stringify(value));
        else expect(!text.isWellFormed() || /[eE]|\d{300}|\\u|".*".*:.*".*":/s.test(text)).toBe(true);
      }),
      { numRuns: 2000, seed: 8 },
    );
  });

  it('names the place of the first character that cannot stand there, wherever it was put', () => {
    fc.assert(
      fc.property(json, fc.nat(), (text, n) => {
        const points = [...text];
        const i = n % (points.length + 1);
        // A control character can stand nowhere. After a backslash, or inside a number or word, it is still the first wrong one.
        const before = points.slice(0, i).join('');
        const lines = before.split('\n');
        expect(brokenAt(`${before}\u0001${points.slice(i).join('')}`)).toEqual({
          line: lines.length,
          column: [...(lines.at(-1) as string)].length + 1,
        });
      }),
      { numRuns: 500, seed: 8 },
    );
  });

  it.each([
    ['', 1, 1],
    ['  ', 1, 3],
    ['{"a": 1,}', 1, 9],
    ['{"a" 1}', 1, 6],
    ['{a: 1}', 1, 2],
    ["{'a': 1}", 1, 2],
    ['[1, 2', 1, 6],
    ['[1 2]', 1, 4],
    ['[1,]', 1, 4],
    ['{} {}', 1, 4],
    ['[01]', 1, 3],
    ['[1.]', 1, 4],
    ['[.5]', 1, 2],
    ['[+1]', 1, 2],
    ['[-]', 1, 3],
    ['[1e]', 1, 4],
    ['[tru]', 1, 5],
    ['[NaN]', 1, 2],
    ['["a\tb"]', 1, 4],
    ['["\\q"]', 1, 4],
    ['["\\u12G4"]', 1, 7],
    ['"a', 1, 3],
    ['[1, // no\n2]', 1, 5],
    ['{\r\n"a": 1,\r\n"b": x}', 3, 6],
    ['{"😀": x}', 1, 7],
    ['[\u00a01]', 1, 2],
  ])('%j stops being JSON at line %i, column %i', (text, line, column) => {
    expect(brokenAt(text)).toEqual({ line, column });
  });

  it.each([
    ['a key given twice, at the second', '{"a": 1, "b": 2, "a": 3}', 1, 18],
    ['a key given twice in another spelling', '{"a": 1, "\\u0061": 3}', 1, 10],
    ['a key given twice in another normal form', '{"\u00e9": 1, "e\u0301": 3}', 1, 10],
    ['a number beyond the range of a double', '[1e999]', 1, 2],
    ['half a surrogate pair, escaped', '["ab\\ud800"]', 1, 5],
    ['half a surrogate pair, the second', '["\\udc00"]', 1, 3],
    ['half a surrogate pair as it stands', '["\ud800"]', 1, 3],
  ])('%s is refused there', (_, text, line, column) => {
    expect(brokenAt(text)).toEqual({ line, column });
  });

  it('keeps a whole surrogate pair, written either way', () => {
    expect(readJson('["\\ud83d\\ude00", "😀"]')).toEqual({ ok: true, value: ['😀', '😀'] });
  });

  it('drops a byte order mark at the start, and counts columns after it', () => {
    expect(readJson('\ufeff{}')).toEqual({ ok: true, value: {} });
    expect(brokenAt('\ufeffx')).toEqual({ line: 1, column: 1 });
  });

  it('refuses nesting beyond every use at the bracket that goes too deep, without a stack overflow', () => {
    expect(brokenAt('['.repeat(100) + ']'.repeat(100))).toBeNull();
    expect(brokenAt('['.repeat(1_000_000))).toEqual({ line: 1, column: 101 });
    expect(brokenAt('{"a":'.repeat(1_000_000))).toEqual({ line: 1, column: 501 });
  });

  it('makes every key an own property, and a prototype of none', () => {
    const read = readJson('{"__proto__": {"polluted": 1}, "constructor": 2}');
    if (!read.ok) throw new Error('refused');
    expect(Object.keys(read.value as object)).toEqual(['__proto__', 'constructor']);
    expect(Object.getPrototypeOf(read.value)).toBe(Object.prototype);
    expect('polluted' in {}).toBe(false);
  });

  it('reads -0 as 0', () => {
    expect(readJson('[-0, -0.0, -0e5]')).toEqual({ ok: true, value: [0, 0, 0] });
  });
});

describe('hostile plans', () => {
  it('any JSON at all is refused with problems that JSON can carry, never with an exception', () => {
    fc.assert(
      fc.property(json, fc.constantFrom(readPlan, readTabulation), (text, read) => {
        const found = read(text);
        if (found.ok) throw new Error('accepted');
        expect(found.problems.length).toBeGreaterThan(0);
        expect(JSON.parse(JSON.stringify(found.problems))).toEqual(found.problems);
      }),
      { numRuns: 300, seed: 8 },
    );
  });
});
