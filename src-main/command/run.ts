import { mkdirSync, statSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { Result } from '@core/protocol/result';
import { printedReport, textOfResult } from '../engine/edition';
import { fromFolder } from '../engine/inputs';
import { runInWorker } from '../engine/jobs';
import { type Run, readPlanFile, runText } from '../engine/run-plan';
import { cellsFile } from '../intake/write-cells';
import { troubleOf, writeWhole } from '../project/write-whole';
import type { Messages } from './messages';

/** Data files at and above this size are worked on in a thread of their own, so that Ctrl-C is heard: some 10,000 cells. */
const OWN_THREAD = 500_000;

interface Interrupted {
  readonly signal: AbortSignal;
  readonly messages: Messages;
}

/** Fits a plan file: in place where the data are small, in a thread where they are large. */
export async function fitFile(file: string, { signal, messages }: Interrupted): Promise<Outcome<Run>> {
  const text = readPlanFile(file);
  if (!text.ok) return text;
  const folder = dirname(file);
  const progress = messages.progress;
  const run = isLarge(text.value, folder)
    ? await runInWorker({ text: text.value, folder, signal, progress })
    : runText({ text: text.value, fetch: fromFolder(folder), hooks: { cancelled: () => signal.aborted, progress } });
  messages.close();
  await new Promise((turn) => setImmediate(turn)); // a signal that came meanwhile is heard here
  return signal.aborted ? refuse('cancelled', {}) : run;
}

function isLarge(planText: string, folder: string): boolean {
  try {
    const { data } = JSON.parse(planText) as { data: { file: string } };
    return statSync(join(folder, data.file)).size >= OWN_THREAD;
  } catch {
    return false; // what is wrong with the plan or its file is found, and told, by the run itself
  }
}

/** Writes result.json, report.pdf and cells.csv into a folder, or the result alone; each appears only when whole. */
export async function writeOutputs(
  result: Result,
  { out, only, signal }: { readonly out: string; readonly only: 'result' | null; readonly signal: AbortSignal },
): Promise<Outcome<readonly string[]>> {
  const outputs: [string, string | Uint8Array][] = [['result.json', textOfResult(result)]];
  if (only === null) {
    outputs.push(['report.pdf', await printedReport(result, null)]);
    outputs.push(['cells.csv', cellsFile(result)]);
  }
  if (signal.aborted) return refuse('cancelled', {});
  try {
    mkdirSync(out, { recursive: true });
  } catch (error) {
    return { ok: false, problems: [troubleOf(error, out)] };
  }
  for (const [name, bytes] of outputs) {
    const written = writeWhole(join(out, name), bytes);
    if (!written.ok) return written;
  }
  return done(outputs.map(([name]) => name));
}
