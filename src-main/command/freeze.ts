import { basename } from 'node:path';
import type { Outcome } from '@core/protocol/outcome';
import { checkProjectFile } from '../engine/check';
import { type Frozen, freezeRun } from '../engine/freeze';
import type { CheckReport } from '../project/check-project';
import type { Messages } from './messages';
import { fitFile } from './run';

interface FreezeCall {
  readonly plan: string;
  readonly project: string;
  readonly author: string;
  readonly signal: AbortSignal;
  readonly messages: Messages;
}

/** Fits a plan file and freezes it into a project file as its next edition. */
export async function freezeFile({ plan, project, author, signal, messages }: FreezeCall): Promise<Outcome<Frozen>> {
  const run = await fitFile(plan, { signal, messages });
  if (!run.ok) return run;
  messages.cautions(run.value.result.cautions);
  return freezeRun(run.value, {
    project,
    author: author.trim(),
    time: new Date().toISOString(),
    planName: basename(plan, '.json'),
    hooks: { cancelled: () => signal.aborted, progress: messages.progress },
  });
}

/** Verifies a project file and rebuilds its editions. */
export function checkFile(file: string, signal: AbortSignal): Promise<Outcome<CheckReport>> {
  return checkProjectFile(file, { cancelled: () => signal.aborted, progress: () => {} });
}
