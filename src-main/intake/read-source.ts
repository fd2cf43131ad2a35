import { createHash } from 'node:crypto';
import { type Declarations, declarationsFor } from '@core/index';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { Read } from '@core/protocol/plan';
import type { SourceTable } from '@core/protocol/source';
import { possibleStyles, stylesOf } from './conventions';
import { byteOffset, type Decoded, decode } from './decode';
import { findDelimiter } from './delimiter';
import { shapeOf } from './shape';
import { type Split, split } from './split';

/** A file to be read. at: pointer to the place of the plan that names it. */
export interface FileToRead {
  readonly file: string;
  readonly bytes: Uint8Array;
  readonly read: Read;
  readonly at?: string;
}

type Text = Extract<Decoded, { text: string }>;

/**
 * Reads a table from the bytes of a delimited file: texts as they stand, column by column, and how each column writes its numbers.
 *
 * Nothing is taken as missing here, and no number is made: statuses, missing codes and footnotes only stand aside while styles are judged.
 * Refuses bytes that are not of the encoding and U+0000 (`undecodable`), a file without a header (`empty-file`), records of the wrong length and
 * unsound quotes (`malformed-row`), a group mark that is the delimiter (`not-together`), a tie of delimiters (`reads-both-ways`).
 * A column that reads both ways is no refusal yet: it matters only where the plan needs its numbers.
 *
 * Example: the bytes of "a;b\n1,5;x\n" give the columns a (decimal comma) and b.
 */
export function readSource(file: FileToRead): Outcome<SourceTable> {
  const at = file.at ?? '';
  const decoded = decode(file.bytes, file.read.encoding);
  if (!('text' in decoded)) {
    return refuse('undecodable', { file: file.file, encoding: decoded.encoding, offset: decoded.offset }, at);
  }
  const { text, separator } = withoutSeparatorLine(decoded.text);
  const found = delimiterOf(file, text, separator);
  if (!found.ok) return found;
  const table = split(text, found.value);
  if (table.header.length === 0 && !table.quote) return refuse('empty-file', { file: file.file }, at);
  if (table.nul) return refuseNul(file, decoded, table);
  return tableOf(file, table, { encoding: decoded.encoding, delimiter: found.value });
}

const separatorLine = /^(?:[ \t]*(?:\r\n|\r|\n))*"?sep=([^"\d+\-\u2212\r\n])"?[ \t,;|]*(?:\r\n|\r|\n|$)/i;

/** A line "sep=X" above the header, taken off. */
function withoutSeparatorLine(text: string): { text: string; separator: string | null } {
  const line = separatorLine.exec(text);
  return line ? { text: text.slice(line[0].length), separator: line[1] ?? null } : { text, separator: null };
}

function delimiterOf({ file, read, at = '' }: FileToRead, text: string, separator: string | null): Outcome<string> {
  const stated = read.delimiter ?? separator;
  const found = stated === null ? findDelimiter(text, read, declaredForAll(read)) : { delimiter: stated };
  if ('tie' in found) return refuse('reads-both-ways', { file, ...found.tie, settle: 'delimiter' }, at);
  if (found.delimiter !== read.group) return done(found.delimiter);
  return refuse('not-together', { keys: ['delimiter', 'group'] }, at.replace(/\/file$/, '/read'));
}

/** Every missing code set aside in every column: enough to judge delimiters by. */
function declaredForAll(read: Read): Declarations {
  return declarationsFor('', { ...read, missing: { '': Object.values(read.missing).flat() } });
}

function refuseNul({ file, at = '' }: FileToRead, decoded: Text, table: Split): Outcome<never> {
  const { row, field } = table.nul as NonNullable<Split['nul']>;
  const facts = {
    file,
    encoding: decoded.encoding,
    offset: byteOffset(decoded, decoded.text.indexOf('\0')),
    row,
    column: row === 0 ? `column ${field + 1}` : table.header[field] || `column ${field + 1}`,
  };
  return refuse('undecodable', facts, at);
}

function tableOf(file: FileToRead, table: Split, found: SourceTable['found']): Outcome<SourceTable> {
  const shape = shapeOf(table);
  if ('row' in shape) return refuse('malformed-row', { file: file.file, ...shape }, file.at ?? '');
  const declared = shape.columns.map(({ name, texts }) => ({ texts, declared: declarationsFor(name, file.read) }));
  const styles = stylesOf(declared, possibleStyles(file.read, found.delimiter));
  return done({
    file: file.file,
    sha256: createHash('sha256').update(file.bytes).digest('hex'),
    found,
    rows: table.records.length,
    columns: shape.columns.map((column, c) => ({ ...column, style: styles[c] as (typeof styles)[number] })),
  });
}
