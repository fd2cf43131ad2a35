import { done, type Outcome } from '@core/protocol/outcome';
import { hasInput } from './inputs';
import { change, type Store } from './store';

/** What is kept of a plan that is not complete, as the window wrote it; null where nothing is. */
export function draft({ db }: Store): string | null {
  const row = db.prepare('SELECT text FROM draft').get() as { readonly text: string } | undefined;
  return row?.text ?? null;
}

export function hasDraftInput({ db }: Store, sha256: string): boolean {
  return db.prepare('SELECT 1 FROM draft_input WHERE sha256 = ?').get(sha256) !== undefined;
}

/** Bytes of a file that the draft names; null where there are none. */
export function draftBytes({ db }: Store, sha256: string): Uint8Array | null {
  const row = db.prepare('SELECT bytes FROM draft_input WHERE sha256 = ?').get(sha256) as
    | { readonly bytes: Uint8Array }
    | undefined;
  return row?.bytes ?? null;
}

/**
 * Keeps a draft in the place of the one before; text null: none. It is no part of the record, and leaves nothing behind when it goes.
 *
 * Files whose hash stands in the text are kept with it as long as it names them, unless a plan has them already.
 */
export function keepDraft(
  store: Store,
  { text, bytesOf }: { readonly text: string | null; readonly bytesOf: (sha256: string) => Uint8Array | null },
): Outcome<null> {
  return change(store, () => {
    const { db } = store;
    const named = new Set(text?.match(/\b[0-9a-f]{64}\b/g) ?? []);
    const kept = db.prepare('SELECT sha256 FROM draft_input').pluck().all() as string[];
    for (const sha256 of kept)
      if (!named.has(sha256)) db.prepare('DELETE FROM draft_input WHERE sha256 = ?').run(sha256);
    const add = db.prepare('INSERT INTO draft_input (sha256, bytes) VALUES (?, ?)');
    for (const sha256 of named) {
      const bytes = kept.includes(sha256) || hasInput(store, sha256) ? null : bytesOf(sha256);
      if (bytes !== null) add.run(sha256, bytes);
    }
    if (text === null) db.exec('DELETE FROM draft');
    else db.prepare('INSERT OR REPLACE INTO draft (draft_id, text) VALUES (1, ?)').run(text.toWellFormed());
    return done(null);
  });
}
