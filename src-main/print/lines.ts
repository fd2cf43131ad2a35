export type Measure = (text: string) => number;

/** One character as a reader sees it: a base with the marks that combine with it. */
export const CHARACTERS = /\P{M}\p{M}*|\p{M}+/gu;

/**
 * Where a line may end: after a space (but neither before a per cent sign nor after a relation), a hyphen or stroke between letters, a dash, a zero-width space.
 */
const PIECES = /(?<=[\p{L})\]][-/])(?=\p{L})|(?<=[—\u200b])|(?<= )(?<![=<>≤≥≈≠±∼] )(?! |%)/u;

/** Control characters have no shape: a tab or a control becomes a space, line ends stay. */
export function printable(text: string): string {
  return text.replace(/\r\n?/g, '\n').replace(/[^\P{Cc}\n]|[\u2028\u2029\ufeff]/gu, ' ');
}

/**
 * Breaks text into lines no wider than width, the space at the end of a line apart.
 *
 * A line that was broken at a space keeps one at its end, so that reading aloud and copying do not run words together. Words too wide for a line are cut between characters,
 * after punctuation where there is some, and without a hyphen, so that what is copied from the page stays what it was.
 *
 * width: in the unit of measure, above 0; rest: width of all lines but the first, width if left out. An empty text is one empty line.
 *
 * Example: `breakLines('one two', 3, (t) => t.length)` is `['one ', 'two']`.
 */
export function breakLines(text: string, width: number, measure: Measure, rest = width): string[] {
  const lines: string[] = [];
  for (const part of text.split('\n')) {
    if (lines.length > 0) lines[lines.length - 1] += ' ';
    lines.push(...breakOne(part, lines.length === 0 ? width : rest, measure, rest));
  }
  return lines;
}

function breakOne(text: string, width: number, measure: Measure, rest: number): string[] {
  if (measure(text.trimEnd()) <= width) return [text.trimEnd()];
  const lines: string[] = [];
  let line = '';
  const room = () => (lines.length === 0 ? width : rest);
  for (const piece of text.split(PIECES)) {
    if (measure((line + piece).trimEnd()) <= room()) {
      line += piece;
      continue;
    }
    if (line.trim() !== '') lines.push(line.replace(/ +$/, ' '));
    line = piece;
    while (measure(line.trimEnd()) > room()) {
      const cut = cutWord(line, room(), measure);
      lines.push(line.slice(0, cut));
      line = line.slice(cut);
    }
  }
  lines.push(line.trimEnd());
  return lines;
}

/** How much of a word goes on a line: at least one character, at most what fits. */
function cutWord(word: string, width: number, measure: Measure): number {
  let fits = 0;
  let neat = 0;
  for (const [character] of word.matchAll(CHARACTERS)) {
    const next = fits + character.length;
    if (fits > 0 && measure(word.slice(0, next)) > width) break;
    fits = next;
    if (/[-_./,;:=&?|]/.test(character)) neat = next;
  }
  return neat > 0.6 * fits && fits < word.length ? neat : fits;
}

/** The longest stretch of text that may not be broken. */
export function widestPiece(text: string, measure: Measure): number {
  let widest = 0;
  for (const piece of text.split(/\n/).flatMap((line) => line.split(PIECES)))
    widest = Math.max(widest, measure(piece.trimEnd()));
  return widest;
}
