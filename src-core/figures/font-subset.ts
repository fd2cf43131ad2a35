import { type FontTables, fontOf, padded, tableIn, tablesOf, viewOf } from './font-tables';

/**
 * A TrueType font with the glyphs of a text alone, for a figure that carries its letters with it: advances, outlines and hints as they were.
 *
 * font: a file with outlines in `glyf` and a character map of format 4. Characters that it lacks, or that lie beyond the first 65,536, are left to
 * another face. Kerning and ligatures are left out: figures are set without them.
 *
 * Source: ISO/IEC 14496-22 (Open Font Format), tables cmap, glyf, head, hhea, hmtx, loca, maxp, name, post.
 */
export function fontSubset(font: Uint8Array<ArrayBuffer>, text: string): Uint8Array<ArrayBuffer> {
  const tables = tablesOf(font);
  const found = glyphsOf(tables, text);
  const glyphs = closedOver(tables, [0, ...found.values()]);
  const place = new Map(glyphs.map((glyph, i) => [glyph, i]));
  const { glyf, loca } = outlines(tables, glyphs, place);
  const kept = ['cvt ', 'fpgm', 'prep', 'OS/2'].filter((tag) => tables.has(tag));
  const map = [...found].map(([point, glyph]) => [point, place.get(glyph) as number] as const);
  return fontOf(
    new Map([
      ...kept.map((tag) => [tag, tableIn(tables, tag)] as const),
      ['glyf', glyf],
      ['loca', loca],
      ['cmap', characterMap(map)],
      ['hmtx', advances(tables, glyphs)],
      ['hhea', changed(tables, 'hhea', (view) => view.setUint16(34, glyphs.length))],
      ['maxp', changed(tables, 'maxp', (view) => view.setUint16(4, glyphs.length))],
      ['head', changed(tables, 'head', (view) => view.setInt16(50, 1))],
      ['name', tableIn(tables, 'name')],
      ['post', changed(tables, 'post', (view) => view.setUint32(0, 0x00030000)).slice(0, 32)],
    ]),
  );
}

function changed(tables: FontTables, tag: string, change: (view: DataView) => void): Uint8Array<ArrayBuffer> {
  const copy = tableIn(tables, tag).slice();
  change(viewOf(copy));
  return copy;
}

/** The glyph of each character of a text that the font has, in the order of the characters. */
function glyphsOf(tables: FontTables, text: string): Map<number, number> {
  const cmap = viewOf(tableIn(tables, 'cmap'));
  const starts = Array.from({ length: cmap.getUint16(2) }, (_, i) => cmap.getUint32(8 + 8 * i));
  const table = starts.find((start) => cmap.getUint16(start) === 4);
  if (table === undefined) throw new RangeError('the font has no character map of format 4');
  const points = [...new Set([...text].map((one) => one.codePointAt(0) as number))].sort((a, b) => a - b);
  return new Map(
    points.flatMap((point) => {
      const glyph = point > 0xffff ? 0 : glyphIn(cmap, table, point);
      return glyph === 0 ? [] : [[point, glyph] as const];
    }),
  );
}

function glyphIn(cmap: DataView, table: number, point: number): number {
  const doubled = cmap.getUint16(table + 6);
  for (let i = 0; i < doubled; i += 2) {
    if (point > cmap.getUint16(table + 14 + i)) continue;
    const first = cmap.getUint16(table + 16 + doubled + i);
    if (point < first) return 0;
    const delta = cmap.getUint16(table + 16 + 2 * doubled + i);
    const at = table + 16 + 3 * doubled + i;
    const offset = cmap.getUint16(at);
    if (offset === 0) return (point + delta) & 0xffff;
    const glyph = cmap.getUint16(at + offset + 2 * (point - first));
    return glyph === 0 ? 0 : (glyph + delta) & 0xffff;
  }
  return 0;
}

/** The glyphs with those that they are put together from, in order. */
function closedOver(tables: FontTables, glyphs: readonly number[]): number[] {
  const all = new Set(glyphs);
  for (const glyph of all) for (const at of componentsOf(outline(tables, glyph))) all.add(at.glyph);
  return [...all].sort((a, b) => a - b);
}

