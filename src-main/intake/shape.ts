import type { Split } from './split';

/** A table that is a rectangle: its columns; or the first record that is not as long as the header. */
export type Shape =
  | { readonly columns: readonly { readonly name: string; readonly texts: readonly string[] }[] }
  | { readonly row: number; readonly found: number | null; readonly expected: number };

/**
 * Makes columns of records.
 *
 * Empty fields beyond the header are dropped, and so are columns with neither name nor content; a nameless column with content is "column N".
 * Told instead: the first record with fewer fields than the header, content beyond it, or unsound quotes (found null).
 *
 * Example: the header [a, , ] over [1, , 2] gives the columns a and "column 3".
 */
export function shapeOf({ header, records, quote }: Split): Shape {
  const width = widthOf(header, records);
  const wrong = records.findIndex((record) => record.length < width || record.slice(header.length).some(hasContent));
  if (wrong >= 0) return { row: wrong + 1, found: records[wrong]?.length ?? 0, expected: width };
  if (quote) return { row: quote.row, found: null, expected: quote.row === 0 ? header.length + 1 : width };
  const columns = header.slice(0, width).map((name, c) => ({
    name: hasContent(name) ? name : `column ${c + 1}`,
    named: hasContent(name),
    texts: records.map((record) => record[c] as string),
  }));
  return {
    columns: columns
      .filter(({ named, texts }) => named || texts.some(hasContent))
      .map(({ name, texts }) => ({ name, texts })),
  };
}

/** Fields of the header, those at its end left out that have neither name nor content. */
function widthOf(header: readonly string[], records: readonly (readonly string[])[]): number {
  let width = header.length;
  while (width > 0 && !hasContent(header[width - 1]) && !records.some((record) => hasContent(record[width - 1])))
    width--;
  return width;
}

function hasContent(text: string | undefined): boolean {
  return text !== undefined && text.trim() !== '';
}
