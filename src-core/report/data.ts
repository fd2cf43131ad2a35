import type { Block } from '../protocol/document';
import type { Result } from '../protocol/result';
import {
  omissionText,
  roleLines,
  rowsSentence,
  sizesSentence,
  sourceSentence,
  stepLines,
  unmatchedLead,
  unmatchedText,
} from '../words/data';
import { captions, headings, heads } from '../words/headings';
import { omittedMore } from '../words/remarks';
import { heading, left, list, num, paragraph, right, sentences, table, valued, words } from './blocks';

/** In the body so many rows left out are named, the rest in an appendix. */
const NAMED = 12;
const MOST = 200;
const MOST_KEYS = 12;

/** What the data are: source, files with their hashes, rows in, used and left out with the reason, roles. */
export function dataBlocks(result: Result): Block[] {
  const { data, plan } = result;
  return [
    heading(2, headings.data),
    ...paragraph(sentences(sourceSentence(plan), rowsSentence(data))),
    ...paragraph(sizesSentence(result)),
    ...steps(stepLines(plan)),
    ...table({
      caption: captions.roles,
      head: [left(heads.role), left(heads.column, 2), left(heads.says, 3)],
      rows: roleLines(plan).map(({ role, column, says }) => [words(role), words(column), words(says)]),
    }),
    ...omitted(result, NAMED),
    ...unmatched(result),
    ...table({
      caption: captions.files,
      head: [left(heads.file), left(heads.hash, 3)],
      rows: data.files.map(({ name, sha256 }) => [words(name), valued(sha256, sha256)]),
    }),
  ];
}

/** One step is a sentence, several are a list. */
function steps(lines: readonly string[]): Block[] {
  return lines.length === 1 ? paragraph(lines[0] as string) : list(lines);
}

function omitted({ data }: Result, most: number): Block[] {
  const shown = data.omitted.length <= most ? data.omitted : [];
  return omittedTable(shown, null);
}

function omittedTable(rows: Result['data']['omitted'], note: string | null): Block[] {
  return table({
    caption: captions.omitted,
    head: [right(heads.row), left(heads.cell, 2), left(heads.why, 3)],
    rows: rows.map((one) => [num(one.row, { decimals: 0 }), words(one.label), words(omissionText(one))]),
    ...(note === null ? {} : { note }),
  });
}

function unmatched({ data }: Result): Block[] {
  const told = data.unmatched.slice(0, MOST_KEYS).map(unmatchedText);
  const left = data.unmatched.length - told.length;
  if (told.length === 0) return [];
  return [...paragraph(unmatchedLead), ...list(left > 0 ? [...told, omittedMore(left)] : told)];
}

/** Rows left out, where the data section has no room for their names. */
export function omittedAppendix({ data }: Result): Block[] {
  if (data.omitted.length <= NAMED) return [];
  const rest = data.omitted.length - MOST;
  return [
    heading(2, headings.appendixOmitted),
    ...omittedTable(data.omitted.slice(0, MOST), rest > 0 ? omittedMore(rest) : null),
  ];
}
