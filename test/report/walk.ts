import type { Block, Cell, ReportDocument } from '@core/protocol/document';

/** Every text of a document that is printed, with the place where it stands. */
export function textsOf(document: ReportDocument): string[] {
  const found: string[] = [];
  const walk = (value: unknown): void => {
    if (typeof value === 'string') found.push(value);
    else if (Array.isArray(value)) value.forEach(walk);
    else if (value !== null && typeof value === 'object') Object.values(value).forEach(walk);
  };
  walk(document);
  return found;
}

/** Everything in a value that no plain data may hold: functions, missing values, numbers that are none. */
export function faultsOf(value: unknown, at = ''): string[] {
  if (typeof value === 'function' || value === undefined) return [`${at}: ${typeof value}`];
  if (typeof value === 'number') return Number.isFinite(value) ? [] : [`${at}: ${value}`];
  if (typeof value === 'string')
    return /NaN|\bundefined \d|\bnull\b|Infinity|\[object/.test(value) ? [`${at}: ${value}`] : [];
  if (Array.isArray(value)) return value.flatMap((one, i) => faultsOf(one, `${at}/${i}`));
  if (value !== null && typeof value === 'object')
    return Object.entries(value).flatMap(([key, one]) => faultsOf(one, `${at}/${key}`));
  return [];
}

export function headingsOf({ blocks }: ReportDocument): string[] {
  return blocks.flatMap((block) => (block.kind === 'heading' ? [block.text] : []));
}

/** The rows of the table with a caption, by the texts of their cells. */
export function tableOf({ blocks }: ReportDocument, caption: string | RegExp): readonly (readonly Cell[])[] {
  const found = blocks.find(
    (block): block is Extract<Block, { kind: 'table' }> =>
      block.kind === 'table' &&
      (typeof caption === 'string' ? block.table.caption === caption : caption.test(block.table.caption)),
  );
  if (found === undefined) throw new Error(`no table ${caption}`);
  return found.table.rows;
}

/** What a document says in sentences, no-break spaces as plain ones. */
export function proseOf({ blocks }: ReportDocument): string {
  return blocks
    .flatMap((block) => {
      if (block.kind === 'paragraph' || block.kind === 'caution') return [block.text];
      return block.kind === 'list' ? block.items : [];
    })
    .join('\n')
    .replaceAll('\u00a0', ' ');
}
