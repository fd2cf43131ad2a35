import { done, type Outcome, problem, refuseAll } from '../protocol/outcome';
import type { Plan, Read } from '../protocol/plan';
import type { Problem } from '../protocol/problems';
import type { DataUsed } from '../protocol/result';
import type { SourceTable } from '../protocol/source';
import { deriveColumn, type Needed } from './derive';
import { type Frame, frameOf } from './frame';
import { joinTable } from './join';
import { filesOf, keyOf } from './plan-files';

/** A plan and its files as intake handed them over, under the keys of `filesOf` (the name as the plan writes it). */
export interface PlanWithSources {
  readonly plan: Plan;
  readonly sources: ReadonlyMap<string, Outcome<SourceTable>>;
}

/** All columns over all rows: read, joined, derived. */
export interface Assembled {
  readonly frame: Frame;
  /** Of the derived columns, in order. */
  readonly needed: readonly Needed[];
  readonly unmatched: DataUsed['unmatched'];
  readonly files: DataUsed['files'];
  /** The table of a file, null where it could not be read. */
  readonly tableOf: (file: string, read?: Read) => SourceTable | null;
}

/**
 * Brings a plan's columns together: its own file, then joins, then derived columns, over all rows.
 *
 * Faults are noted in the frame, those of files first. Refused at once is only a plan whose own file cannot be read: every file's faults together.
 */
export function assemble({ plan, sources }: PlanWithSources): Outcome<Assembled> {
  const faults: Problem[] = [];
  const tables = new Map<string, SourceTable>();
  for (const { key, file, at } of filesOf(plan)) {
    const source = sources.get(key);
    if (source?.ok) tables.set(key, source.value);
    else faults.push(...(source?.problems ?? [problem('file-not-found', { file }, at)]));
  }
  const tableOf = (file: string, read?: Read) => tables.get(keyOf(plan, file, read)) ?? null;
  const own = tableOf(plan.data.file, plan.data.read);
  if (own === null) return refuseAll(faults);
  const frame = frameOf(own, plan.data.read);
  frame.problems.unshift(...faults);
  const unmatched = plan.data.join.flatMap((join, i) => {
    const table = tableOf(join.file, join.read);
    if (table === null) frame.complete = false;
    return table === null ? [] : joinTable(frame, { join, table, at: `/data/join/${i}` });
  });
  const needed = plan.data.derive.map((derive, i) => deriveColumn(frame, derive, `/data/derive/${i}`));
  const named = new Map([...tables.values()].map(({ file, sha256 }) => [file, { name: file, sha256 }] as const));
  return done({ frame, needed, unmatched, files: [...named.values()], tableOf });
}
