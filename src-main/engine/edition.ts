import { type EditionFacts, reportOf } from '@core/index';
import type { Result } from '@core/protocol/result';
import { printReport } from '../print/print-report';

/** The date that stands in a report which belongs to no edition. */
const UNDATED = '2000-01-01T00:00:00Z';

/** A result as the one text that is written, stored and hashed. */
export function textOfResult(result: Result): string {
  return `${JSON.stringify(result, null, 1)}\n`;
}

/** The printed report of a result; edition: what is known of the edition that it belongs to, null for none. */
export function printedReport(result: Result, edition: EditionFacts | null): Promise<Uint8Array> {
  return printReport(reportOf({ result, edition }), {
    date: edition?.time ?? UNDATED,
    version: result.made.version,
  });
}
