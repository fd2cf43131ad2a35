import type Database from 'better-sqlite3';

/** One forward step of the file's layout. Numbered in tens; never edited once released. */
export interface Step {
  readonly layout: number;
  readonly sql: string;
}

/** What is written once and never changed or deleted. */
const written = ['input', 'plan_state', 'state_input', 'fit', 'trail', 'edition'];
/** What is changed, and never deleted. */
const kept = ['plan', 'note', 'step'];

const guard = (table: string, change: 'UPDATE' | 'DELETE') =>
  `CREATE TRIGGER ${table}_no_${change.toLowerCase()} BEFORE ${change} ON ${table} BEGIN SELECT RAISE(ABORT, 'append-only'); END;`;

const first = `
CREATE TABLE input (sha256 TEXT NOT NULL PRIMARY KEY CHECK (length(sha256) = 64), bytes BLOB NOT NULL) STRICT;
CREATE TABLE plan (
  plan_id INTEGER PRIMARY KEY,
  name TEXT UNIQUE,
  state_id INTEGER REFERENCES plan_state,
  CHECK ((name IS NULL) = (state_id IS NULL))
) STRICT;
CREATE TABLE plan_state (
  state_id INTEGER PRIMARY KEY,
  plan_id INTEGER NOT NULL REFERENCES plan,
  plan TEXT NOT NULL CHECK (json_valid(plan))
) STRICT;
CREATE TABLE state_input (
  state_id INTEGER NOT NULL REFERENCES plan_state,
  name TEXT NOT NULL,
  sha256 TEXT NOT NULL REFERENCES input,
  PRIMARY KEY (state_id, name)
) STRICT, WITHOUT ROWID;
CREATE TABLE fit (
  fit_id INTEGER PRIMARY KEY,
  state_id INTEGER NOT NULL REFERENCES plan_state,
  result TEXT NOT NULL CHECK (json_valid(result))
) STRICT;
CREATE TABLE note (note_id INTEGER PRIMARY KEY, place TEXT NOT NULL UNIQUE, text TEXT) STRICT;
CREATE TABLE step (
  step_id INTEGER PRIMARY KEY,
  action TEXT NOT NULL,
  subject TEXT NOT NULL CHECK (subject IN ('plan', 'note')),
  subject_id INTEGER NOT NULL,
  before TEXT,
  after TEXT,
  standing TEXT NOT NULL CHECK (standing IN ('done', 'undone', 'dropped'))
) STRICT;
CREATE TABLE trail (
  number INTEGER PRIMARY KEY CHECK (number > 0),
  time TEXT NOT NULL,
  author TEXT,
  action TEXT NOT NULL,
  facts TEXT NOT NULL CHECK (json_valid(facts)),
  previous TEXT NOT NULL,
  hash TEXT NOT NULL CHECK (length(hash) = 64)
) STRICT;
CREATE TABLE edition (
  number INTEGER PRIMARY KEY CHECK (number > 0),
  fit_id INTEGER NOT NULL REFERENCES fit,
  entry INTEGER NOT NULL REFERENCES trail,
  facts TEXT NOT NULL CHECK (json_valid(facts)),
  report BLOB NOT NULL,
  result_sha256 TEXT NOT NULL,
  report_sha256 TEXT NOT NULL
) STRICT;
${written.map((table) => guard(table, 'UPDATE')).join('\n')}
${[...written, ...kept].map((table) => guard(table, 'DELETE')).join('\n')}
CREATE TRIGGER trail_in_order BEFORE INSERT ON trail
WHEN NEW.number <> (SELECT coalesce(max(number), 0) + 1 FROM trail)
  OR NEW.previous <> coalesce((SELECT hash FROM trail ORDER BY number DESC LIMIT 1), '${'0'.repeat(64)}')
BEGIN SELECT RAISE(ABORT, 'append-only'); END;
`;

/** A plan on its way with its files: no part of the record, and the one thing in a project that can be taken out again. */
const drafts = `
CREATE TABLE draft (draft_id INTEGER PRIMARY KEY CHECK (draft_id = 1), text TEXT NOT NULL) STRICT;
CREATE TABLE draft_input (sha256 TEXT NOT NULL PRIMARY KEY CHECK (length(sha256) = 64), bytes BLOB NOT NULL) STRICT;
`;

export const steps: readonly Step[] = [
  { layout: 10, sql: first },
  { layout: 20, sql: drafts },
];

/** The layout that a list of steps ends in. */
export function lastOf(list: readonly Step[]): number {
  return list.at(-1)?.layout ?? 0;
}

/** Takes one step, or none if another process took it meanwhile: all of it with its number, in one transaction. */
export function take(db: Database.Database, { layout, sql }: Step): void {
  db.transaction(() => {
    if (layoutOf(db) >= layout) return;
    db.exec(sql);
    db.pragma(`user_version = ${layout}`);
  }).exclusive();
}

export function layoutOf(db: Database.Database): number {
  return db.pragma('user_version', { simple: true }) as number;
}

/** How the file's own tables, indices and triggers compare with those of its layout: a stranger's trigger must not run, and a missing guard guards nothing. */
export function layoutFinding(
  db: Database.Database,
  expected: ReadonlyMap<string, string | null>,
): 'layout-altered' | 'guards-missing' | null {
  const found = objectsOf(db);
  const strange = [...found].some(([name, sql]) => !expected.has(name) || expected.get(name) !== sql);
  const missing = [...expected.keys()].filter((name) => !found.has(name));
  if (strange || missing.some((name) => !name.startsWith('trigger '))) return 'layout-altered';
  return missing.length > 0 ? 'guards-missing' : null;
}

/** Every object of a database, by kind and name, with the statement that made it. */
export function objectsOf(db: Database.Database): ReadonlyMap<string, string | null> {
  const rows = db.prepare('SELECT type, name, sql FROM sqlite_schema').all() as {
    readonly type: string;
    readonly name: string;
    readonly sql: string | null;
  }[];
  return new Map(rows.map(({ type, name, sql }) => [`${type} ${name}`, sql]));
}
