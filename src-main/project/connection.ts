import { closeSync, openSync, readSync, statSync } from 'node:fs';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { HEAD_BYTES, isProject, PROJECT_MARK } from '@core/protocol/project-mark';
import Database from 'better-sqlite3';
import { lastOf, layoutFinding, layoutOf, objectsOf, type Step, steps, take } from './layout';
import { guarded } from './store';
import { upgrade } from './upgrade';

export interface Access {
  readonly readonly: boolean;
  /** No other program may open the file while this one has it open; `readonly` leaves it to others. */
  readonly alone: boolean;
  /** How long to wait for another program that holds the file, in milliseconds. */
  readonly patience: number;
  /** The steps of the layout, the newest last. */
  readonly steps: readonly Step[];
}

export const usual: Access = { readonly: false, alone: false, patience: 5000, steps };

/** Settings that a connection needs before anything is read. */
function settle(db: Database.Database, { readonly }: { readonly readonly: boolean }): void {
  db.pragma('trusted_schema = OFF');
  db.pragma('cell_size_check = ON');
  db.pragma('foreign_keys = ON');
  db.pragma('recursive_triggers = ON'); // so that REPLACE meets the guards against deletion
  db.pragma('secure_delete = ON');
  db.pragma('temp_store = MEMORY');
  db.pragma('synchronous = FULL');
  if (!readonly) db.pragma('journal_mode = DELETE');
}

/** A new file with the tables of the newest layout; throws what the machine refuses. */
export function makeEmpty(file: string): Database.Database {
  const db = new Database(file);
  db.pragma('page_size = 65536');
  settle(db, { readonly: false });
  db.pragma(`application_id = ${PROJECT_MARK}`);
  for (const step of steps) take(db, step);
  return db;
}

/**
 * Opens a project file and brings it to the newest layout.
 *
 * A journal left by a crash is rolled back first: the file stands at its last whole change.
 * Refusals: no such file, a folder, another kind of file, a newer layout, damage, and what the machine refuses.
 */
export function connect(file: string, access: Access = usual): Outcome<Database.Database> {
  return guarded(file, () => {
    const head = checkHead(file);
    if (!head.ok) return head;
    const db = openOrRecover(file, access);
    try {
      const ready = makeReady(db, file, access);
      if (ready.ok && access.alone && !access.readonly) holdAlone(db);
      if (ready.ok) return done(db);
      db.close();
      return ready;
    } catch (error) {
      db.close();
      throw error;
    }
  });
}

/** Takes the file's lock and keeps it until the connection is closed, or its process is gone. */
function holdAlone(db: Database.Database): void {
  db.pragma('locking_mode = EXCLUSIVE');
  db.exec('BEGIN EXCLUSIVE; COMMIT');
}

/** The first bytes tell a project before SQLite touches the file: SQLite's own mark at 0, the program's at 68. */
function checkHead(file: string): Outcome<null> {
  const stands = statSync(file, { throwIfNoEntry: false });
  if (stands === undefined) return refuse('no-project', { file });
  if (stands.isDirectory()) return refuse('in-the-way', { file, wanted: 'file' });
  if (!stands.isFile()) return refuse('not-a-project', { file });
  return isProject(headOf(file)) ? done(null) : refuse('not-a-project', { file });
}

/** The first bytes of a file, fewer where it has fewer; throws what the machine refuses. */
export function headOf(file: string): Uint8Array {
  const head = new Uint8Array(HEAD_BYTES);
  const open = openSync(file, 'r');
  try {
    return head.subarray(0, readSync(open, head, 0, HEAD_BYTES, 0));
  } finally {
    closeSync(open);
  }
}

function openOrRecover(file: string, { readonly, patience }: Access): Database.Database {
  const open = (how: { readonly readonly: boolean }) =>
    new Database(file, { ...how, fileMustExist: true, timeout: patience });
  const db = open({ readonly });
  if (!readonly) return db;
  try {
    layoutOf(db);
    return db;
  } catch (error) {
    db.close();
    if ((error as { code?: string }).code !== 'SQLITE_READONLY_ROLLBACK') throw error;
  }
  const writer = open({ readonly: false }); // a crash left a journal, which only a writer can roll back
  layoutOf(writer);
  writer.close();
  return open({ readonly });
}

function makeReady(db: Database.Database, file: string, access: Access): Outcome<null> {
  const known = lastOf(access.steps);
  const found = layoutOf(db);
  if (found > known) return refuse('project-newer', { file, found, known });
  settle(db, access);
  if (isCutOff(db, file)) return refuse('project-damaged', { file, finding: 'cut-off' });
  if (db.pragma('quick_check(1)', { simple: true }) !== 'ok')
    return refuse('project-damaged', { file, finding: 'pages' });
  if (found === known) return done(null);
  return access.readonly ? refuse('read-only', { file }) : upgrade({ db, file, steps: access.steps });
}

/** SQLite reads a last page that was cut off as if it ended in zeros. */
function isCutOff(db: Database.Database, file: string): boolean {
  const [pages, size] = ['page_count', 'page_size'].map((name) => db.pragma(name, { simple: true }) as number);
  return statSync(file).size < (pages as number) * (size as number);
}

/** Refuses a file whose tables and guards are not those of its layout. */
export function checkLayout(db: Database.Database, file: string, list: readonly Step[] = steps): Outcome<null> {
  const pattern = new Database(':memory:');
  for (const step of list) take(pattern, step);
  const finding = layoutFinding(db, objectsOf(pattern));
  pattern.close();
  return finding === null ? done(null) : refuse('project-damaged', { file, finding });
}
