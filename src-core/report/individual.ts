import type { Block } from '../protocol/document';
import type { Result } from '../protocol/result';
import { individualSentences, individualTable, individualWords } from '../words/individual';
import { heading, paragraph, sentences, table } from './blocks';

/** What least squares on the respondents themselves would give, beside the fit of the cells; nothing without deviations inside cells. */
export function individualBlocks(result: Result): Block[] {
  const told = individualSentences(result);
  if (told.length === 0) return [];
  const shown = individualTable(result);
  return [heading(3, individualWords.heading), ...paragraph(sentences(...told)), ...(shown ? table(shown) : [])];
}
