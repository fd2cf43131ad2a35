import type { Encoding } from '@core/protocol/plan';

/** A file's text without its marks, or the first byte that is not of the encoding. */
export type Decoded =
  | { readonly text: string; readonly encoding: Encoding; readonly start: number }
  | { readonly encoding: Encoding; readonly offset: number };

/**
 * Turns bytes into text: by the encoding stated, else by byte order mark, the zero pattern of UTF-16, strict UTF-8 and Windows-1252, in this order.
 *
 * Every byte order mark at the start is dropped, and so is a final U+001A. start: where the text begins among the bytes.
 * A mark that contradicts the encoding stated is wrong at byte 0; so are odd lengths, lone surrogates and invalid sequences at their own place.
 *
 * Example: `decode(Uint8Array.of(0xef, 0xbb, 0xbf, 0x61), null)` gives "a" in utf-8.
 */
export function decode(bytes: Uint8Array, stated: Encoding | null): Decoded {
  const marked = markOf(bytes);
  if (stated !== null && marked !== null && marked !== stated) return { encoding: stated, offset: 0 };
  const known = stated ?? marked ?? zeroPatternOf(bytes);
  if (known !== null) return readAs(bytes, known);
  const strict = readAs(bytes, 'utf-8');
  return 'text' in strict ? strict : readAs(bytes, 'windows-1252');
}

/** Place among the bytes of a character of a decoded text. */
export function byteOffset(decoded: { text: string; encoding: Encoding; start: number }, index: number): number {
  const before = decoded.text.slice(0, index);
  if (decoded.encoding === 'utf-8') return decoded.start + new TextEncoder().encode(before).length;
  return decoded.start + before.length * (decoded.encoding === 'windows-1252' ? 1 : 2);
}

function markOf(bytes: Uint8Array): Encoding | null {
  if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) return 'utf-8';
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return 'utf-16le';
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return 'utf-16be';
  return null;
}

/** UTF-16 without a mark: most of one half of the byte pairs is zero, and hardly any of the other. */
function zeroPatternOf(bytes: Uint8Array): Encoding | null {
  const pairs = Math.floor(Math.min(bytes.length, 4096) / 2);
  let first = 0;
  let second = 0;
  for (let i = 0; i < pairs; i++) {
    if (bytes[2 * i] === 0) first++;
    if (bytes[2 * i + 1] === 0) second++;
  }
  if (second > 0.3 * pairs && first < 0.05 * pairs) return 'utf-16le';
  return first > 0.3 * pairs && second < 0.05 * pairs ? 'utf-16be' : null;
}

const readers = { 'utf-8': readUtf8, 'utf-16le': readUtf16, 'utf-16be': readUtf16, 'windows-1252': readWindows };

function readAs(bytes: Uint8Array, encoding: Encoding): Decoded {
  const read = readers[encoding](bytes, encoding === 'utf-16be');
  if (typeof read === 'number') return { encoding, offset: read };
  // A mark in Windows-1252 would be three letters; a file that begins with them has been refused or is UTF-8.
  const marks = /^\ufeff*/.exec(read)?.[0].length ?? 0;
  const width = encoding === 'utf-8' ? 3 : 2;
  return { text: read.slice(marks, read.endsWith('\u001a') ? -1 : undefined), encoding, start: marks * width };
}

function readUtf8(bytes: Uint8Array): string | number {
  try {
    return new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes);
  } catch {
    return firstWrongUtf8(bytes);
  }
}

/** Where the first sequence begins that is no UTF-8: overlong forms, surrogates and values above U+10FFFF included. */
function firstWrongUtf8(bytes: Uint8Array): number {
  let i = 0;
  while (i < bytes.length) {
    const length = sequenceAt(bytes, i);
    if (length === 0) return i;
    i += length;
  }
  return i;
}

/** Length of the sequence at a place, 0 where there is none. */
function sequenceAt(bytes: Uint8Array, i: number): number {
  const lead = bytes[i] as number;
  if (lead < 0x80) return 1;
  const length =
    lead >= 0xc2 && lead < 0xe0 ? 2 : lead >= 0xe0 && lead < 0xf0 ? 3 : lead >= 0xf0 && lead < 0xf5 ? 4 : 0;
  if (length === 0) return 0;
  const second = bytes[i + 1] ?? 0;
  const low = lead === 0xe0 ? 0xa0 : lead === 0xf0 ? 0x90 : 0x80;
  const high = lead === 0xed ? 0x9f : lead === 0xf4 ? 0x8f : 0xbf;
  if (second < low || second > high) return 0;
  for (let j = 2; j < length; j++) if (((bytes[i + j] ?? 0) & 0xc0) !== 0x80) return 0;
  return length;
}

function readUtf16(bytes: Uint8Array, bigEndian: boolean): string | number {
  if (bytes.length % 2 === 1) return bytes.length - 1;
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  const units = new Uint16Array(bytes.length / 2);
  for (let i = 0; i < units.length; i++) units[i] = view.getUint16(2 * i, !bigEndian);
  for (let i = 0; i < units.length; i++) {
    const unit = units[i] as number;
    if (unit < 0xd800 || unit > 0xdfff) continue;
    const next = units[i + 1] ?? 0;
    if (unit > 0xdbff || next < 0xdc00 || next > 0xdfff) return 2 * i;
    i++;
  }
  return fromUnits(units);
}

function fromUnits(units: Uint16Array): string {
  let text = '';
  for (let i = 0; i < units.length; i += 8192) text += String.fromCharCode(...units.subarray(i, i + 8192));
  return text;
}

/** What stands at 0x80 to 0x9f; a space where Windows-1252 has nothing. */
const upper =
  '\u20ac \u201a\u0192\u201e\u2026\u2020\u2021\u02c6\u2030\u0160\u2039\u0152 \u017d  \u2018\u2019\u201c\u201d\u2022\u2013\u2014\u02dc\u2122\u0161\u203a\u0153 \u017e\u0178';

function readWindows(bytes: Uint8Array): string | number {
  const wrong = bytes.findIndex((byte) => byte >= 0x80 && byte < 0xa0 && upper[byte - 0x80] === ' ');
  if (wrong >= 0) return wrong;
  const table = Uint16Array.from({ length: 256 }, (_, byte) =>
    byte >= 0x80 && byte < 0xa0 ? upper.charCodeAt(byte - 0x80) : byte,
  );
  return fromUnits(Uint16Array.from(bytes, (byte) => table[byte] as number));
}
