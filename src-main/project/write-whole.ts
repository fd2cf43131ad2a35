import { closeSync, fsyncSync, openSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';
import { done, type Outcome, problem } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';

/**
 * What the machine or SQLite says when it refuses, as a problem.
 *
 * SQLite's codes carry their cause after the second underscore (SQLITE_READONLY_DBMOVED); the family decides.
 * Anything that is neither's doing is a bug, and is thrown on.
 */
export function troubleOf(error: unknown, file: string): Problem {
  const code = (error as { code?: unknown } | null)?.code;
  if (typeof code !== 'string') throw error;
  const family = /^SQLITE_[A-Z0-9]+/.exec(code)?.[0] ?? code;
  switch (family) {
    case 'ENOSPC':
    case 'EDQUOT':
    case 'EFBIG':
    case 'SQLITE_FULL':
      return problem('disk-full', { file });
    case 'EROFS':
    case 'SQLITE_READONLY':
      return problem('read-only', { file });
    case 'EACCES':
    case 'EPERM':
    case 'SQLITE_PERM':
    case 'SQLITE_AUTH':
      return problem('no-permission', { file });
    case 'EBUSY':
    case 'ETXTBSY':
    case 'SQLITE_BUSY':
    case 'SQLITE_LOCKED':
      return problem('file-in-use', { file });
    case 'EISDIR':
      return problem('in-the-way', { file, wanted: 'file' });
    case 'ENOTDIR':
    case 'EEXIST':
      return problem('in-the-way', { file, wanted: 'folder' });
    case 'SQLITE_NOTADB':
    case 'SQLITE_CORRUPT':
      return problem('project-damaged', { file, finding: 'unreadable' });
    case 'SQLITE_CANTOPEN':
    case 'SQLITE_IOERR':
    case 'SQLITE_TOOBIG':
    case 'SQLITE_NOMEM':
      return problem('cannot-write', { file, reason: code });
    default:
      if (/^E(?!RR_)/.test(code)) return problem('cannot-write', { file, reason: code });
      throw error;
  }
}

/** The name beside a file under which it is written until it is whole. */
export function draftOf(file: string): string {
  return join(dirname(file), `.${basename(file).slice(0, 40)}.${process.pid}.part`);
}

/** Takes a draft away again, with a journal that SQLite may have left; what cannot be taken away stays. */
export function discard(draft: string): void {
  for (const file of [draft, `${draft}-journal`])
    try {
      rmSync(file, { force: true });
    } catch {
      // the trouble that made the draft useless is the one to be told
    }
}

/** Gives a whole draft its own name; draft and name are down on the disk before this returns. Throws what the machine refuses. */
export function moveIntoPlace(draft: string, file: string): void {
  sync(draft, 'r+');
  renameSync(draft, file);
  try {
    sync(dirname(file), 'r');
  } catch {
    // not every system can sync a folder; the file itself is down
  }
}

function sync(path: string, flags: 'r' | 'r+'): void {
  const open = openSync(path, flags);
  try {
    fsyncSync(open);
  } finally {
    closeSync(open);
  }
}

/**
 * Writes a file whole or not at all: under another name beside its place, down to the disk, then under its own name.
 *
 * Refuses what the machine refuses (disk full, read-only, permission, a folder in the way); nothing half-written stays.
 */
export function writeWhole(file: string, bytes: Uint8Array | string): Outcome<null> {
  const draft = draftOf(file);
  try {
    writeFileSync(draft, bytes);
    moveIntoPlace(draft, file);
    return done(null);
  } catch (error) {
    discard(draft);
    return { ok: false, problems: [troubleOf(error, file)] };
  }
}
