import type { Block } from '../protocol/document';
import type { Table } from '../protocol/page-table';
import type { Coefficient, Result } from '../protocol/result';
import { boundSentence, boundsLead } from '../words/bounds';
import { definitions } from '../words/definitions';
import { headings } from '../words/headings';
import { answeredTerms, headlineTerms } from '../words/headline';
import { boundsTable, takesTable, togetherTable } from '../words/limit-tables';
import { drawsSentence, takesSentences, togetherNote, togetherSentence } from '../words/takes';
import { heading, list, paragraph, sentences, table, valued } from './blocks';

/** The range of every coefficient over values that are known to within limits. */
export function boundsBlocks(result: Result): Block[] {
  const { bounds, fit } = result;
  if (bounds.length === 0) return [];
  const own = (term: string): Coefficient => fit.coefficients.find((one) => one.term === term) as Coefficient;
  const told = bounds.filter(({ term }) => answeredTerms(result).includes(term));
  return [
    heading(2, headings.bounds),
    ...paragraph(boundsLead(result), [definitions.bounds]),
    ...list(told.map((bound) => boundSentence(bound, own(bound.term), result))),
    ...printed(boundsTable(result)),
  ];
}

/** Errors under an unknown common correlation of the cells' sampling errors. */
export function togetherBlocks(result: Result): Block[] {
  const { commonCorrelation: rows } = result;
  if (rows.length === 0) return [];
  const told = answeredTerms(result).map((term) => togetherSentence(rows, term));
  return [
    heading(3, headings.together),
    ...paragraph(sentences(...told, togetherNote)),
    ...printed(togetherTable(result)),
  ];
}

/** What more cells, or more persons in each, would buy. */
export function takesBlocks(result: Result): Block[] {
  const shown = takesTable(result);
  if (shown === null) return [];
  const terms = headlineTerms(result, 3);
  const told = (result.whatItTakes ?? []).filter(({ term }) => terms.includes(term));
  return [heading(2, headings.takes), ...list(told.map((one) => takesSentences(one, result))), ...printed(shown)];
}

/** What draws say of vanishing variances, beside the mixtures of the tests. */
export function drawsBlocks({ bootstrapTau2 }: Result): Block[] {
  return list((bootstrapTau2 ?? []).map(drawsSentence));
}

/** A table of the screens as the report sets it. */
function printed(shown: Table | null): Block[] {
  if (shown === null) return [];
  return table({ ...shown, rows: shown.rows.map((row) => row.map(({ value, text }) => valued(value, text))) });
}
