import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { Worker } from 'node:worker_threads';
import {
  type Answers,
  type Ask,
  type Asked,
  type Heard,
  heardOf,
  type LatestFit,
  type NamedInput,
  type ProjectLook,
  readLatest,
} from '@core/protocol/bridge';
import type { Outcome } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';
import type { Result } from '@core/protocol/result';
import { answering } from '@main/bridge/answer';
import type { Standing } from '@main/bridge/desk';
import { openSession } from '@main/bridge/session';
import { versionOf } from '@main/engine/run-plan';
import { onTestFinished } from 'vitest';

const OWN = 'app://steelyard';
export const resources = resolve('resources');
export const demoFolder = join(resources, 'demo');

type Done = Extract<Heard, { kind: 'done' }>;

/** Answers as the page takes them in: results are read from their texts. */
type Taken<Q extends Asked> = Q extends 'fit.latest' ? LatestFit : Answers[Q];

/** A folder that is gone when the test is over. */
export function folder(): string {
  const path = mkdtempSync(join(tmpdir(), 'steelyard-bridge-'));
  onTestFinished(() => rmSync(path, { recursive: true, force: true }));
  return path;
}

export function taken<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

export const codesOf = (outcome: Outcome<unknown>): readonly string[] =>
  outcome.ok ? [] : outcome.problems.map(({ code }) => code);

export const firstProblem = (outcome: Outcome<unknown>): Problem | null =>
  outcome.ok ? null : (outcome.problems[0] as Problem);

export const engineThread = () => new Worker(new URL('./engine-thread.ts', import.meta.url), { execArgv: [] });

/** A window without a window: the real session and engine behind the real door, with choosers that answer what the test lays out. */
export interface TestWindow {
  readonly ask: <Q extends Asked>(question: Q, payload: Ask<Q>) => Promise<Outcome<Taken<Q>>>;
  readonly askAnything: (question: string, payload: unknown, origin?: string) => Promise<Outcome<unknown>>;
  readonly profile: string;
  readonly told: readonly Heard[];
  readonly shown: readonly Standing[];
  readonly copied: readonly { readonly text: string; readonly html: string | null }[];
  /** What the next choosers answer, in order; null once it is used up. */
  readonly choose: (file: string | null) => void;
  readonly suggested: readonly string[];
  /** What a job ends with. */
  readonly doneOf: (job: number) => Promise<Done>;
  readonly resultOf: (job: number) => Promise<Result>;
  readonly offer: (file: string) => void;
  readonly close: () => Promise<void>;
}

export function openWindow({ profile = folder(), start = engineThread } = {}): TestWindow {
  const told: Heard[] = [];
  const shown: Standing[] = [];
  const copied: { text: string; html: string | null }[] = [];
  const chosen: (string | null)[] = [];
  const suggested: string[] = [];
  const waiting = new Set<() => void>();
  const session = openSession(
    {
      version: versionOf(resolve('.')),
      profile,
      resources,
      chooseFile: async () => chosen.shift() ?? null,
      choosePlace: async (_kind, name) => {
        suggested.push(name);
        return chosen.shift() ?? null;
      },
      copy: async (text, html) => void copied.push({ text, html }),
      tell: (one) => {
        told.push(heardOf(one));
        for (const look of waiting) look();
      },
      show: (standing) => void shown.push(standing),
    },
    start,
  );
  const answer = answering(OWN, session.handlers);
  let closed = false;
  const close = async () => {
    if (!closed) await session.close();
    closed = true;
  };
  onTestFinished(close);
  const doneOf = (job: number) =>
    new Promise<Done>((found) => {
      const look = () => {
        const one = told.find((each): each is Done => each.kind === 'done' && each.job === job);
        if (one === undefined) return;
        waiting.delete(look);
        found(one);
      };
      waiting.add(look);
      look();
    });
  return {
    // The door answers each question with its own answer; the test trusts the table of types.
    ask: async (question, payload) => {
      const answered = await answer(OWN, question, payload);
      const read =
        answered.ok && question === 'fit.latest' ? readLatest(answered.value as Answers['fit.latest']) : null;
      return (read === null ? answered : { ok: true, value: read }) as Outcome<never>;
    },
    askAnything: (question, payload, origin = OWN) => answer(origin, question, payload),
    profile,
    told,
    shown,
    copied,
    choose: (file) => void chosen.push(file),
    suggested,
    doneOf,
    resultOf: async (job) => taken((await doneOf(job)).outcome),
    offer: session.offer,
    close,
  };
}

/** A new, empty project in a folder of its own. */
export async function withProject(window: TestWindow, name = 'care'): Promise<ProjectLook> {
  window.choose(join(folder(), `${name}.steelyard`));
  return taken(await window.ask('project.create', {})) as ProjectLook;
}

export async function take(window: TestWindow, name: string, content: string | Uint8Array): Promise<NamedInput> {
  const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : Uint8Array.from(content);
  const { sha256 } = taken(await window.ask('data.take', { name, bytes }));
  return { name, sha256 };
}

/** The demo's plan as its file says it, with its files taken in. */
export async function demoPlan(window: TestWindow): Promise<{ plan: Record<string, unknown>; inputs: NamedInput[] }> {
  const plan = JSON.parse(readFileSync(join(demoFolder, 'plan.json'), 'utf8')) as Record<string, unknown>;
  const inputs: NamedInput[] = [];
  for (const name of ['care.csv', 'places.csv'])
    inputs.push(await take(window, name, readFileSync(join(demoFolder, name))));
  return { plan, inputs };
}

export const smallCells =
  'parish,y,n,x\nElm,1.5,10,1\nOak,2.5,20,2\nAsh,2.9,30,3\nFir,4.4,40,4\nYew,5.2,50,5\nBox,5.9,0,6\n';

export const smallPlan = (changes: Record<string, unknown> = {}): Record<string, unknown> => ({
  format: 'steelyard-plan/1',
  title: 'Small',
  data: { file: 'cells.csv' },
  roles: { label: ['parish'], outcome: 'y', size: 'n' },
  terms: [{ column: 'x' }],
  variance: { parts: [{ kind: 'per-size' }] },
  ...changes,
});

/** Made-up cells, the same at every call: enough of them to keep a fit busy for a while. */
export function manyCells(count: number): string {
  let state = 1;
  const draw = () => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647;
  };
  const rows = Array.from({ length: count }, (_, cell) => {
    const [x, noise, n] = [draw(), draw() - 0.5, 5 + Math.floor(400 * draw())];
    return `${cell},${(1 + 2 * x + noise).toFixed(4)},${n},${x.toFixed(4)}`;
  });
  return `cell,y,n,x\n${rows.join('\n')}\n`;
}
