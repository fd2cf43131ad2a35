import { done, type Outcome, type Refusal } from '@core/protocol/outcome';
import type Database from 'better-sqlite3';
import { troubleOf } from './write-whole';

/** An open project file, as this room's own functions see it. */
export interface Store {
  readonly db: Database.Database;
  readonly file: string;
  /** Now, ISO 8601 in UTC. */
  readonly clock: () => string;
}

/** Carries a refusal out of the transaction that it undoes. */
class Undone extends Error {
  readonly refusal: Refusal;
  constructor(refusal: Refusal) {
    super('a change was refused and undone');
    this.refusal = refusal;
  }
}

/** What the file system or SQLite refuses, as an outcome; bugs are thrown on. */
export function guarded<T>(file: string, work: () => Outcome<T>): Outcome<T> {
  try {
    return work();
  } catch (error) {
    return error instanceof Undone ? error.refusal : { ok: false, problems: [troubleOf(error, file)] };
  }
}

/**
 * Runs a change in one transaction: all of it is kept, or none of it and the reason is told. Inside another change it is a part of that one.
 *
 * Refusals: those of the work, and what the machine refuses (disk full, read-only, file in use).
 */
export function change<T>({ db, file }: Store, work: () => Outcome<T>): Outcome<T> {
  const whole = db.transaction(() => {
    const outcome = work();
    if (!outcome.ok) throw new Undone(outcome);
    return outcome;
  });
  return guarded(file, () => whole.immediate());
}

/**
 * The same for work that waits for something, such as a report being printed: the file stays locked for other writers until it ends.
 *
 * One at a time: a second one on the same connection while the first runs is a bug, and throws.
 */
export async function changeTogether<T>({ db, file }: Store, work: () => Promise<Outcome<T>>): Promise<Outcome<T>> {
  if (db.inTransaction) throw new Error('a change is under way on this connection');
  const begun = guarded(file, () => done(db.exec('BEGIN IMMEDIATE')));
  if (!begun.ok) return begun;
  try {
    const outcome = await work();
    if (outcome.ok) db.exec('COMMIT');
    return outcome;
  } catch (error) {
    return { ok: false, problems: [troubleOf(error, file)] };
  } finally {
    if (db.inTransaction) db.exec('ROLLBACK');
  }
}
