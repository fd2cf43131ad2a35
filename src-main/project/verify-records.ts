import { problem } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';
import type { Edition } from './editions';
import { inputBytes } from './inputs';
import { type StateFacts, stateFacts } from './plans';
import { sha256Of } from './sha256';
import type { Store } from './store';
import { entries, type TrailEntry } from './trail';

/** Hashes of the kept inputs that are no longer those of their bytes. */
export function alteredInputs(store: Store): ReadonlySet<string> {
  const kept = store.db.prepare('SELECT sha256 FROM input').all() as { readonly sha256: string }[];
  return new Set(
    kept.flatMap(({ sha256 }) => (sha256Of(inputBytes(store, sha256) as Uint8Array) === sha256 ? [] : [sha256])),
  );
}

/** How an edition as it lies in the file differs from what its entry in the trail says of it. */
export function alteredEdition(store: Store, edition: Edition, altered: ReadonlySet<string>): readonly Problem[] {
  const entry = entries(store, 'frozen').find(({ facts }) => facts['edition'] === edition.number);
  if (entry === undefined) return [problem('trail-broken', { entry: edition.entry, finding: 'edition' })];
  const differs = (what: string, found: string, expected: unknown) =>
    found === expected
      ? []
      : [problem('edition-differs', { edition: edition.number, what, found, expected: String(expected) })];
  const { facts } = entry;
  return [
    ...differs('plan.json', sha256Of(edition.plan), facts['planSha256']),
    ...differs('result.json', sha256Of(edition.result), facts['resultSha256']),
    ...differs('report.pdf', sha256Of(edition.report), facts['reportSha256']),
    ...differs('edition.json', sha256Of(edition.factsText), facts['factsSha256']),
    ...differs('data.files', JSON.stringify(edition.inputs), JSON.stringify(facts['inputs'])),
    ...edition.inputs
      .filter(({ sha256 }) => altered.has(sha256))
      .flatMap(({ name, sha256 }) => differs(name, sha256Of(inputBytes(store, sha256) as Uint8Array), sha256)),
  ];
}

/**
 * Holds what lies in the file against the trail, entry by entry: plans with their files, results, and nothing that no entry names.
 *
 * The first entry that does not fit is told; null where all do.
 */
export function verifyRecords(store: Store, altered: ReadonlySet<string>): Problem | null {
  const trail = entries(store);
  for (const entry of trail) {
    const finding = findingOf(store, entry, altered);
    if (finding !== null) return problem('trail-broken', { entry: entry.number, finding });
  }
  const recorded = (of: (entry: TrailEntry) => boolean) => trail.filter(of).length;
  const counts: readonly (readonly [string, number])[] = [
    ['plan_state', recorded(recordsState)],
    ['fit', recorded(({ action }) => action === 'fit-kept')],
    ['edition', recorded(({ action }) => action === 'frozen')],
  ];
  const isWhole = counts.every(([table, count]) => {
    const { stored } = store.db.prepare(`SELECT count(*) AS stored FROM ${table}`).get() as { readonly stored: number };
    return stored === count;
  });
  return isWhole ? null : problem('trail-broken', { entry: trail.length + 1, finding: 'unrecorded' });
}

function recordsState({ action }: TrailEntry): boolean {
  return action === 'plan-added' || action === 'plan-changed';
}

function findingOf(store: Store, entry: TrailEntry, altered: ReadonlySet<string>): string | null {
  const { action, facts } = entry;
  if (recordsState(entry)) {
    const { state, planSha256, inputs } = facts as unknown as StateFacts;
    if (JSON.stringify(stateFacts(store, state)) !== JSON.stringify({ state, planSha256, inputs })) return 'plan';
    if (inputs.some(({ sha256 }) => altered.has(sha256))) return 'input';
  }
  if (action === 'fit-kept') {
    const kept = store.db.prepare('SELECT result FROM fit WHERE fit_id = ?').get(facts['fit']) as
      | { readonly result: string }
      | undefined;
    if (kept === undefined || sha256Of(kept.result) !== facts['resultSha256']) return 'fit';
  }
  if (action === 'frozen') {
    const stands = store.db.prepare('SELECT 1 FROM edition WHERE number = ?').get(facts['edition']);
    if (stands === undefined) return 'edition';
  }
  return null;
}
