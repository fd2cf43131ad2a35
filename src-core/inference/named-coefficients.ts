import type { Design } from '../model/design';
import { nearestName, sameName } from '../protocol/nearest';
import { problem } from '../protocol/outcome';
import type { Plan } from '../protocol/plan';
import { below } from '../protocol/pointer';
import type { Problem } from '../protocol/problems';
import { termName } from '../protocol/term-names';

/** What names in questions refer to. */
export interface Named {
  readonly design: Pick<Design, 'names' | 'termOf'>;
  readonly plan: Pick<Plan, 'terms' | 'questions'>;
}

/** The coefficient of a name, by index into the design; -1 where there is none. */
export function columnNamed(name: string, { design }: Pick<Named, 'design'>): number {
  return design.names.findIndex((own) => sameName(own, name));
}

/**
 * The columns that a name stands for: a coefficient's own, or all columns of the term of that name. Products are terms of their own.
 *
 * Indices into the design, none where the name is unknown.
 *
 * Example: `region` stands for `region: South` and `region: West`.
 */
export function columnsNamed(name: string, named: Named): readonly number[] {
  const { design, plan } = named;
  const own = columnNamed(name, named);
  if (own >= 0) return [own];
  const term = plan.terms.findIndex((each) => sameName(termName(each), name));
  return term < 0 ? [] : [...design.termOf.keys()].filter((j) => design.termOf[j] === term);
}

/**
 * The names in one question that are no coefficient (and, in a joint question, no term either), each with the nearest that is.
 *
 * index: of the question in the plan. Problems `unknown-coefficient`, each at the place of the name.
 */
export function checkNames(index: number, named: Named): Problem[] {
  const { design, plan } = named;
  const question = plan.questions[index];
  if (question?.kind === 'combination')
    return Object.keys(question.of)
      .filter((name) => columnNamed(name, named) < 0)
      .map((name) => unknown(name, design.names, below('/questions', index, 'of', name)));
  if (question?.kind !== 'joint') return [];
  const names = [...new Set([...design.names, ...plan.terms.map(termName)])];
  return question.terms.flatMap((name, j) =>
    columnsNamed(name, named).length > 0 ? [] : [unknown(name, names, below('/questions', index, 'terms', j))],
  );
}

function unknown(found: string, names: readonly string[], at: string): Problem {
  return problem('unknown-coefficient', { found, nearest: nearestName(found, names) }, at);
}
