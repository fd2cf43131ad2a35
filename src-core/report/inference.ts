import type { Block } from '../protocol/document';
import type { Result } from '../protocol/result';
import { inferenceSentences, wildTable } from '../words/inference';
import { paragraph, sentences, table } from './blocks';

/** How errors and p values came about, with the bootstrap's counts; nothing where the stated structure alone is behind them. */
export function inferenceBlocks(result: Result): Block[] {
  const wild = wildTable(result);
  return [...paragraph(sentences(...inferenceSentences(result))), ...(wild ? table(wild) : [])];
}
