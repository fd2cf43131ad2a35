import { nearestName } from '../protocol/nearest';
import { problem } from '../protocol/outcome';
import type { Read } from '../protocol/plan';
import { below } from '../protocol/pointer';
import type { Problem } from '../protocol/problems';
import type { SourceTable } from '../protocol/source';
import { type Column, columnOf } from './column';
import { composed } from './declarations';

/** The columns that can be named so far, and what was wrong on the way. */
export class Frame {
  /** The plan's own file. */
  readonly file: string;
  /** Its data rows. */
  readonly rows: number;
  /** Its label columns' texts joined, the data row's number without any. */
  labels: readonly string[] = [];
  readonly problems: Problem[] = [];
  /** False where a joined file could not be read: a name that is not here may then be there. */
  complete = true;
  private readonly byName = new Map<string, Column>();
  private readonly repeated = new Map<string, Column>();

  constructor(file: string, rows: number) {
    this.file = file;
    this.rows = rows;
  }

  get columns(): readonly Column[] {
    return [...this.byName.values()];
  }

  get names(): readonly string[] {
    return this.columns.map((column) => column.name);
  }

  /** Takes a column in; a second of the same name in one file is kept out, and is a fault once the plan uses it. */
  take(column: Column): void {
    const key = composed(column.name);
    if (this.byName.has(key)) this.repeated.set(key, column);
    else this.byName.set(key, column);
  }

  holder(name: string): Column | null {
    return this.byName.get(composed(name)) ?? null;
  }

  /** The column that a place of the plan names; an unknown or ambiguous name is noted and gives null. */
  find(name: string, at: string): Column | null {
    const key = composed(name);
    const column = this.byName.get(key);
    if (!column) {
      const nearest = nearestName(name, this.names);
      if (this.complete) this.problems.push(problem('unknown-column', { found: name, nearest }, at));
      return null;
    }
    const twin = this.repeated.get(key);
    if (!twin) return column;
    const told = this.problems.some((p) => p.code === 'name-clash' && composed(p.facts.column) === key);
    if (!told) this.problems.push(problem('name-clash', { column: column.name, files: [column.file] }, twin.fileAt));
    return null;
  }
}

/**
 * Takes in the columns of the plan's own file.
 *
 * Example: a file with the columns a and b gives a frame in which both can be named.
 */
export function frameOf(table: SourceTable, read: Read): Frame {
  const { file } = table;
  const frame = new Frame(file, table.rows);
  for (const source of table.columns) frame.take(columnOf({ source, read, file, fileAt: '/data/file', rows: null }));
  noteUnknownCodes(frame, { names: frame.names, read, at: '/data/read' });
  return frame;
}

/** Notes columns that `read.missing` names and the file does not have. */
export function noteUnknownCodes(
  frame: Frame,
  { names, read, at }: { readonly names: readonly string[]; readonly read: Read; readonly at: string },
): void {
  const known = new Set(names.map(composed));
  for (const found of Object.keys(read.missing)) {
    if (known.has(composed(found))) continue;
    const facts = { found, nearest: nearestName(found, names) };
    frame.problems.push(problem('unknown-column', facts, below(at, 'missing', found)));
  }
}
