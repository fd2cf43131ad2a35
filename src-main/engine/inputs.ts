import { createHash } from 'node:crypto';
import { resolve } from 'node:path';
import { filesOf } from '@core/index';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { SourceTable } from '@core/protocol/source';
import { bytesOf } from '../intake/read-files';
import { readSource } from '../intake/read-source';

/** One input file of a plan, under the name by which the plan names it. */
export interface Input {
  readonly name: string;
  readonly sha256: string;
  readonly bytes: Uint8Array;
}

/** Where a plan's files come from: a folder, or a project's store. at: the place in the plan that names the file. */
export type Fetch = (file: string, at: string) => Outcome<Uint8Array>;

/** Files beside the plan. */
export function fromFolder(folder: string): Fetch {
  return (file, at) => bytesOf({ path: resolve(folder, file), file, at });
}

/** The files of a plan, read: bytes kept as they are, once a file; tables where they could be made. */
export interface Gathered {
  readonly inputs: readonly Input[];
  readonly sources: ReadonlyMap<string, Outcome<SourceTable>>;
}

/** Reads every file that the plan names; what cannot be read is in `sources` as a refusal, for the data stage to report. */
export function gather(plan: Plan, fetch: Fetch): Gathered {
  const inputs = new Map<string, Input>();
  const sources = new Map<string, Outcome<SourceTable>>();
  for (const { key, file, at, read } of filesOf(plan)) {
    const fetched = inputs.has(file)
      ? { ok: true as const, value: (inputs.get(file) as Input).bytes }
      : fetch(file, at);
    if (!fetched.ok) {
      sources.set(key, fetched);
      continue;
    }
    const bytes = fetched.value;
    inputs.set(file, { name: file, sha256: createHash('sha256').update(bytes).digest('hex'), bytes });
    sources.set(key, readSource({ file, bytes, read, at }));
  }
  return { inputs: [...inputs.values()], sources };
}