function outline(tables: FontTables, glyph: number): Uint8Array<ArrayBuffer> {
  const loca = viewOf(tableIn(tables, 'loca'));
  const long = viewOf(tableIn(tables, 'head')).getInt16(50) === 1;
  const at = (i: number): number => (long ? loca.getUint32(4 * i) : 2 * loca.getUint16(2 * i));
  return tableIn(tables, 'glyf').subarray(at(glyph), at(glyph + 1));
}

const WORDS = 0x0001;
const SCALE = 0x0008;
const MORE = 0x0020;
const SCALE_BOTH = 0x0040;
const MATRIX = 0x0080;

/** The glyphs that a composite one names, each with its place in the outline; none of a simple one. */
function componentsOf(bytes: Uint8Array<ArrayBuffer>): { glyph: number; at: number }[] {
  if (bytes.length === 0 || viewOf(bytes).getInt16(0) >= 0) return [];
  const view = viewOf(bytes);
  const found: { glyph: number; at: number }[] = [];
  for (let at = 10, more = true; more; ) {
    const flags = view.getUint16(at);
    found.push({ glyph: view.getUint16(at + 2), at: at + 2 });
    at += 4 + (flags & WORDS ? 4 : 2) + (flags & SCALE ? 2 : flags & SCALE_BOTH ? 4 : flags & MATRIX ? 8 : 0);
    more = (flags & MORE) !== 0;
  }
  return found;
}

function outlines(tables: FontTables, glyphs: readonly number[], place: ReadonlyMap<number, number>) {
  const parts = glyphs.map((glyph) => outline(tables, glyph).slice());
  for (const bytes of parts)
    for (const { glyph, at } of componentsOf(bytes)) viewOf(bytes).setUint16(at, place.get(glyph) as number);
  const glyf = new Uint8Array(parts.reduce((sum, { length }) => sum + padded(length), 0));
  const loca = new Uint8Array(4 * (parts.length + 1));
  let at = 0;
  for (const [i, bytes] of parts.entries()) {
    glyf.set(bytes, at);
    at += padded(bytes.length);
    viewOf(loca).setUint32(4 * (i + 1), at);
  }
  return { glyf, loca };
}

/** Advance and left bearing of each glyph; beyond the last advance the font repeats it. */
function advances(tables: FontTables, glyphs: readonly number[]): Uint8Array<ArrayBuffer> {
  const hmtx = viewOf(tableIn(tables, 'hmtx'));
  const count = viewOf(tableIn(tables, 'hhea')).getUint16(34);
  const bytes = new Uint8Array(4 * glyphs.length);
  const view = viewOf(bytes);
  for (const [i, glyph] of glyphs.entries()) {
    const own = glyph < count;
    view.setUint16(4 * i, hmtx.getUint16(4 * (own ? glyph : count - 1)));
    view.setInt16(4 * i + 2, hmtx.getInt16(own ? 4 * glyph + 2 : 4 * count + 2 * (glyph - count)));
  }
  return bytes;
}

/** A character map of format 4, a segment a character, closed by the one that the format asks for. */
function characterMap(map: readonly (readonly [number, number])[]): Uint8Array<ArrayBuffer> {
  const segments = [...map.filter(([point]) => point < 0xffff), [0xffff, 0] as const];
  const count = segments.length;
  const bytes = new Uint8Array(12 + 16 + 8 * count);
  const view = viewOf(bytes);
  let power = 1;
  let selector = 0;
  for (; power * 2 <= count; power *= 2) selector++;
  view.setUint16(2, 1);
  view.setUint16(4, 3);
  view.setUint16(6, 1);
  view.setUint32(8, 12);
  const fields = [4, 16 + 8 * count, 0, 2 * count, 2 * power, selector, 2 * (count - power)];
  for (const [i, field] of fields.entries()) view.setUint16(12 + 2 * i, field);
  for (const [i, [point, glyph]] of segments.entries()) {
    view.setUint16(26 + 2 * i, point);
    view.setUint16(28 + 2 * count + 2 * i, point);
    view.setUint16(28 + 4 * count + 2 * i, point === 0xffff ? 1 : (glyph - point) & 0xffff);
  }
  return bytes;
}
