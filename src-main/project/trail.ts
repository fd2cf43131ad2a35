import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { sha256Of } from './sha256';
import type { Store } from './store';

/** What is put on record, one word each; their sentences are made in words/. */
export type TrailAction =
  | 'created'
  | 'plan-added'
  | 'plan-changed'
  | 'plan-renamed'
  | 'note-changed'
  | 'undone'
  | 'redone'
  | 'fit-kept'
  | 'decided'
  | 'answer-covered'
  | 'answer-uncovered'
  | 'frozen'
  | 'signed-off';

export type Facts = Readonly<Record<string, unknown>>;

export interface TrailEntry {
  /** From 1, without a gap. */
  readonly number: number;
  /** ISO 8601 in UTC. */
  readonly time: string;
  readonly author: string | null;
  readonly action: TrailAction;
  readonly facts: Facts;
  /** Hash of the entry before; 64 zeros before the first. */
  readonly previous: string;
  readonly hash: string;
}

/** An entry as it lies in the file: its facts as the text that is hashed. */
interface Row extends Omit<TrailEntry, 'facts'> {
  readonly facts: string;
}

const noEntry = '0'.repeat(64);

/** SHA-256 over one canonical text: the JSON array of number, time, author, action, facts (as text) and the hash before. */
function hashOf({ number, time, author, action, facts, previous }: Omit<Row, 'hash'>): string {
  return sha256Of(JSON.stringify([number, time, author, action, facts, previous]));
}

/** Adds an entry, inside the caller's transaction; answers its number. */
export function record(
  { db, clock }: Store,
  {
    action,
    facts,
    author = null,
  }: { readonly action: TrailAction; readonly facts: Facts; readonly author?: string | null },
): number {
  const last = db.prepare('SELECT number, hash FROM trail ORDER BY number DESC LIMIT 1').get() as
    | { number: number; hash: string }
    | undefined;
  const entry: Omit<Row, 'hash'> = {
    number: (last?.number ?? 0) + 1,
    time: clock(),
    author: author?.toWellFormed() ?? null,
    action,
    facts: JSON.stringify(facts),
    previous: last?.hash ?? noEntry,
  };
  db.prepare(
    'INSERT INTO trail (number, time, author, action, facts, previous, hash) VALUES (@number, @time, @author, @action, @facts, @previous, @hash)',
  ).run({ ...entry, hash: hashOf(entry) });
  return entry.number;
}

const inOrder = 'SELECT number, time, author, action, facts, previous, hash FROM trail ORDER BY number';

export function entries({ db }: Store, action?: TrailAction): readonly TrailEntry[] {
  const rows = db.prepare(inOrder).all() as Row[];
  const chosen = action === undefined ? rows : rows.filter((row) => row.action === action);
  return chosen.map((row) => ({ ...row, facts: JSON.parse(row.facts) as Facts }));
}

/** Hash of the last entry. */
export function headOf({ db }: Store): string {
  const last = db.prepare('SELECT hash FROM trail ORDER BY number DESC LIMIT 1').get() as { hash: string } | undefined;
  return last?.hash ?? noEntry;
}

export interface WholeTrail {
  readonly entries: number;
  readonly head: string;
}

/**
 * Goes along the chain: numbers without a gap, each hash that of its entry, each entry naming the hash before.
 *
 * An end that was cut off, and a chain made anew throughout, show only against a head kept elsewhere.
 * Refusal: `trail-broken`, with the first entry that does not fit.
 */
export function verifyChain({ db }: Store): Outcome<WholeTrail> {
  let previous = noEntry;
  let count = 0;
  for (const row of db.prepare(inOrder).iterate() as IterableIterator<Row>) {
    count++;
    const broken = (finding: string) => refuse('trail-broken', { entry: count, finding });
    if (row.number !== count) return broken('gap');
    if (row.previous !== previous) return broken('link');
    if (row.hash !== hashOf(row)) return broken('hash');
    previous = row.hash;
  }
  return count === 0 ? refuse('trail-broken', { entry: 1, finding: 'gap' }) : done({ entries: count, head: previous });
}
