import { done, type Outcome } from '@core/protocol/outcome';
import { change, type Store } from './store';
import { entries, record } from './trail';
import { addStep, type Restore } from './undo';

/** What the author adds to the report at one of its places. */
export interface Note {
  readonly place: string;
  readonly text: string;
  /** Who wrote it in these words last, and when, by the trail; null where no author was asked for. */
  readonly author: string | null;
  readonly time: string;
}

export function notes(store: Store): readonly Note[] {
  const kept = store.db.prepare('SELECT place, text FROM note WHERE text IS NOT NULL ORDER BY note_id').all() as Pick<
    Note,
    'place' | 'text'
  >[];
  if (kept.length === 0) return [];
  const written = entries(store, 'note-changed');
  return kept.map(({ place, text }) => {
    const entry = written.findLast(({ facts }) => facts['place'] === place && facts['text'] === text);
    return { place, text, author: entry?.author ?? null, time: entry?.time ?? '' };
  });
}

/** Writes, rewrites or (text null) takes out the note of one place; can be undone. */
export function setNote(
  store: Store,
  {
    place,
    text,
    author = null,
  }: { readonly place: string; readonly text: string | null; readonly author?: string | null },
): Outcome<null> {
  return change(store, () => {
    const { db } = store;
    db.prepare('INSERT INTO note (place) VALUES (?) ON CONFLICT DO NOTHING').run(place);
    const now = db.prepare('SELECT note_id AS id, text FROM note WHERE place = ?').get(place) as {
      readonly id: number;
      readonly text: string | null;
    };
    const after = text?.toWellFormed() ?? null;
    addStep(store, { action: 'change-note', subject: 'note', subjectId: now.id, before: now.text, after });
    restoreNote(store, { subjectId: now.id, value: after });
    record(store, { action: 'note-changed', facts: { place, text: after }, author });
    return done(null);
  });
}

export const restoreNote: Restore = ({ db }, { subjectId, value }) => {
  db.prepare('UPDATE note SET text = ? WHERE note_id = ?').run(value, subjectId);
};
