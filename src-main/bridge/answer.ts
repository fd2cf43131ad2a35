import { type Answers, type Ask, type Asked, readAsk } from '@core/protocol/bridge';
import { type Outcome, refuse } from '@core/protocol/outcome';

export type Handlers = { readonly [Q in Asked]: (ask: Ask<Q>) => Promise<Outcome<Answers[Q]>> };

/** The handlers of some questions. */
export type HandlersOf<Q extends Asked> = Pick<Handlers, Q>;

/**
 * The one door of the window: who asks is checked, what is asked is parsed, what goes back is always an outcome.
 *
 * own: origin of the program's page. Refuses another origin (`stranger`), an unknown question (`unknown-kind`) and a payload of another
 * shape (`wrong-type`); a bug in a handler comes back as `fault-of-ours`.
 */
export function answering(own: string, handlers: Handlers) {
  return async (origin: string, question: string, payload: unknown): Promise<Outcome<Answers[Asked]>> => {
    if (origin !== own) return refuse('stranger', { origin });
    try {
      const asked = readAsk(question, payload);
      if (!asked.ok) return asked;
      // Question and payload are a pair by `readAsk`; TypeScript cannot follow it through the table.
      const handler = handlers[asked.value.question] as (ask: unknown) => Promise<Outcome<Answers[Asked]>>;
      return await handler(asked.value.payload);
    } catch (fault) {
      return refuse('fault-of-ours', { message: fault instanceof Error ? fault.message : String(fault) });
    }
  };
}
