import { closeSync, existsSync, openSync, statSync } from 'node:fs';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import Database from 'better-sqlite3';
import { guarded, type Store } from './store';
import { discard, draftOf, moveIntoPlace } from './write-whole';

/**
 * Writes the project as it stands to another file, whole or not at all; what stood there before is replaced. The project stays open where it is.
 *
 * Onto its own file there is nothing to do. Refusals: a folder in the way, a file that another program is writing, what the machine refuses.
 */
export function saveAs({ db, file }: Store, target: string): Outcome<null> {
  if (isSame(file, target)) return done(null);
  const free = freeOfJournal(target);
  return free.ok ? copyInto(db, target) : free;
}

/** A compact copy of a database under another name, through a draft beside it, down to the disk. */
export function copyInto(db: Database.Database, target: string): Outcome<null> {
  const draft = draftOf(target);
  const copied = guarded(target, () => {
    closeSync(openSync(draft, 'w')); // the file system's own reason, where it refuses
    db.prepare('VACUUM INTO ?').run(draft);
    moveIntoPlace(draft, target);
    return done(null);
  });
  if (!copied.ok) discard(draft);
  return copied;
}

function isSame(file: string, target: string): boolean {
  const [ours, theirs] = [file, target].map((path) => statSync(path, { bigint: true, throwIfNoEntry: false }));
  return ours !== undefined && theirs !== undefined && ours.ino === theirs.ino && ours.dev === theirs.dev;
}

/** A journal beside the target would be played into whatever is put there: its owner settles it first, or the target is left alone. */
export function freeOfJournal(target: string): Outcome<null> {
  const journal = `${target}-journal`;
  if (!existsSync(journal)) return done(null);
  const settled = guarded(target, () => {
    if (!existsSync(target)) return done(null);
    const db = new Database(target, { fileMustExist: true, timeout: 0 });
    try {
      db.exec('BEGIN EXCLUSIVE; COMMIT');
      return done(null);
    } finally {
      db.close();
    }
  });
  if (!settled.ok) return settled;
  return existsSync(journal) ? refuse('already-there', { file: journal }) : done(null);
}
