import {
  type Answers,
  type Ask,
  type Asked,
  type Heard,
  heardOf,
  type LatestFit,
  readLatest,
  type Told,
} from '@core/protocol/bridge';
import { done, type Outcome } from '@core/protocol/outcome';

/** Asks main one question of the bridge's table. What is sent must be plain: a snapshot, never a reactive value. */
export function ask<Q extends Asked>(question: Q, payload: Ask<Q>): Promise<Outcome<Answers[Q]>> {
  return window.steelyard.ask(question, payload) as Promise<Outcome<Answers[Q]>>;
}

/** Hears what main tells of its jobs; returns a function that stops listening. */
export function listen(listener: (heard: Heard) => void): () => void {
  return window.steelyard.listen((told) => listener(heardOf(told as Told)));
}

/** The latest fit of a plan, and the one before it. */
export async function latestFit(planId: number): Promise<Outcome<LatestFit>> {
  const latest = await ask('fit.latest', { planId });
  return latest.ok ? done(readLatest(latest.value)) : latest;
}
