import { filesOf } from '@core/index';
import { type Outcome, refuse } from '@core/protocol/outcome';
import type { Plan, Read } from '@core/protocol/plan';
import type { SourceTable } from '@core/protocol/source';
import { checkTableSize } from '../intake/count-fields';
import { readSource } from '../intake/read-source';

/** Which bytes a name of a plan stands for. */
export interface ShelfName {
  readonly name: string;
  readonly sha256: string;
}

export type Sources = ReadonlyMap<string, Outcome<SourceTable>>;

/** The files that a thread has at hand, by hash, and the tables read from them: a file is read once for each way of reading it. */
export interface Shelf {
  readonly put: (sha256: string, bytes: Uint8Array) => void;
  readonly table: (file: ShelfName & { readonly read: Read; readonly at?: string }) => Outcome<SourceTable>;
  readonly size: (sha256: string) => number;
  /** The tables of a plan, under the keys of `filesOf`; a file without bytes is `file-not-found` at its place. */
  readonly sourcesOf: (plan: Plan, inputs: readonly ShelfName[]) => Sources;
  /** Takes the files away that were used longest ago until the others have room; answers their hashes. */
  readonly tidy: () => readonly string[];
}

interface Kept {
  readonly bytes: Uint8Array;
  readonly tables: Map<string, SourceTable>;
}

/** room: bytes of files that may stay at hand; the last one used stays, however large. */
export function openShelf(room: number): Shelf {
  const files = new Map<string, Kept>();

  function taken(sha256: string): Kept | null {
    const kept = files.get(sha256);
    if (kept === undefined) return null;
    files.delete(sha256);
    files.set(sha256, kept); // last in order: used last
    return kept;
  }

  function table({ name, sha256, read, at = '' }: Parameters<Shelf['table']>[0]): Outcome<SourceTable> {
    const kept = taken(sha256);
    if (kept === null) return refuse('file-not-found', { file: name }, at);
    const way = JSON.stringify([name, read]);
    const known = kept.tables.get(way);
    if (known !== undefined) return { ok: true, value: known };
    const fits = checkTableSize(name, kept.bytes);
    if (!fits.ok) return fits;
    const made = readSource({ file: name, bytes: kept.bytes, read, at });
    if (made.ok) {
      kept.tables.clear(); // one way of reading at a time: a preview tries many
      kept.tables.set(way, made.value);
    }
    return made;
  }

  return {
    put: (sha256, bytes) => void files.set(sha256, { bytes, tables: new Map() }),
    table,
    size: (sha256) => files.get(sha256)?.bytes.length ?? 0,
    sourcesOf: (plan, inputs) => {
      const hashes = new Map(inputs.map(({ name, sha256 }) => [name, sha256]));
      return new Map(
        filesOf(plan).map(({ key, file, at, read }) => [
          key,
          table({ name: file, sha256: hashes.get(file) ?? '', read, at }),
        ]),
      );
    },
    tidy: () => {
      const gone: string[] = [];
      let total = [...files.values()].reduce((sum, { bytes }) => sum + bytes.length, 0);
      for (const [sha256, { bytes }] of files) {
        if (total <= room || gone.length === files.size - 1) break;
        gone.push(sha256);
        total -= bytes.length;
      }
      for (const sha256 of gone) files.delete(sha256);
      return gone;
    },
  };
}
