import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { problem } from '@core/protocol/outcome';
import { type Code, exitStatusOf, type Problem } from '@core/protocol/problems';
import { sentence } from '@core/words/problems';
import { describe, expect, it } from 'vitest';

describe('a problem says what happened, to which thing, and what to do next', () => {
  it.each<[Problem, string]>([
    [
      problem('not-json', { line: 4, column: 56 }, ''),
      'The text stops being JSON at line 4, column 56. Look there for a missing comma, quote or bracket, a word without quotes, or a key given twice.',
    ],
    [
      problem('unknown-key', { found: 'omitt', nearest: 'omit' }, '/data/omitt'),
      'There is no key “omitt” here. Did you mean “omit”?',
    ],
    [
      problem('unknown-kind', { found: 'betwen', nearest: 'between' }, '/variance/parts/1/kind'),
      '“betwen” is none of the words that can stand here. Did you mean “between”?',
    ],
    [problem('missing-key', { key: 'variance' }, ''), 'The key “variance” is missing here. Add it.'],
    [
      problem('missing-key', { key: 'rooms' }, '/questions/0/where'),
      'The terms use the column “rooms”, and no value is stated for it here. Add one.',
    ],
    [
      problem('wrong-type', { found: 'string', expected: 'array' }, '/roles/label'),
      'Here stands a text, where a list in square brackets should stand.',
    ],
    [
      problem('wrong-type', { found: 'null', expected: 'number or string' }, '/questions/0/where/a'),
      'Here stands null, where a number or a text should stand.',
    ],
    [
      problem('out-of-range', { found: 95, low: 0, high: 1 }, '/inference/level'),
      '95 should lie between 0 and 1. 95 per cent is written 0.95.',
    ],
    [problem('out-of-range', { found: 0, low: 0, high: null }, '/roles/per'), '0 should be above 0.'],
    [problem('out-of-range', { found: -2, low: 1, high: null }, ''), '−2 should be no less than 1.'],
    [problem('out-of-range', { found: 9.5, low: 1, high: null }, ''), '9.5 should be a whole number.'],
    [
      problem('must-be-stated', { key: 'scale', choices: ['fixed', 'free'] }, '/variance/parts/0'),
      '“scale” has no default: choose “fixed” or “free”.',
    ],
    [
      problem('must-be-stated', { key: 'errorLevel', choices: null }, '/roles'),
      '“errorLevel” has no default: state its value.',
    ],
    [
      problem('not-together', { keys: ['outcome', 'count'] }, '/roles'),
      '“outcome” and “count” cannot stand together like this. An outcome is a mean, rate or share as it stands; a count is divided by size or exposure. State one of them.',
    ],
    [
      problem('role-needed', { role: 'error', part: 'given' }, '/variance/parts/0'),
      '“given” needs to know the column of the errors. Name it under roles.error, or choose something else than “given”.',
    ],
    [
      problem('not-identified', { parts: ['constant', 'between'] }, '/variance/parts'),
      'The parts “constant” and “between” say the same thing: no data can tell their variances apart. Leave one of them out, or set one of their parameters in "fixed".',
    ],
    [
      problem('correlated-cells', { kind: 'robust', part: 'shared', by: ['district'] }, '/inference/kind'),
      'Robust errors (HC) need uncorrelated cells, and the part “shared” correlates them by “district”. Choose clustered errors instead.',
    ],
    [
      problem('not-a-number', { file: 'rent.csv', row: 12345, column: 'mean_rent', found: 'abt 9' }, '/roles/outcome'),
      '“rent.csv”, row 12\u202f345, column “mean_rent”: “abt 9” is not a number. Correct it, or declare it as a status, a missing code or a footnote.',
    ],
    [
      problem('malformed-row', { file: 'rent.csv', row: 3, found: 1, expected: 10 }, '/data/file'),
      '“rent.csv”, row 3 has 1 field, and the header 10. Correct the row; delete titles and notes around the table.',
    ],
    [
      problem('join-keys-repeated', { file: 'rates.csv', key: { district: 'Beck', year: '2021' }, rows: [2, 4] }),
      '“rates.csv”: rows 2 and 4 have the same key district = Beck and year = 2021. A joined file may hold each key once.',
    ],
    [
      problem('no-cells-left', { rows: 12, reasons: { 'size-not-positive': 10, blank: 2 } }, '/data'),
      'None of the 12 rows can be used: 10 with a size not above 0 and 2 blank. Check the roles and the rules of omission.',
    ],
    [
      problem('matrix-labels', { file: 'm.csv', missing: ['Dell · 2022'], unknown: [] }),
      '“m.csv” lacks the cell “Dell · 2022”. Labels must be written as in the data, several columns joined by " · ".',
    ],
    [
      problem('dependent-columns', { coefficients: ['intercept', 'owners', 'tenants'] }, '/terms'),
      '“intercept”, “owners” and “tenants” say the same thing: each can be computed from the others. Leave one of them out.',
    ],
    [
      problem('leverage-one', { labels: ['Beck · 2020'], correction: 'HC3' }),
      '“Beck · 2020” has leverage 1: the fit goes through it whatever the value, and HC3 divides by 0 there. Choose HC0 or HC1, or leave a term out.',
    ],
    [
      problem('not-available', { what: 'serial' }, '/variance/parts/1/correlation'),
      '“serial” is valid, but this version does not fit it yet. Choose something else.',
    ],
    [
      problem('unknown-verb', { found: 'rnu', nearest: 'run' }),
      'There is no verb “rnu”. Did you mean “run”? "steelyard --help" lists them.',
    ],
    [
      problem('disk-full', { file: 'out/result.json' }),
      'The disk is full: “out/result.json” could not be written. Make room, and try again.',
    ],
  ])('%j', (trouble, text) => {
    expect(sentence(trouble)).toBe(text);
  });
});

