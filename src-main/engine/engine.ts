import { Worker } from 'node:worker_threads';
import { type Outcome, refuse } from '@core/protocol/outcome';
import workerPath from './engine.worker?modulePath';
import type { EngineAnswers, EngineAsks, EngineKind, FromEngine, ToEngine } from './questions';
import type { ShelfName } from './shelf';

/** How long a question may take to notice that it was cancelled before its thread is ended, in milliseconds. */
const PATIENCE = 3000;

/** How long a thread that is not waited for any more may take to come to rest, in milliseconds: ended in the middle of its work it can, rarely, take the process with it. */
const RETIREMENT = 30_000;

/** What one thread may take of memory: a table that needs more is refused, and the program goes on. */
const MEMORY = { maxOldGenerationSizeMb: 3072 };

/** One thread that answers one question at a time and keeps the files that it read at hand. */
export interface Engine {
  /** A question that was cancelled answers `cancelled` at once; a fault of the thread is `fault-of-ours`. */
  readonly ask: <K extends EngineKind>(
    question: K,
    ask: EngineAsks[K],
    how?: How,
  ) => Promise<Outcome<EngineAnswers[K]>>;
  readonly close: () => Promise<void>;
}

export interface How {
  readonly signal?: AbortSignal;
  readonly progress?: (step: string, share: number) => void;
}

interface Asked extends How {
  readonly question: EngineKind;
  readonly ask: EngineAsks[EngineKind];
  readonly flag: SharedArrayBuffer;
  readonly answer: (outcome: Outcome<never>) => void;
}

export function startEngineWorker(): Worker {
  return new Worker(workerPath, { resourceLimits: MEMORY });
}

/**
 * Opens an engine; its thread starts with the first question. Short questions go before fits.
 *
 * bytesOf: a file by its hash, null where there is none; asked for once a thread.
 */
export function openEngine({
  bytesOf,
  start = startEngineWorker,
}: {
  readonly bytesOf: (sha256: string) => Uint8Array | null;
  readonly start?: () => Worker;
}): Engine {
  const waiting: Asked[] = [];
  const sent = new Set<string>();
  let worker: Worker | null = null;
  let active: Asked | null = null;
  let closed = false;

  function settle(outcome: Outcome<never>): void {
    const settled = active;
    active = null;
    settled?.answer(outcome);
    next();
  }

  function begin(): Worker {
    const own = start();
    own.on('message', (told: FromEngine) => {
      if (own !== worker) return;
      if (told.kind === 'progress' && active?.signal?.aborted !== true) active?.progress?.(told.step, told.share);
      else if (told.kind === 'tidied') for (const sha256 of told.gone) sent.delete(sha256);
      else if (told.kind === 'answer') settle(told.outcome as Outcome<never>);
    });
    own.on('error', (fault) => own === worker && lose(faultOf(fault, active)));
    own.on('exit', () => own === worker && lose(refuse('fault-of-ours', { message: 'the engine stopped' })));
    return own;
  }

  /** The thread is gone, and with it what it had at hand; the question that it was at is settled. */
  function lose(outcome: Outcome<never>): void {
    const lost = worker;
    worker = null;
    sent.clear();
    if (lost !== null) retire(lost);
    settle(outcome);
  }

  function next(): void {
    if (active !== null || closed) return;
    const short = waiting.findIndex(({ question }) => question !== 'run');
    active = waiting.splice(Math.max(short, 0), 1)[0] ?? null;
    if (active === null) return;
    worker ??= begin();
    for (const { sha256 } of filesIn(active)) send(worker, sha256);
    const { question, ask, flag } = active;
    worker.postMessage({ kind: 'ask', question, ask, flag } satisfies ToEngine);
  }

  function send(to: Worker, sha256: string): void {
    const bytes = sent.has(sha256) ? null : bytesOf(sha256);
    if (bytes === null) return;
    sent.add(sha256);
    const own = Uint8Array.from(bytes); // a copy to give away: the thread has its own
    to.postMessage({ kind: 'bytes', sha256, bytes: own } satisfies ToEngine, [own.buffer]);
  }

  function cancel(asked: Asked): void {
    asked.answer(refuse('cancelled', {}));
    if (asked !== active) {
      const at = waiting.indexOf(asked);
      if (at >= 0) waiting.splice(at, 1);
      return;
    }
    Atomics.store(new Int32Array(asked.flag), 0, 1);
    setTimeout(() => asked === active && lose(refuse('cancelled', {})), PATIENCE).unref();
  }

  return {
    ask: (question, ask, how = {}) =>
      new Promise((answer) => {
        if (closed || how.signal?.aborted) return answer(refuse('cancelled', {}));
        const stop = () => cancel(asked);
        const asked: Asked = {
          ...how,
          question,
          ask,
          flag: new SharedArrayBuffer(4),
          answer: (outcome) => {
            how.signal?.removeEventListener('abort', stop);
            answer(outcome);
          },
        };
        how.signal?.addEventListener('abort', stop, { once: true });
        waiting.push(asked);
        next();
      }),
    close: async () => {
      closed = true;
      for (const asked of waiting.splice(0)) asked.answer(refuse('cancelled', {}));
      const own = worker;
      const left = active;
      worker = null;
      active = null;
      left?.answer(refuse('cancelled', {}));
      // A thread is ended at rest where that can be had: it is told to stop, and given its time.
      const isAtRest = own === null || left === null || (await stopped(own, left.flag));
      if (isAtRest) await own?.terminate();
      else if (own !== null) retire(own);
    },
  };
}

/** Lets a thread that nobody waits for end once it is at rest, or when its time is up. */
function retire(own: Worker): void {
  const late = setTimeout(() => void own.terminate(), RETIREMENT).unref();
  own.unref();
  own.on('message', (told: FromEngine) => {
    if (told.kind !== 'answer') return;
    clearTimeout(late);
    void own.terminate();
  });
}

/** Waits until a thread that was told to stop answers what it was at, but no longer than its patience. True where it came to rest. */
function stopped(own: Worker, flag: SharedArrayBuffer): Promise<boolean> {
  Atomics.store(new Int32Array(flag), 0, 1);
  return new Promise((ended) => {
    const patience = setTimeout(() => ended(false), PATIENCE);
    const heard = () => {
      clearTimeout(patience);
      ended(true);
    };
    own.on('message', (told: FromEngine) => told.kind === 'answer' && heard());
    own.once('exit', heard);
  });
}

function filesIn({ ask }: Asked): readonly ShelfName[] {
  if ('sha256' in ask) return [ask];
  if ('inputs' in ask) return ask.inputs;
  return 'before' in ask ? [...ask.before, ...ask.after] : [];
}

/** A thread that ran out of memory met a table that is too large; anything else is a bug. */
function faultOf(fault: unknown, asked: Asked | null): Outcome<never> {
  const { code, message } = fault as { readonly code?: string; readonly message?: string };
  if (code !== 'ERR_WORKER_OUT_OF_MEMORY') return refuse('fault-of-ours', { message: message ?? String(fault) });
  return refuse('memory-full', { file: asked === null ? '' : (filesIn(asked)[0]?.name ?? '') });
}
