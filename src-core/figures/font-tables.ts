/** The tables of a TrueType font by their four letters. */
export type FontTables = ReadonlyMap<string, Uint8Array<ArrayBuffer>>;

/** A table to be read or written, its numbers with the high byte first. */
export function viewOf(bytes: Uint8Array<ArrayBuffer>): DataView<ArrayBuffer> {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

/** Reads the directory of a font file. A table that is lacking is a bug of the caller's choice of font. */
export function tablesOf(font: Uint8Array<ArrayBuffer>): FontTables {
  const view = viewOf(font);
  const tables = new Map<string, Uint8Array<ArrayBuffer>>();
  for (let i = 0; i < view.getUint16(4); i++) {
    const entry = 12 + 16 * i;
    const tag = [0, 1, 2, 3].map((k) => String.fromCharCode(view.getUint8(entry + k))).join('');
    const from = view.getUint32(entry + 8);
    tables.set(tag, font.subarray(from, from + view.getUint32(entry + 12)));
  }
  return tables;
}

/** One table, which the font must have. */
export function tableIn(tables: FontTables, tag: string): Uint8Array<ArrayBuffer> {
  const table = tables.get(tag);
  if (table === undefined) throw new RangeError(`the font has no table ${tag}`);
  return table;
}

/** Writes a font file of tables: directory, checksums, each table on a multiple of four bytes. */
export function fontOf(tables: FontTables): Uint8Array<ArrayBuffer> {
  const entries = [...tables].sort(([a], [b]) => (a < b ? -1 : 1));
  const start = 12 + 16 * entries.length;
  const font = new Uint8Array(entries.reduce((sum, [, { length }]) => sum + padded(length), start));
  const view = viewOf(font);
  let power = 1;
  let selector = 0;
  for (; power * 2 <= entries.length; power *= 2) selector++;
  view.setUint32(0, 0x00010000);
  view.setUint16(4, entries.length);
  view.setUint16(6, 16 * power);
  view.setUint16(8, selector);
  view.setUint16(10, 16 * (entries.length - power));
  let at = start;
  for (const [i, [tag, table]] of entries.entries()) {
    font.set(table, at);
    if (tag === 'head') view.setUint32(at + 8, 0);
    for (let k = 0; k < 4; k++) view.setUint8(12 + 16 * i + k, tag.charCodeAt(k));
    view.setUint32(12 + 16 * i + 4, sumOf(view, at, padded(table.length)));
    view.setUint32(12 + 16 * i + 8, at);
    view.setUint32(12 + 16 * i + 12, table.length);
    at += padded(table.length);
  }
  const head = entries.findIndex(([tag]) => tag === 'head');
  if (head >= 0) view.setUint32(view.getUint32(12 + 16 * head + 8) + 8, 0xb1b0afba - sumOf(view, 0, font.length));
  return font;
}

export function padded(length: number): number {
  return (length + 3) & ~3;
}

/** The sum of the words of a stretch, as the format adds them: what runs over 32 bits is lost. */
function sumOf(view: DataView, from: number, length: number): number {
  let sum = 0;
  for (let at = from; at < from + length; at += 4) sum = (sum + view.getUint32(at)) >>> 0;
  return sum;
}
