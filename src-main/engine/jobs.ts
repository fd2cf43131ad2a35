import { Worker } from 'node:worker_threads';
import { type Outcome, refuse } from '@core/protocol/outcome';
import workerPath from './analysis.worker?modulePath';
import type { FromWorker, ToWorker } from './job-messages';
import type { Run } from './run-plan';

/** How long a job may take to notice that it was cancelled before its thread is ended. */
const PATIENCE = 1500;

/** Runs a plan in a thread of its own. Aborting the signal answers `cancelled`; a fault of the thread is thrown. */
export function runInWorker(job: {
  readonly text: string;
  readonly folder: string;
  readonly signal: AbortSignal;
  readonly progress: (step: string, share: number) => void;
}): Promise<Outcome<Run>> {
  const flag = new SharedArrayBuffer(4);
  return new Promise((answer, fail) => {
    const worker = new Worker(workerPath, {
      workerData: { text: job.text, folder: job.folder, flag } satisfies ToWorker,
    });
    const stop = () => {
      Atomics.store(new Int32Array(flag), 0, 1);
      setTimeout(() => {
        void worker.terminate();
        answer(refuse('cancelled', {}));
      }, PATIENCE).unref();
    };
    if (job.signal.aborted) stop();
    job.signal.addEventListener('abort', stop, { once: true });
    worker.on('message', (told: FromWorker) => {
      if ('run' in told) answer(told.run);
      else job.progress(told.step, told.share);
    });
    worker.on('error', fail);
    worker.on('exit', () => job.signal.removeEventListener('abort', stop));
  });
}
