import type { DataPreview, PreviewColumn } from '@core/protocol/bridge';
import type { Outcome } from '@core/protocol/outcome';
import type { Read } from '@core/protocol/plan';
import type { SourceColumn, SourceTable } from '@core/protocol/source';
import { proposeTypes } from '../intake/propose';
import type { ShelfName } from './shelf';

const FIRST_TEXTS = 100;

/** What a file holds as it is read now: its columns with what they look like; or, without a table, why there is none. */
export function previewOf(
  { name, sha256, size, read }: ShelfName & { readonly size: number; readonly read: Read },
  source: Outcome<SourceTable>,
): DataPreview {
  const head = { name, sha256, size, read };
  if (!source.ok) return { ...head, found: null, rows: 0, columns: [], problems: source.problems };
  const table = source.value;
  const proposals = proposeTypes(table);
  const columns = table.columns.map((column, c): PreviewColumn => {
    const { type, reason, distinct, tokens } = proposals[c] as (typeof proposals)[number];
    return {
      name: column.name,
      type,
      reason,
      distinct,
      tokens,
      ...styleOf(column),
      texts: column.texts.slice(0, FIRST_TEXTS),
    };
  });
  return { ...head, found: table.found, rows: table.rows, columns, problems: [] };
}

function styleOf({ style }: SourceColumn): Pick<PreviewColumn, 'decimal' | 'group' | 'readsBothWays'> {
  if ('settle' in style) return { decimal: null, group: null, readsBothWays: true };
  return { decimal: style.decimal, group: style.group, readsBothWays: false };
}
