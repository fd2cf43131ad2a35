import { sha256Of } from './sha256';
import type { Store } from './store';

/** A file of a plan: the name by which the plan names it, and which bytes it stands for. */
export interface NamedInput {
  readonly name: string;
  readonly sha256: string;
}

/** Keeps the bytes of a file, once however often they come; answers their SHA-256. */
export function keepInput({ db }: Store, bytes: Uint8Array): string {
  const sha256 = sha256Of(bytes);
  if (!hasInput({ db }, sha256)) db.prepare('INSERT INTO input (sha256, bytes) VALUES (?, ?)').run(sha256, bytes);
  return sha256;
}

export function hasInput({ db }: Pick<Store, 'db'>, sha256: string): boolean {
  return db.prepare('SELECT 1 FROM input WHERE sha256 = ?').get(sha256) !== undefined;
}

/** The bytes that were kept under a hash; null where there are none. */
export function inputBytes({ db }: Store, sha256: string): Uint8Array | null {
  const row = db.prepare('SELECT bytes FROM input WHERE sha256 = ?').get(sha256) as { bytes: Uint8Array } | undefined;
  return row?.bytes ?? null;
}
