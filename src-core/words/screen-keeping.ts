import type { Cell, Table } from '../protocol/page-table';
import { count } from './numbers';

/** How tables leave the program: as text, as HTML, as CSV. */
export const keepingTexts = {
  copy: 'Copy',
  save: 'Save as CSV',
  copied: 'Copied',
  saved: 'Saved',
  more: 'Show more rows',
} as const;

/** How many rows of a long table are shown. */
export function shownText(shown: number, all: number): string {
  return `${count(shown)} of ${count(all)} rows`;
}

/** A table as tab-separated text, as it is shown: for pasting. */
export function tableAsText({ head, rows }: Table): string {
  const flat = (text: string): string => text.replace(/[\t\r\n]+/g, ' ');
  const lines = [head.map((one) => flat(one.text)), ...rows.map((row) => row.map((cell) => flat(cell.text)))];
  return lines.map((line) => line.join('\t')).join('\n');
}

/** The same as HTML, for programs that paste tables. */
export function tableAsHtml({ caption, head, rows }: Table): string {
  const heads = head.map(({ text, align }) => `<th align="${align}">${escaped(text)}</th>`).join('');
  const body = rows.map((row) => {
    const cells = row.map(({ text }, c) => `<td align="${head[c]?.align ?? 'left'}">${escaped(text)}</td>`).join('');
    return `<tr>${cells}</tr>`;
  });
  return `<table><caption>${escaped(caption)}</caption><thead><tr>${heads}</tr></thead><tbody>${body.join('')}</tbody></table>`;
}

/** The same as CSV: values, not the texts shown. Texts that a spreadsheet would take for a formula get an apostrophe; numbers never. */
export function tableAsCsv({ head, rows }: Table): string {
  const lines = [head.map(({ text }) => field(text)), ...rows.map((row) => row.map(cellField))];
  return `${lines.map((line) => line.join(',')).join('\n')}\n`;
}

function cellField({ value, text }: Cell): string {
  if (typeof value === 'number') return String(value);
  if (value === null && !/[\p{L}\p{N}]/u.test(text)) return '';
  return field(typeof value === 'string' ? value : text);
}

function field(text: string): string {
  const guarded = /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
  return /[",\r\n]/.test(guarded) ? `"${guarded.replaceAll('"', '""')}"` : guarded;
}

function escaped(text: string): string {
  return text.replace(/[&<>"]/g, (mark) => ({ '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' })[mark] as string);
}

/** A file name from a caption: letters and digits, the rest as dashes. */
export function fileNameOf(caption: string, ending: string): string {
  const name = caption
    .normalize('NFC')
    .replace(/[^\p{L}\p{N}]+/gu, '-')
    .replace(/^-+|-+$/g, '')
    .slice(0, 60);
  return `${name === '' ? 'table' : name}.${ending}`;
}
