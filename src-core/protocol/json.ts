import type { Outcome } from './outcome';
import { done, refuse } from './outcome';

/** Objects and arrays inside one another beyond this are refused: nothing that is read here comes near it. */
const deepest = 100;

/** A text being read: `broken` is the place of the first character that cannot stand there. */
interface Reading {
  readonly text: string;
  next: number;
  depth: number;
  broken: number | null;
}

/**
 * Reads JSON, and says where it stops being JSON.
 *
 * A byte order mark at the start is dropped. Beyond the grammar of RFC 8259 these cannot stand: a key given twice in one object (in
 * Unicode normal form C), a number beyond the range of a double, half a surrogate pair, nesting deeper than 100.
 * Every key is an own property, `__proto__` included; -0 is read as 0.
 *
 * Refusal: `not-json`, with line and column from 1; columns count characters.
 */
export function readJson(text: string): Outcome<unknown> {
  const reading: Reading = { text: text.replace(/^\uFEFF+/, ''), next: 0, depth: 0, broken: null };
  const value = readValue(reading);
  skipSpace(reading);
  if (reading.next < reading.text.length) stop(reading);
  return reading.broken === null ? done(value) : refuse('not-json', placeOf(reading.text, reading.broken), '');
}

function placeOf(text: string, index: number): { line: number; column: number } {
  const lines = text.slice(0, index).split(/\r\n|\n|\r/);
  return { line: lines.length, column: [...(lines.at(-1) as string)].length + 1 };
}

function stop(reading: Reading, at = reading.next): undefined {
  reading.broken ??= at;
  return undefined;
}

function skipSpace(reading: Reading): void {
  while (/[ \t\n\r]/.test(reading.text[reading.next] ?? '')) reading.next++;
}

/** Takes a character after any space; the next one is what cannot stand there if it is another. */
function take(reading: Reading, wanted: string): boolean {
  skipSpace(reading);
  if (reading.text[reading.next] !== wanted) return false;
  reading.next++;
  return true;
}

function readValue(reading: Reading): unknown {
  skipSpace(reading);
  const first = reading.text[reading.next] ?? '';
  if (first === '{') return nested(reading, readObject);
  if (first === '[') return nested(reading, readArray);
  if (first === '"') return readString(reading);
  if (first === 't') return readWord(reading, 'true', true);
  if (first === 'f') return readWord(reading, 'false', false);
  if (first === 'n') return readWord(reading, 'null', null);
  return readNumber(reading);
}

function nested(reading: Reading, read: (reading: Reading) => unknown): unknown {
  if (++reading.depth > deepest) return stop(reading);
  reading.next++;
  const value = read(reading);
  reading.depth--;
  return value;
}

function readArray(reading: Reading): unknown {
  const items: unknown[] = [];
  if (take(reading, ']')) return items;
  while (reading.broken === null) {
    items.push(readValue(reading));
    if (reading.broken !== null) break;
    if (take(reading, ']')) return items;
    if (!take(reading, ',')) stop(reading);
  }
  return undefined;
}

function readObject(reading: Reading): unknown {
  const entries: [string, unknown][] = [];
  const taken = new Set<string>();
  if (take(reading, '}')) return {};
  while (reading.broken === null) {
    skipSpace(reading);
    const start = reading.next;
    const key = reading.text[start] === '"' ? readString(reading) : stop(reading);
    if (key === undefined) break;
    if (taken.has(key.normalize('NFC'))) return stop(reading, start);
    taken.add(key.normalize('NFC'));
    if (!take(reading, ':')) return stop(reading);
    entries.push([key, readValue(reading)]);
    if (reading.broken !== null) break;
    if (take(reading, '}')) return Object.fromEntries(entries);
    if (!take(reading, ',')) stop(reading);
  }
  return undefined;
}

function readWord<T>(reading: Reading, word: string, value: T): T | undefined {
  for (const letter of word) {
    if (reading.text[reading.next] !== letter) return stop(reading);
    reading.next++;
  }
  return value;
}

function readNumber(reading: Reading): number | undefined {
  const start = reading.next;
  const digits = (): boolean => {
    const from = reading.next;
    while (/[0-9]/.test(reading.text[reading.next] ?? '')) reading.next++;
    return reading.next > from;
  };
  const on = (mark: RegExp): boolean => mark.test(reading.text[reading.next] ?? '') && ++reading.next > 0;
  on(/-/);
  if (!on(/0/) && !digits()) return stop(reading);
  if (on(/\./) && !digits()) return stop(reading);
  if (on(/[eE]/)) {
    on(/[+-]/);
    if (!digits()) return stop(reading);
  }
  const value = Number(reading.text.slice(start, reading.next));
  if (!Number.isFinite(value)) return stop(reading, start);
  return value === 0 ? 0 : value;
}

const escapes: ReadonlyMap<string, string> = new Map([
  ['"', '"'],
  ['\\', '\\'],
  ['/', '/'],
  ['b', '\b'],
  ['f', '\f'],
  ['n', '\n'],
  ['r', '\r'],
  ['t', '\t'],
]);

function readString(reading: Reading): string | undefined {
  const pieces: string[] = [];
  const starts: number[] = [];
  reading.next++;
  for (;;) {
    const start = reading.next;
    const letter = reading.text[start];
    if (letter === undefined || letter < ' ') return stop(reading);
    reading.next++;
    if (letter === '"') break;
    const piece = letter === '\\' ? readEscape(reading) : letter;
    if (piece === undefined) return undefined;
    pieces.push(piece);
    starts.push(start);
  }
  const lone = loneSurrogate(pieces);
  return lone < 0 ? pieces.join('') : stop(reading, starts[lone] as number);
}

function readEscape(reading: Reading): string | undefined {
  const letter = reading.text[reading.next] ?? '';
  if (letter !== 'u') {
    const plain = escapes.get(letter);
    if (plain === undefined) return stop(reading);
    reading.next++;
    return plain;
  }
  reading.next++;
  const from = reading.next;
  while (reading.next < from + 4) {
    if (!/[0-9a-fA-F]/.test(reading.text[reading.next] ?? '')) return stop(reading);
    reading.next++;
  }
  return String.fromCharCode(Number.parseInt(reading.text.slice(from, reading.next), 16));
}

/** Index of the first half of a surrogate pair that lacks its other half; -1 without one. */
function loneSurrogate(units: readonly string[]): number {
  for (let i = 0; i < units.length; i++) {
    const unit = (units[i] as string).charCodeAt(0);
    if (unit < 0xd800 || unit > 0xdfff) continue;
    const after = (units[i + 1] ?? '').charCodeAt(0);
    if (unit > 0xdbff || !(after >= 0xdc00 && after <= 0xdfff)) return i;
    i++;
  }
  return -1;
}
