import type { Told } from '@core/protocol/bridge';
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

type Progress = Extract<Told, { kind: 'progress' }>;
type Done = Extract<Told, { kind: 'done' }>;

/** Jobs under way in main. An answer may come before the question's own: it is kept until someone asks for it. */
export class Jobs {
  readonly running = new SvelteMap<number, Job>();
  readonly #early = new Map<number, Outcome<Result>>();
  readonly #waiting = new Map<number, (outcome: Outcome<Result>) => void>();

  /** Takes in what main told of a job. */
  hear(told: Progress | Done): void {
    if (told.kind === 'progress') {
      if (this.running.has(told.job)) this.running.set(told.job, told);
      return;
    }
    this.running.delete(told.job);
    const waiting = this.#waiting.get(told.job);
    if (waiting) waiting(told.outcome);
    else this.#early.set(told.job, told.outcome);
    this.#waiting.delete(told.job);
  }

  /** Follows a job that main has begun. */
  begun(job: number): void {
    if (!this.#early.has(job)) this.running.set(job, { job, step: null, share: 0 });
  }

  /** The outcome of a job, however soon it came. */
  outcomeOf(job: number): Promise<Outcome<Result>> {
    const early = this.#early.get(job);
    this.#early.delete(job);
    if (early) return Promise.resolve(early);
    this.begun(job);
    return new Promise((answer) => this.#waiting.set(job, answer));
  }

  async cancel(job: number): Promise<void> {
    await ask('job.cancel', { job });
  }
}
