import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import { readPlan } from '@core/protocol/read';
import type { Cells } from '@core/table/cells';
import { prepareCells } from '@core/table/prepare-cells';
import { fromFolder, gather } from '@main/engine/inputs';
import { describe, expect, it } from 'vitest';

const files = join(import.meta.dirname, 'files');
const dataCodes = new Set([
  'file-not-found',
  'unknown-column',
  'reads-both-ways',
  'not-a-number',
  'empty-file',
  'undecodable',
  'malformed-row',
  'repeated-label',
  'join-keys-repeated',
  'name-clash',
  'count-above-size',
  'share-out-of-range',
  'transform-undefined',
  'order-repeats',
  'matrix-labels',
  'matrix-not-symmetric',
  'matrix-not-positive-definite',
  'no-cells-left',
]);

interface Refused {
  readonly file: string;
  readonly code: string;
  readonly at: string;
  readonly facts: object;
}

const refused = (JSON.parse(readFileSync(join(files, 'invalid/invalid.json'), 'utf8')) as Refused[]).filter(
  ({ code }) => dataCodes.has(code),
);

function prepared(folder: 'valid' | 'invalid', name: string): Outcome<Cells> {
  const text = readFileSync(join(files, folder, name), 'utf8');
  const plan = readPlan(text);
  if (!plan.ok) throw new Error(JSON.stringify(plan.problems));
  return prepareCells({ plan: plan.value, sources: gather(plan.value, fromFolder(join(files, folder))).sources });
}

function cellsOf(name: string): Cells {
  const cells = prepared('valid', name);
  if (!cells.ok) throw new Error(JSON.stringify(cells.problems));
  return cells.value;
}

