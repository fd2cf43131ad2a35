import Papa from 'papaparse';

/** A table's fields as they stand between delimiters, quotes taken off. */
export interface Split {
  readonly header: readonly string[];
  /** Data rows, blank lines left out. */
  readonly records: readonly (readonly string[])[];
  /** A quote that never closes, or text after one that does; row from 1, 0 for the header. The records before it are whole. */
  readonly quote: { readonly row: number } | null;
  readonly nul: { readonly row: number; readonly field: number; readonly index: number } | null;
}

/**
 * Splits a text into records of fields; the first record that is not blank is the header.
 *
 * CRLF, LF and CR end a record outside quotes, mixed too. A quoted field holds line ends, delimiters and doubled quotes; a quote inside a field
 * that does not begin with one is text; a backslash escapes nothing. Lines of nothing, of spaces or of delimiters alone are no records.
 * atMost: records to read, blank ones and the header included.
 *
 * Example: `split('a,b\n"1,2",3', ',')` has the header [a, b] and one record [1,2 | 3].
 */
export function split(text: string, delimiter: string, atMost = 0): Split {
  const { data, errors } = Papa.parse<string[]>(withOneLineEnd(text, delimiter), {
    delimiter,
    newline: '\n',
    quoteChar: '"',
    preview: atMost,
  });
  const broken = errors.find(({ type }) => type === 'Quotes')?.row ?? null;
  const sound = (broken === null ? data : data.slice(0, broken)).filter(hasContent);
  const [header = broken === null ? [] : (data[broken] ?? []).slice(0, -1), ...records] = sound;
  return { header, records, quote: broken === null ? null : { row: sound.length }, nul: nulOf(text, header, records) };
}

/** Every CRLF and CR outside quoted fields as LF, which is the one line end that the splitter is told of. */
function withOneLineEnd(text: string, delimiter: string): string {
  if (!text.includes('\r')) return text;
  const start = `(?<=^|[\r\n${delimiter.replace(/[\\\]^-]/g, '\\$&')}])`;
  const quotedOrEnd = new RegExp(`${start}"(?:[^"]|"")*"|\r\n?`, 'g');
  return text.replace(quotedOrEnd, (found) => (found.startsWith('"') ? found : '\n'));
}

function hasContent(record: readonly string[]): boolean {
  return record.some((field) => field.trim() !== '');
}

/** Where U+0000 stands, if anywhere. */
function nulOf(text: string, header: readonly string[] | null, records: readonly (readonly string[])[]): Split['nul'] {
  const index = text.indexOf('\0');
  if (index < 0) return null;
  for (const [row, record] of [header ?? [], ...records].entries()) {
    const field = record.findIndex((value) => value.includes('\0'));
    if (field >= 0) return { row, field, index };
  }
  return { row: records.length + 1, field: 0, index };
}
