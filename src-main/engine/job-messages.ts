import type { Outcome } from '@core/protocol/outcome';
import type { Run } from './run-plan';

/** What passes between a job's thread and the one that started it. */
export interface ToWorker {
  readonly text: string;
  readonly folder: string;
  /** One 32-bit flag: 1 asks the job to stop. */
  readonly flag: SharedArrayBuffer;
}

export type FromWorker = { readonly run: Outcome<Run> } | { readonly step: string; readonly share: number };
