import { split } from '@main/intake/split';
import fc from 'fast-check';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';

const field = fc.string({ unit: fc.constantFrom('a', '1', ' ', ',', ';', '"', '\n', '\r', 'é', '\\'), maxLength: 6 });
/** A record of empty fields alone is none, quoted or not. */
const record = fc.array(field, { minLength: 2, maxLength: 4 }).filter((fields) => fields.some((f) => f.trim() !== ''));
const rows = fc.array(record, { minLength: 1, maxLength: 8 });

describe('splitting', () => {
  it('gives back what another writer quoted', () => {
    fc.assert(
      fc.property(
        rows,
        fc.constantFrom(',', ';', '\t', '|'),
        fc.constantFrom('\n', '\r', '\r\n'),
        (table, delimiter, newline) => {
          const text = Papa.unparse(table, { delimiter, newline, quotes: true });
          const { header, records, quote } = split(text, delimiter);
          expect(quote).toBeNull();
          expect([header, ...records]).toEqual(table);
        },
      ),
    );
  });

  it('leaves alone what has no quotes and no line ends', () => {
    const simple = fc.array(
      fc.array(
        fc
          .string({ unit: fc.constantFrom('a', '1', '.', ' ', 'é'), minLength: 1, maxLength: 6 })
          .filter((t) => t.trim() !== ''),
        { minLength: 2, maxLength: 4 },
      ),
      { minLength: 1, maxLength: 8 },
    );
    fc.assert(
      fc.property(simple, (table) => {
        const text = Papa.unparse(table, { delimiter: ',', newline: '\n' });
        const { header, records } = split(text, ',');
        expect([header, ...records]).toEqual(table);
      }),
    );
  });

  it('never throws and never loses a plain line, whatever the bytes', () => {
    fc.assert(
      fc.property(fc.string({ unit: fc.constantFrom('a', ',', '"', '\n', '\r', ' ', '\0'), maxLength: 40 }), (text) => {
        const { header, records, quote } = split(text, ',');
        const lines = text.split(/\r\n|\r|\n/).filter((line) => line.replaceAll(',', '').trim() !== '');
        if (!text.includes('"')) expect((header.length > 0 ? 1 : 0) + records.length).toBe(lines.length);
        else if (quote) expect(quote.row).toBeGreaterThanOrEqual(0);
      }),
    );
  });
});
