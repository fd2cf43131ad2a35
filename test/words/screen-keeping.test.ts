import type { Table } from '@core/protocol/page-table';
import { fileNameOf, tableAsCsv, tableAsHtml, tableAsText } from '@core/words/screen-keeping';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';

const cell = (value: number | string | null, text: string) => ({ value, text });
const table: Table = {
  caption: 'A <b>table</b>',
  head: [
    { text: 'cell', align: 'left' },
    { text: '=sum', align: 'right' },
  ],
  rows: [
    [cell('=1+1', '=1+1'), cell(-1234.5678, '−1235')],
    [cell('a, "b"', 'a, "b"'), cell(null, '–')],
    [cell('<script>alert(1)</script>', '<script>alert(1)</script>'), cell(0.1, '0.1')],
  ],
};

describe('a table that leaves the program', () => {
  it('is CSV of values, texts guarded against formulas and numbers never, undefined ones empty', () => {
    const { data } = Papa.parse<string[]>(tableAsCsv(table).trimEnd());
    expect(data).toEqual([
      ['cell', "'=sum"],
      ["'=1+1", '-1234.5678'],
      ['a, "b"', ''],
      ['<script>alert(1)</script>', '0.1'],
    ]);
  });

  it('is text as it is shown, one row a line', () => {
    expect(tableAsText(table).split('\n')[1]).toBe('=1+1\t−1235');
  });

  it('is HTML in which no text of the data is markup', () => {
    const html = tableAsHtml(table);
    expect(html).not.toContain('<script>');
    expect(html).not.toContain('<b>');
    expect(html).toContain('&lt;script&gt;alert(1)&lt;/script&gt;');
  });

  it('has a file name without what file systems forbid', () => {
    expect(fileNameOf('Rows: left out / by rule?', 'csv')).toBe('Rows-left-out-by-rule.csv');
    expect(fileNameOf('…', 'svg')).toBe('table.svg');
  });
});
