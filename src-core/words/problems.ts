import type { Code, Problem } from '../protocol/problems';
import type { Sentences } from './phrases';
import { dataSentences } from './problems-of-data';
import { fitSentences } from './problems-of-fit';
import { formSentences } from './problems-of-form';
import { machineSentences } from './problems-of-machine';

/** A new code does not compile until it has its sentence. */
const sentences: Sentences<Code> = { ...formSentences, ...dataSentences, ...fitSentences, ...machineSentences };

/**
 * What happened, to which thing, what to do next; with the nearest name where there is one.
 * A place in the plan (`at`) is shown beside the sentence, not in it.
 */
export function sentence(problem: Problem): string {
  // The table pairs each code with its facts; TypeScript cannot follow that through the union.
  const say = sentences[problem.code] as (facts: Problem['facts'], at: string | null) => string;
  return say(problem.facts, problem.at);
}
