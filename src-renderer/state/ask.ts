import type { Answers, Ask, Asked } from '@core/protocol/bridge';
import type { Outcome } from '@core/protocol/outcome';

/** Asks main one question of the bridge's table. */
export function ask<Q extends Asked>(question: Q, payload: Ask<Q>): Promise<Outcome<Answers[Q]>> {
  return window.steelyard.ask(question, payload) as Promise<Outcome<Answers[Q]>>;
}
