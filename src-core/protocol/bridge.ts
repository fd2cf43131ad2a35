import * as v from 'valibot';
import { done, type Outcome, refuse } from './outcome';
import type { JsonType } from './problems';

/** Everything that a window can ask, one line a question: the payload as a schema, the answer as a type. */
const asks = {
  'demo.coefficients': v.strictObject({}),
};

export interface Answers {
  'demo.coefficients': { readonly title: string; readonly lines: readonly string[] };
}

export type Asked = keyof typeof asks & keyof Answers;
export type Ask<Q extends Asked> = v.InferOutput<(typeof asks)[Q]>;

/** A question and its payload, as they come from a page that is not trusted. */
export function readAsk(question: string, payload: unknown): Outcome<{ question: Asked; payload: Ask<Asked> }> {
  if (!Object.hasOwn(asks, question)) return refuse('unknown-kind', { found: question, nearest: null });
  const known = question as Asked;
  const parsed = v.safeParse(asks[known], payload);
  if (parsed.success) return done({ question: known, payload: parsed.output });
  const [issue] = parsed.issues;
  return refuse(
    'wrong-type',
    { found: issue.received as JsonType, expected: issue.expected ?? 'something else' },
    v.getDotPath(issue),
  );
}
