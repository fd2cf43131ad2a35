import type { Block, ReportDocument } from '../protocol/document';
import type { Result } from '../protocol/result';
import { footLeft, footRight, pagePattern, subtitle } from '../words/remarks';
import { rivalAppendix } from './appendices';
import { besideBlocks, breakEvenBlocks, priceBlocks, rulesBlocks, scanBlocks } from './beside';
import { cellsAppendix } from './cells';
import { cautionBlocks, checkBlocks, methodBlocks, recordBlocks, standingBlocks } from './closing';
import { coefficientBlocks, fitBlocks, robustBlocks } from './coefficients';
import { dataBlocks, omittedAppendix } from './data';
import type { EditionFacts, NoteFacts } from './edition-facts';
import { evidenceAppendix, evidenceBlocks } from './evidence';
import { individualBlocks } from './individual';
import { influenceBlocks, overturnBlocks } from './influence';
import { boundsBlocks, drawsBlocks, takesBlocks, togetherBlocks } from './limits';
import { withNotes } from './notes';
import { questionBlocks } from './questions';
import { statementBlocks } from './statement';
import { summaryBlocks } from './summary';

export type { Decision, EditionFacts, NoteFacts } from './edition-facts';

/** A section with the key of the result that it tells: a plan that leaves out the key leaves out the section. */
type Section = readonly [key: keyof Result | null, blocks: () => Block[]];

/**
 * The report of a result as plain data: page one with the answer, the variance statement as an argument, then the rest, the full batteries in appendices.
 *
 * edition: what is known of the edition that it belongs to; null for a run. notes: set under the headings that they belong to; an edition's own if left out. plan.report.omit leaves out the sections of the result's keys that it
 * names; page one and the statement stand in any case. Undefined quantities are dashes with the caution that says why.
 */
export function reportOf({
  result,
  edition,
  notes = edition?.notes ?? [],
}: {
  readonly result: Result;
  readonly edition: EditionFacts | null;
  readonly notes?: readonly NoteFacts[];
}): ReportDocument {
  const { plan, made } = result;
  const left = new Set(plan.report.omit);
  const tried = edition?.structuresTried?.count ?? 1 + result.beside.length;
  const kept = (sections: readonly Section[]): Block[] =>
    sections.flatMap(([key, blocks]) => (key !== null && left.has(key) ? [] : blocks()));
  const appendices = kept([
    ['evidence', () => evidenceAppendix(result)],
    ['beside', () => rivalAppendix(result)],
    ['cells', () => cellsAppendix(result)],
    ['data', () => omittedAppendix(result)],
  ]);
  return {
    language: 'en',
    title: footLeft(plan.title),
    subject: subtitle(result),
    author: edition?.author ?? plan.about?.analyst ?? null,
    paper: plan.report.paper,
    foot: { left: footLeft(plan.title), right: footRight(edition, made.version), pageOf: pagePattern },
    blocks: withNotes(notes, [
      ...summaryBlocks(result, edition),
      ...statementBlocks(result, tried),
      ...kept([
        ['data', () => dataBlocks(result)],
        ['fit', () => coefficientBlocks(result)],
        ['robustBeside', () => robustBlocks(result)],
        ['individualLevel', () => individualBlocks(result)],
        ['fit', () => fitBlocks(result)],
        ['questions', () => questionBlocks(result)],
        ['beside', () => besideBlocks(result)],
        ['beside', () => priceBlocks(result)],
        ['breakEven', () => breakEvenBlocks(result)],
        ['exponentScan', () => scanBlocks(result)],
        ['betweenRules', () => rulesBlocks(result)],
        ['evidence', () => evidenceBlocks(result)],
        ['bootstrapTau2', () => drawsBlocks(result)],
        ['commonCorrelation', () => togetherBlocks(result)],
        [null, () => influenceBlocks(result)],
        ['bounds', () => boundsBlocks(result)],
        ['overturn', () => overturnBlocks(result)],
        ['whatItTakes', () => takesBlocks(result)],
        ['cautions', () => cautionBlocks(result, tried)],
        [null, () => methodBlocks(result)],
        ['selfChecks', () => checkBlocks(result)],
        [null, () => recordBlocks(result, edition)],
        [null, () => standingBlocks()],
      ]),
      ...appendices,
    ]),
  };
}
