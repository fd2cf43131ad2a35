import { MOST_FIELDS, MOST_ROWS } from '@core/protocol/limits';
import { done, type Outcome, refuse } from '@core/protocol/outcome';

const LINE = 0x0a;
const marks = [',', ';', '\t', '|'].map((mark) => mark.charCodeAt(0));

/** Leading digits of a count that was made roughly. */
const roughly = (value: number) => Number(value.toPrecision(2));

/**
 * Refuses a file that would make a larger table than memory holds (`table-too-large`), by its bytes alone: lines, and the mark that parts fields most often.
 *
 * Marks and line ends inside quotes count as well, so that the count is at least as large as the table.
 */
export function checkTableSize(file: string, bytes: Uint8Array): Outcome<null> {
  const counts = new Float64Array(256);
  for (let i = 0; i < bytes.length; i++) counts[bytes[i] as number] = (counts[bytes[i] as number] as number) + 1;
  const rows = counts[LINE] as number;
  if (rows > MOST_ROWS) return refuse('table-too-large', { file, of: 'rows', found: roughly(rows), limit: MOST_ROWS });
  const fields = rows + Math.max(...marks.map((mark) => counts[mark] as number));
  if (fields <= MOST_FIELDS) return done(null);
  return refuse('table-too-large', { file, of: 'fields', found: roughly(fields), limit: MOST_FIELDS });
}
