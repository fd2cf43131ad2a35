import { parentPort, workerData } from 'node:worker_threads';
import { fromFolder } from './inputs';
import type { FromWorker, ToWorker } from './job-messages';
import { shareKernels } from './kernels';
import { runText } from './run-plan';

shareKernels(import.meta.filename);

// One job: read the bytes, run intake, then core. The columns never leave this thread.
const { text, folder, flag } = workerData as ToWorker;
const cancel = new Int32Array(flag);
const tell = (message: FromWorker) => parentPort?.postMessage(message);

tell({
  run: runText({
    text,
    fetch: fromFolder(folder),
    hooks: {
      cancelled: () => Atomics.load(cancel, 0) === 1,
      progress: (step, share) => tell({ step, share }),
    },
  }),
});
