import type { Read, Status } from '../protocol/plan';
import { trimmed } from './number-text';

/** What a plan declares about the texts of one column, besides how its numbers are written. */
export interface Declarations {
  readonly statuses: ReadonlyMap<string, Status>;
  readonly missing: ReadonlySet<string>;
  /** Marks to be split off numbers, the longest first. */
  readonly footnotes: readonly string[];
  /** What may stand after a number, the longest first: footnotes (status null) and statuses. */
  readonly after: readonly { readonly mark: string; readonly status: Status | null }[];
}

/** A text as names, codes and labels are compared: in normal form C, outer spaces left out. */
export function comparable(text: string): string {
  return composed(trimmed(text));
}

/** A text in normal form C. */
export function composed(text: string): string {
  // Texts of ASCII alone are in normal form already.
  return isAscii.test(text) ? text : text.normalize('NFC');
}

const isAscii = /^[ -~]*$/;

/**
 * What a plan's `read` says of one column.
 *
 * Codes are compared as text, without outer spaces, in normal form C.
 */
export function declarationsFor(column: string, read: Read): Declarations {
  const statuses = new Map(Object.entries(read.statuses).map(([token, status]) => [comparable(token), status]));
  const name = composed(column);
  const missing = Object.entries(read.missing).flatMap(([key, codes]) => (composed(key) === name ? codes : []));
  const footnotes = read.footnotes
    .map(comparable)
    .filter((mark) => mark !== '')
    .toSorted((a, b) => b.length - a.length);
  const after = [
    ...footnotes.map((mark) => ({ mark, status: null })),
    ...[...statuses].flatMap(([mark, status]) => (mark === '' ? [] : [{ mark, status }])),
  ].toSorted((a, b) => b.mark.length - a.mark.length);
  return { statuses, missing: new Set(missing.map(comparable)), footnotes, after };
}

/** A text with its marks taken off; status: the declared status that stood last after the number, if any. */
export interface Bare {
  readonly text: string;
  readonly status: Status | null;
}

/**
 * Takes marks off a text, the longest first, until what is left reads as a number; null where nothing does.
 *
 * Footnotes may stand before and after, statuses after, several of them, spaces between. The text itself comes first, so that a mark of digits
 * never eats digits of a number; a status that begins like a number needs a space before it.
 *
 * Example: with the footnote "*" and the status "p", "12.5 p*" becomes "12.5" with the status of "p".
 */
export function withoutMarks(text: string, declared: Declarations, reads: (text: string) => boolean): Bare | null {
  let bare = trimmed(text);
  let status: Status | null = null;
  while (bare !== '') {
    if (reads(bare)) return { text: bare, status };
    const mark = markOf(bare, declared);
    if (mark === null) return null;
    status ??= mark.status;
    bare = trimmed(mark.rest);
  }
  return null;
}

function markOf(bare: string, declared: Declarations): { rest: string; status: Status | null } | null {
  for (const { mark, status } of declared.after) {
    if (!bare.endsWith(mark)) continue;
    const rest = bare.slice(0, bare.length - mark.length);
    if (status === null || !beginsLikeNumber.test(mark) || endsInSpace.test(rest)) return { rest, status };
  }
  const before = declared.footnotes.find((mark) => bare.startsWith(mark));
  return before === undefined ? null : { rest: bare.slice(before.length), status: null };
}

const beginsLikeNumber = /^[+\-\u2212.,]?\d/;
const endsInSpace = /[\p{Zs}\t]$/u;

/** True where a text is set aside before numbers are read: blank, a missing code or a status. */
export function isSetAside(text: string, declared: Declarations): boolean {
  const key = comparable(text);
  return key === '' || declared.missing.has(key) || declared.statuses.has(key);
}
