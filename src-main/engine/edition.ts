import { type EditionFacts, reportOf } from '@core/index';
import type { ReportDocument } from '@core/protocol/document';
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
  return printed(reportOf({ result, edition }), { result, edition });
}

/** A report's document, printed. progress: hears how much of it is set, 0 to 1. */
export function printed(
  document: ReportDocument,
  { result, edition }: { readonly result: Result; readonly edition: EditionFacts | null },
  progress: (share: number) => void = () => {},
): Promise<Uint8Array> {
  return printReport(document, { date: edition?.time ?? UNDATED, version: result.made.version }, progress);
}