describe('every problem that the contract lists', () => {
  const folder = join(import.meta.dirname, '../contract/files');
  const listed = ['invalid', 'tabulation'].flatMap(
    (name) => JSON.parse(readFileSync(join(folder, name, 'invalid.json'), 'utf8')) as (Problem & { file: string })[],
  );

  it.each(listed)(
    '$file has a sentence that ends, starts with a capital or a name, and holds no trace of code',
    (one) => {
      const text = sentence(one);
      expect(text).toMatch(/^[A-Z“0-9].*[.?]$/);
      expect(text).not.toMatch(/(^|[ “])undefined([ ”]|$)|NaN|\bnull\b|\[object|\$\{| {2}/);
      expect(text.length).toBeGreaterThan(20);
    },
  );

  it('names the nearest valid name wherever there is one', () => {
    const withNearest = listed.filter(({ facts }) => 'nearest' in facts && facts.nearest !== null);
    expect(withNearest.length).toBeGreaterThan(8);
    for (const one of withNearest) expect(sentence(one)).toContain(`“${(one.facts as { nearest: string }).nearest}”`);
  });

  it('names every text among its facts that was found in a file', () => {
    for (const one of listed.filter(({ facts }) => 'row' in facts && 'column' in facts)) {
      const { file, column, found } = one.facts as { file: string; column: string; found: string };
      for (const part of [file, column, found]) expect(sentence(one)).toContain(part);
    }
  });
});

it('a sentence shortens what was found where it is long', () => {
  const text = sentence(problem('unknown-kind', { found: 'x'.repeat(5000), nearest: null }, ''));
  expect(text.length).toBeLessThan(200);
});

it('a code of each stage has its exit status', () => {
  const statuses = (
    ['not-json', 'not-linear', 'unknown-verb', 'trail-broken', 'disk-full', 'cancelled'] satisfies Code[]
  ).map(exitStatusOf);
  expect(statuses).toEqual([3, 4, 2, 5, 6, 130]);
});
