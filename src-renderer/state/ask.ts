import type { Answers, Ask, Asked, Told } from '@core/protocol/bridge';
import type { Outcome } from '@core/protocol/outcome';

/** Asks main one question of the bridge's table. What is sent must be plain: a snapshot, never a reactive value. */
export function ask<Q extends Asked>(question: Q, payload: Ask<Q>): Promise<Outcome<Answers[Q]>> {
  return window.steelyard.ask(question, payload) as Promise<Outcome<Answers[Q]>>;
}

/** Hears what main tells of its jobs; returns a function that stops listening. */
export function listen(listener: (told: Told) => void): () => void {
  return window.steelyard.listen((told) => listener(told as Told));
}
