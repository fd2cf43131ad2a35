import type { Asked, Told } from '@core/protocol/bridge';
import { type Outcome, refuse } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';
import type { How } from '../engine/engine';

/** What a job ends with: an outcome, and why its result could not be kept, if so. */
export interface Ended {
  /** The result as its text. */
  readonly outcome: Outcome<string>;
  readonly unkept?: readonly Problem[];
}

/** Whatever takes long, by number: fits, of which a newer one for the same plan cancels the older, and questions. Of each is told exactly once that it is over. */
export class Jobs {
  readonly #tell: (told: Told) => void;
  readonly #running = new Map<
    number,
    { readonly of: number | null | Asked; readonly stop: AbortController; over: Promise<unknown> }
  >();
  #last = 0;

  constructor(tell: (told: Told) => void) {
    this.#tell = tell;
  }

  /** planId: null for a plan that is tried and not kept. */
  begin(planId: number | null, work: (how: Required<How>) => Promise<Ended>): number {
    this.cancelFor(planId);
    const { job, stop, how } = this.#next();
    this.#running.set(job, { of: planId, stop, over: this.#follow({ job, planId }, work(how)) });
    return job;
  }

  /** Answers a question that may take long; it is told when it begins and when it ends, and can be cancelled meanwhile. */
  async during<T>(question: Asked, work: (how: Required<How>) => Promise<Outcome<T>>): Promise<Outcome<T>> {
    const { job, stop, how } = this.#next();
    this.#tell({ kind: 'begun', job, question });
    const over = work(how);
    this.#running.set(job, { of: question, stop, over: over.catch(() => {}) });
    try {
      return await over;
    } finally {
      this.#running.delete(job);
      this.#tell({ kind: 'ended', job });
    }
  }

  cancel(job: number): void {
    this.#running.get(job)?.stop.abort();
  }

  cancelFor(planId: number | null): void {
    for (const one of this.#running.values()) if (one.of === planId) one.stop.abort();
  }

  cancelAll(): void {
    for (const { stop } of this.#running.values()) stop.abort();
  }

  /** Cancels every job, and waits until each has ended. */
  async end(): Promise<void> {
    this.cancelAll();
    await Promise.all([...this.#running.values()].map(({ over }) => over));
  }

  #next(): { readonly job: number; readonly stop: AbortController; readonly how: Required<How> } {
    const job = ++this.#last;
    const stop = new AbortController();
    const progress = (step: string, share: number) => {
      if (!stop.signal.aborted) this.#tell({ kind: 'progress', job, step, share });
    };
    return { job, stop, how: { signal: stop.signal, progress } };
  }

  async #follow({ job, planId }: { job: number; planId: number | null }, work: Promise<Ended>): Promise<void> {
    let ended: Ended;
    try {
      ended = await work;
    } catch (fault) {
      ended = { outcome: refuse('fault-of-ours', { message: fault instanceof Error ? fault.message : String(fault) }) };
    }
    this.#running.delete(job);
    this.#tell({ kind: 'done', job, planId, ...ended });
  }
}
