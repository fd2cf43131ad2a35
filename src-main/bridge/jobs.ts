import type { Told } from '@core/protocol/bridge';
import { type Outcome, refuse } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';
import type { Result } from '@core/protocol/result';
import type { How } from '../engine/engine';

/** What a job ends with: an outcome, and why its result could not be kept, if so. */
export interface Ended {
  readonly outcome: Outcome<Result>;
  readonly unkept?: readonly Problem[];
}

/** Fits under way, by number. A newer one for the same plan cancels the older; of each is told exactly once that it is done. */
export class Jobs {
  readonly #tell: (told: Told) => void;
  readonly #running = new Map<
    number,
    { readonly planId: number | null; readonly stop: AbortController; over: Promise<void> }
  >();
  #last = 0;

  constructor(tell: (told: Told) => void) {
    this.#tell = tell;
  }

  /** planId: null for a plan that is tried and not kept. */
  begin(planId: number | null, work: (how: Required<How>) => Promise<Ended>): number {
    this.cancelFor(planId);
    const job = ++this.#last;
    const stop = new AbortController();
    const progress = (step: string, share: number) => {
      if (!stop.signal.aborted) this.#tell({ kind: 'progress', job, step, share });
    };
    const over = this.#follow({ job, planId }, work({ signal: stop.signal, progress }));
    this.#running.set(job, { planId, stop, over });
    return job;
  }

  cancel(job: number): void {
    this.#running.get(job)?.stop.abort();
  }

  cancelFor(planId: number | null): void {
    for (const one of this.#running.values()) if (one.planId === planId) one.stop.abort();
  }

  cancelAll(): void {
    for (const { stop } of this.#running.values()) stop.abort();
  }

  /** Cancels every job, and waits until each has ended. */
  async end(): Promise<void> {
    this.cancelAll();
    await Promise.all([...this.#running.values()].map(({ over }) => over));
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
