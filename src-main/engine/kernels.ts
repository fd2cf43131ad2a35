import { readFileSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { join } from 'node:path';
import { Worker, workerData } from 'node:worker_threads';
import { helpWithKernels, type Invitation, invitedToKernels, loadKernels } from '@core/index';

/** Beside the built program; not there when sources run unbuilt, and core then works in TypeScript. */
const FILE = join(import.meta.dirname, '../kernels/kernels.wasm');
/** Cells from which a second thread is worth its start. */
const MANY = 100_000;

let tried = false;
let fileOfThread: string | null = null;

/**
 * To be called first by the file of a thread that fits: lets the kernels start that file once more as their second thread, and is, in that one, the
 * whole of its life. The second thread ends with the first.
 */
export function shareKernels(file: string): void {
  if (isInvitation(workerData)) helpWithKernels(workerData.kernels);
  fileOfThread = file;
}

function isInvitation(data: unknown): data is { readonly kernels: Invitation } {
  return typeof data === 'object' && data !== null && 'kernels' in data;
}

/** Gives core the compiled kernels, once a thread, and a second thread where there are many cells; results are the same to the bit without either. */
export function useKernels(cells: number): void {
  if (!tried) {
    tried = true;
    const bytes = bytesOfKernels();
    if (bytes) loadKernels(bytes);
  }
  const invitation = invitedToKernels();
  if (!fileOfThread || !invitation || cells < MANY || availableParallelism() < 2) return;
  new Worker(fileOfThread, { workerData: { kernels: invitation } }).unref();
  fileOfThread = null;
}

function bytesOfKernels(): Uint8Array | null {
  try {
    return readFileSync(FILE);
  } catch {
    return null;
  }
}
