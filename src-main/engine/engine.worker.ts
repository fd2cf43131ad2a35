import { parentPort } from 'node:worker_threads';
import { refuse } from '@core/protocol/outcome';
import { answersFrom } from './answers';
import { shareKernels } from './kernels';
import type { EngineKind, FromEngine, ToEngine } from './questions';
import { openShelf } from './shelf';

shareKernels(import.meta.filename);

// The engine's thread: files and columns stay here, one question at a time.
const ROOM = 128_000_000;
const shelf = openShelf(ROOM);
const answers = answersFrom(shelf);
const tell = (message: FromEngine) => parentPort?.postMessage(message);

async function answer({ question, ask, flag }: Extract<ToEngine, { kind: 'ask' }>): Promise<void> {
  const cancel = new Int32Array(flag);
  const hooks = {
    cancelled: () => Atomics.load(cancel, 0) === 1,
    progress: (step: string, share: number) => tell({ kind: 'progress', step, share }),
  };
  // The pair is right by the message's type; TypeScript cannot follow it through the union.
  const work = answers[question] as (typeof answers)[EngineKind] as (ask: unknown, with_: typeof hooks) => unknown;
  const outcome = (await work(ask, hooks)) as Extract<FromEngine, { kind: 'answer' }>['outcome'];
  tell({ kind: 'tidied', gone: shelf.tidy() });
  tell({ kind: 'answer', outcome: hooks.cancelled() ? refuse('cancelled', {}) : outcome });
}

parentPort?.on('message', (message: ToEngine) => {
  if (message.kind === 'bytes') shelf.put(message.sha256, message.bytes);
  else
    void answer(message).catch((fault: unknown) =>
      tell({
        kind: 'answer',
        outcome: refuse('fault-of-ours', { message: fault instanceof Error ? fault.message : String(fault) }),
      }),
    );
});
