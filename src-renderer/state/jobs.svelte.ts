import type { Asked, Heard } from '@core/protocol/bridge';
import type { Outcome } from '@core/protocol/outcome';
import type { Result } from '@core/protocol/result';
import { SvelteMap } from 'svelte/reactivity';
import { ask } from './ask';

export interface Job {
  readonly job: number;
  /** Code of what is being done; null until the first word of it. */
  readonly step: string | null;
  /** 0 to 1. */
  readonly share: number;
}

type Progress = Extract<Heard, { kind: 'progress' }>;
type Done = Extract<Heard, { kind: 'done' }>;
type OfQuestion = Extract<Heard, { kind: 'begun' | 'ended' }>;

/** A question that is answered sooner than this, in milliseconds, is not shown as a job. */
const SOON = 400;

/** Jobs under way in main. An answer may come before the question's own: it is kept until someone asks for it. */
export class Jobs {
  readonly running = new SvelteMap<number, Job>();
  /** Questions that take their time, by name. */
  readonly asked = new SvelteMap<Asked, Job>();
  readonly #questions = new Map<number, Asked>();
  readonly #early = new Map<number, Done>();
  readonly #waiting = new Map<number, (outcome: Outcome<Result>) => void>();

  /** Takes in what main told of a job. */
  hear(told: Progress | Done | OfQuestion): void {
    const { job } = told;
    if (told.kind === 'begun') {
      this.#questions.set(job, told.question);
      setTimeout(() => {
        if (this.#questions.get(job) === told.question && this.asked.get(told.question)?.job !== job)
          this.asked.set(told.question, { job, step: told.question, share: 0 });
      }, SOON);
      return;
    }
    const question = this.#questions.get(job);
    if (told.kind === 'ended') {
      this.#questions.delete(job);
      if (question !== undefined && this.asked.get(question)?.job === job) this.asked.delete(question);
      return;
    }
    if (told.kind === 'progress') {
      if (this.running.has(job)) this.running.set(job, told);
      else if (question !== undefined && this.asked.get(question)?.job === job) this.asked.set(question, told);
      return;
    }
    this.running.delete(told.job);
    const waiting = this.#waiting.get(told.job);
    if (waiting) waiting(told.outcome);
    else this.#early.set(told.job, told);
    this.#waiting.delete(told.job);
  }

  /** Follows a job that main has begun. */
  begun(job: number): void {
    if (!this.#early.has(job)) this.running.set(job, { job, step: null, share: 0 });
  }

  /** What was told of a job that nobody followed when it was done; it is kept no longer. */
  early(job: number): Done | null {
    const told = this.#early.get(job) ?? null;
    this.#early.delete(job);
    return told;
  }

  /** The outcome of a job, however soon it came. */
  outcomeOf(job: number): Promise<Outcome<Result>> {
    const early = this.early(job);
    if (early) return Promise.resolve(early.outcome);
    this.begun(job);
    return new Promise((answer) => this.#waiting.set(job, answer));
  }

  /** Stops what is under way of a question that nobody waits for any more. */
  async cancelAsked(question: Asked): Promise<void> {
    for (const [job, its] of this.#questions) if (its === question) await this.cancel(job);
  }

  async cancel(job: number): Promise<void> {
    await ask('job.cancel', { job });
  }
}
