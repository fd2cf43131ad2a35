import { join, resolve } from 'node:path';
import { type Outcome, refuse } from '@core/protocol/outcome';
import { exitStatusOf, type Problem } from '@core/protocol/problems';
import { checked, frozen, usage, written } from '@core/words/command';
import { fromFolder } from '../engine/inputs';
import { checkText, readPlanFile, versionOf } from '../engine/run-plan';
import { type Call, readCall } from './arguments';
import { checkFile, freezeFile } from './freeze';
import { messagesAsJson, messagesAsText } from './messages';
import { fitFile, writeOutputs } from './run';
import { schemaText } from './schema';

const root = join(import.meta.dirname, '../..');
// npm runs scripts in the package's folder and leaves the caller's in INIT_CWD.
const here = process.env['npm_lifecycle_event'] === 'steelyard' ? (process.env['INIT_CWD'] ?? '.') : '.';
const path = (name: string) => resolve(here, name);

const given = process.argv.slice(2);
const words = given.filter((word) => word !== '--json');
const screen = { write: (text: string) => void process.stderr.write(text), isTerminal: process.stderr.isTTY === true };
const asJson = words.length < given.length;
const messages = asJson ? messagesAsJson(screen) : messagesAsText(screen);
const interrupted = new AbortController();
process.once('SIGINT', () => interrupted.abort());
process.once('SIGTERM', () => interrupted.abort());
process.stdout.on('error', (error: { code?: string }) => {
  if (error.code !== 'EPIPE') throw error; // whoever read our output has left
});

/** What goes to standard output. */
async function answer(call: Call): Promise<Outcome<string>> {
  const { signal } = interrupted;
  switch (call.verb) {
    case 'help':
      return { ok: true, value: usage() };
    case 'version':
      return { ok: true, value: `${versionOf(root)}\n` };
    case 'schema':
      return schemaText(call.name, join(root, 'resources'));
    case 'plan': {
      const text = readPlanFile(path(call.plan));
      if (!text.ok) return text;
      return map(
        checkText(text.value, fromFolder(join(path(call.plan), '..'))),
        (plan) => `${JSON.stringify(plan, null, 2)}\n`,
      );
    }
    case 'run': {
      const run = await fitFile(path(call.plan), { signal, messages });
      if (!run.ok) return run;
      messages.cautions(run.value.result.cautions);
      const outputs = await writeOutputs(run.value.result, { out: path(call.out), only: call.only, signal });
      return map(outputs, (files) => `${written(files, call.out)}\n`);
    }
    case 'freeze':
      return map(
        await freezeFile({ plan: path(call.plan), project: path(call.into), author: call.author, signal, messages }),
        (edition) => `${frozen({ ...edition, file: call.into })}\n`,
      );
    case 'check':
      return map(
        await checkFile(path(call.project), signal),
        (found) => `${checked({ ...found, file: call.project })}\n`,
      );
    case 'unavailable':
      return refuse('not-available', { what: call.what });
  }
}

function map<T, U>(outcome: Outcome<T>, to: (value: T) => U): Outcome<U> {
  return outcome.ok ? { ok: true, value: to(outcome.value) } : outcome;
}

async function main(): Promise<number> {
  const call = readCall(words);
  const outcome = call.ok ? await answer(call.value) : call;
  if (outcome.ok) {
    process.stdout.write(outcome.value);
    return 0;
  }
  messages.problems(outcome.problems);
  if (!call.ok && !asJson)
    screen.write(`
${usage()}`);
  return exitStatusOf((outcome.problems[0] as Problem).code);
}

main().then(
  (status) => {
    process.exitCode = status;
  },
  (fault: unknown) => {
    messages.problems([
      {
        code: 'fault-of-ours',
        at: null,
        facts: { message: fault instanceof Error ? (fault.stack ?? fault.message) : String(fault) },
      },
    ]);
    process.exitCode = 1;
  },
);
