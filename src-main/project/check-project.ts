import { resolve } from 'node:path';
import { done, type Outcome, problem, type Refusal, refuse, refuseAll } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';
import type { Result } from '@core/protocol/result';
import { checkLayout, connect, usual } from './connection';
import { firstDifference, firstMovedNumber } from './differences';
import { type Edition, editions } from './editions';
import { inputBytes } from './inputs';
import { sha256Of } from './sha256';
import { guarded, type Store } from './store';
import { verifyChain, type WholeTrail } from './trail';
import { alteredEdition, alteredInputs, verifyRecords } from './verify-records';

/** An edition made again from its plan and inputs. */
interface Rebuilt {
  readonly result: string;
  /** Prints the report; asked for only where its bytes can be compared. */
  readonly report: () => Promise<Uint8Array>;
}

/** Makes an edition again; bytesOf: its input of a name, null where it has none. */
export type Rebuild = (edition: Edition, bytesOf: (name: string) => Uint8Array | null) => Promise<Outcome<Rebuilt>>;

export interface CheckReport extends WholeTrail {
  /** how: compared to the last byte; or, for an edition that another version froze, its numbers, and the hash of its stored report. */
  readonly editions: readonly { readonly number: number; readonly how: 'bytes' | 'numbers' }[];
}

/**
 * Verifies the trail, holds everything in the file against it, makes every edition again from the stored bytes and compares. The file is not changed.
 *
 * Refusals: what `openProject` refuses; `trail-broken` and `edition-differs`, every edition's; what a rebuilding was refused for, `cancelled` alone.
 */
export async function checkProject(name: string, rebuild: Rebuild): Promise<Outcome<CheckReport>> {
  const file = resolve(name);
  const opened = connect(file, { ...usual, readonly: true });
  if (!opened.ok) return opened;
  const store: Store = { db: opened.value, file, clock: () => '' };
  try {
    const stored = guarded(file, () => checkStored(store));
    if (!stored.ok) return stored;
    return await rebuildAll(store, rebuild, stored.value);
  } finally {
    store.db.close();
  }
}

/** The part of the check that needs no fit. */
function checkStored(store: Store): Outcome<WholeTrail> {
  const chain = verifyChain(store);
  if (!chain.ok) return chain;
  const layout = checkLayout(store.db, store.file);
  if (!layout.ok) return layout;
  const altered = alteredInputs(store);
  const problems = editions(store).flatMap((edition) => alteredEdition(store, edition, altered));
  if (problems.length > 0) return refuseAll(problems);
  const broken = verifyRecords(store, altered);
  return broken === null ? chain : refuseAll([broken]);
}

async function rebuildAll(store: Store, rebuild: Rebuild, trail: WholeTrail): Promise<Outcome<CheckReport>> {
  const found: CheckReport['editions'][number][] = [];
  const problems: Problem[] = [];
  for (const edition of editions(store)) {
    const one = await rebuildOne(store, edition, rebuild);
    if (!one.ok) return one;
    const { number, how } = one.value;
    problems.push(...one.value.problems);
    found.push({ number, how });
  }
  return problems.length > 0 ? refuseAll(problems) : done({ ...trail, editions: found });
}

/** What was found of one edition: as it lies in the file, and made again. */
export interface CheckedEdition {
  readonly number: number;
  readonly how: 'bytes' | 'numbers';
  /** Empty where it stands. */
  readonly problems: readonly Problem[];
}

/**
 * Holds one edition of an open project against the trail, makes it again and compares: see `checkProject`.
 *
 * Refusals: no such edition, `cancelled`.
 */
export async function checkEdition(store: Store, number: number, rebuild: Rebuild): Promise<Outcome<CheckedEdition>> {
  const [edition] = editions(store, number);
  if (edition === undefined) return refuse('no-edition', { file: store.file });
  const problems = alteredEdition(store, edition, alteredInputs(store));
  return problems.length > 0 ? done({ number, how: 'bytes', problems }) : rebuildOne(store, edition, rebuild);
}

/** Refusal: `cancelled` alone. */
async function rebuildOne(store: Store, edition: Edition, rebuild: Rebuild): Promise<Outcome<CheckedEdition>> {
  const rebuilt = await rebuild(edition, (name) => {
    const input = edition.inputs.find((one) => one.name === name);
    return input === undefined ? null : inputBytes(store, input.sha256);
  });
  if (!rebuilt.ok && isCancelled(rebuilt)) return rebuilt;
  const how = rebuilt.ok && versionIn(rebuilt.value.result) !== versionIn(edition.result) ? 'numbers' : 'bytes';
  const problems = rebuilt.ok ? await compare(edition, rebuilt.value, how) : notRebuilt(edition, rebuilt);
  return done({ number: edition.number, how, problems });
}

function isCancelled({ problems }: Refusal): boolean {
  return problems.some(({ code }) => code === 'cancelled');
}

function versionIn(result: string): string {
  return (JSON.parse(result) as Result).made.version;
}

function notRebuilt({ number, resultSha256 }: Edition, { problems }: Refusal): readonly Problem[] {
  const found = problems[0]?.code ?? '';
  return [
    problem('edition-differs', { edition: number, what: 'result.json', found, expected: resultSha256 }),
    ...problems,
  ];
}

async function compare(edition: Edition, rebuilt: Rebuilt, how: 'bytes' | 'numbers'): Promise<readonly Problem[]> {
  const differs = (what: string, found: string, expected: string) => [
    problem('edition-differs', { edition: edition.number, what, found, expected }),
  ];
  const then: unknown = JSON.parse(edition.result);
  const now: unknown = JSON.parse(rebuilt.result);
  if (how === 'numbers') {
    const moved = firstMovedNumber(then, now);
    return moved === null ? [] : differs(moved.at, moved.found, moved.expected);
  }
  if (rebuilt.result !== edition.result) {
    const first = firstDifference(then, now);
    return first === null
      ? differs('result.json', sha256Of(rebuilt.result), edition.resultSha256)
      : differs(first.at, first.found, first.expected);
  }
  const report = sha256Of(await rebuilt.report());
  return report === edition.reportSha256 ? [] : differs('report.pdf', report, edition.reportSha256);
}