// Outside values: test/contract/files, written beside the contract.
describe('the data stage', () => {
  it.each(refused)(
    'refuses $file with the one problem, place and facts that the contract lists',
    ({ file, code, at, facts }) => {
      expect(prepared('invalid', file)).toEqual({ ok: false, problems: [{ code, at, facts }] });
    },
  );

  it('covers every code of the data stage that the contract has a plan for', () => {
    expect(new Set(refused.map(({ code }) => code))).toEqual(dataCodes);
  });

  it('reads a byte order mark before a quoted header, delimiters and quotes in names, group points with decimal commas and footnotes', () => {
    const cells = cellsOf('percent-half-width.json');
    expect(cells.columns).toEqual([
      'Kreis; Teil',
      'Jahr',
      'Anteil, %',
      '± (90 %)',
      'Befragte',
      'Lage "See"',
      'Einkommen',
    ]);
    expect(cells.labels[1]).toBe('Au; Ost · 2020');
    expect(cells.outcome.high[1]).toBe(44);
    expect(cells.numbers('Anteil, %').texts[1]).toBe('44,0*');
    expect([...(cells.size ?? [])]).toEqual([811, 840, 315, 1204, 1310, 198, 226, 402, 433]);
    expect(cells.texts('Lage "See"')[0]).toBe('ja');
    // half-width 2,8 over the normal point of 0.95, 1.6448536269514722
    expect(cells.error?.[0]).toBeCloseTo(2.8 / 1.6448536269514722, 12);
  });

  it('keeps a region called NA, and tells each row that it leaves out with its reason', () => {
    const cells = cellsOf('percent-half-width.json');
    expect(cells.labels).toContain('NA · 2019');
    expect(cells.data.rows).toBe(15);
    expect(cells.data.used).toBe(9);
    expect(cells.data.omitted).toEqual([
      { row: 1, label: 'Au; Ost · 2018', reason: { code: 'omit-rule', column: 'Jahr', text: 'other questionnaire' } },
      { row: 5, label: 'Au; West · 2020', reason: { code: 'suppressed-confidential', column: 'Anteil, %', text: 'x' } },
      { row: 10, label: 'Öde · 2019', reason: { code: 'missing', column: 'Anteil, %', text: '-9' } },
      { row: 11, label: 'Öde · 2020', reason: { code: 'not-collected', column: 'Anteil, %', text: '..' } },
      { row: 12, label: 'Tann · 2019', reason: { code: 'omit-rule', column: 'Kreis; Teil', text: 'another frame' } },
      { row: 13, label: 'Tann · 2020', reason: { code: 'omit-rule', column: 'Kreis; Teil', text: 'another frame' } },
    ]);
  });

  it('takes keys with leading zeros as text, and lists what has no partner on either side', () => {
    const file = 'given-between-serial.fuel.csv';
    expect(cellsOf('given-between-serial.json').data.unmatched).toEqual([
      { file, side: 'ours', key: { harbour: '05', year: '2022' } },
      { file, side: 'theirs', key: { port: '5', year: '2022' } },
      { file, side: 'theirs', key: { port: '06', year: '2022' } },
    ]);
  });

  it('lags across a missing year to nothing, never to the row before', () => {
    const cells = cellsOf('given-between-serial.json');
    const left = cells.data.omitted.map(({ label, reason }) => `${label} ${reason.code} ${reason.column}`);
    expect(left).toEqual([
      '01 · 2019 missing fuel before',
      '02 · 2019 missing fuel before',
      '03 · 2019 missing fuel before',
      '03 · 2021 missing fuel before',
      '04 · 2019 missing fuel before',
      '05 · 2019 missing fuel before',
    ]);
    expect(cells.numbers('fuel before').values.high[cells.labels.indexOf('03 · 2022')]).toBe(1.4);
    expect(cells.numbers('fuel before').values.high[cells.labels.indexOf('05 · 2022')]).toBe(1.29);
  });

  it('forms derived columns over all rows', () => {
    const cells = cellsOf('given-between-serial.json');
    const g = cells.labels.indexOf('03 · 2022');
    expect(cells.numbers('crew per boat').values.high[g]).toBe(32 / 7);
    expect(cells.numbers('crew less boats').values.high[g]).toBe(25);
    expect(cells.numbers('boats, mean').values.high[g]).toBe(7);
    expect(cells.numbers('boats, within').values.high[g]).toBe(0);
    // boats of all 19 rows: 54 + 114 + 21 + 77 + 163
    expect(cells.numbers('boats, centred').values.high[g]).toBeCloseTo(7 - 429 / 19, 13);
  });

  it('forms proportions and rates from counts, extremes included', () => {
    const proportions = cellsOf('proportion-logit.json');
    expect(proportions.count).toBe(12);
    expect(proportions.outcome.high[2]).toBe(0);
    expect(proportions.outcome.high[6]).toBe(1);
    expect(proportions.texts('constructor')[0]).toBe('A');
    const rates = cellsOf('rate-log.json');
    expect(rates.outcome.high[3]).toBe(0);
    expect(rates.outcome.high[0]).toBeCloseTo((1000 * 3) / 812.5, 13);
  });

  it.each([
    ['matrix-labels.json', 8, 'Long Mere, north · spring'],
    ['minimal-per-size.json', 6, '1'],
    ['log-linear-no-intercept.json', 20, 'Dun · hill · 1'],
    ['target-two-ways-questions.json', 20, 'Ashe · 2019'],
  ])('prepares every cell of %s', (name, count, label) => {
    const cells = cellsOf(name);
    expect(cells.count).toBe(count);
    expect(cells.labels[0]).toBe(label);
    expect(cells.data.omitted).toEqual([]);
  });

  it('names every file that it read with its hash, in the order of the plan', () => {
    const { files: named } = cellsOf('given-between-serial.json').data;
    expect(named.map(({ name }) => name)).toEqual(['given-between-serial.csv', 'given-between-serial.fuel.csv']);
    for (const { sha256 } of named) expect(sha256).toMatch(/^[0-9a-f]{64}$/);
  });

  it('keeps the plan that it was given', () => {
    const plan: Plan = cellsOf('minimal-per-size.json').plan;
    expect(plan.roles.size).toBe('pickers');
  });
});
