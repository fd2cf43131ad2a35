import { done, type Outcome } from '@core/protocol/outcome';
import { change, type Store } from './store';
import { record } from './trail';

export type Subject = 'plan' | 'note';

/** A change that can be taken back: what stood before and what stands after, as JSON; null for nothing. */
export interface Step {
  readonly action: string;
  readonly subject: Subject;
  readonly subjectId: number;
  readonly before: string | null;
  readonly after: string | null;
}

/** Puts a plan or note back to what a step says of it. */
export type Restore = (store: Store, step: { readonly subjectId: number; readonly value: string | null }) => void;

/** Writes a step, inside the caller's transaction. What had been undone can no longer be redone; it stays on file. */
export function addStep({ db }: Store, step: Step): void {
  db.exec("UPDATE step SET standing = 'dropped' WHERE standing = 'undone'");
  db.prepare(
    "INSERT INTO step (action, subject, subject_id, before, after, standing) VALUES (@action, @subject, @subjectId, @before, @after, 'done')",
  ).run(step);
}

/** What undo and redo would do next, by the action's name; null where there is nothing. */
export interface Ways {
  readonly undo: string | null;
  readonly redo: string | null;
}

interface KeptStep extends Step {
  readonly stepId: number;
}

const columns = 'step_id AS stepId, action, subject, subject_id AS subjectId, before, after';

function next({ db }: Store, way: 'undo' | 'redo'): KeptStep | null {
  const [standing, order] = way === 'undo' ? ['done', 'DESC'] : ['undone', 'ASC'];
  const found = db
    .prepare(`SELECT ${columns} FROM step WHERE standing = ? ORDER BY step_id ${order} LIMIT 1`)
    .get(standing) as KeptStep | undefined;
  return found ?? null;
}

export function ways(store: Store): Ways {
  return { undo: next(store, 'undo')?.action ?? null, redo: next(store, 'redo')?.action ?? null };
}

/** Takes the last change back, or makes the one that was taken back again; an entry of the trail either way. Answers the action's name, null where there is nothing to do. */
export function goBack(
  store: Store,
  way: 'undo' | 'redo',
  restore: Readonly<Record<Subject, Restore>>,
): Outcome<string | null> {
  return change(store, () => {
    const step = next(store, way);
    if (step === null) return done(null);
    restore[step.subject](store, { subjectId: step.subjectId, value: way === 'undo' ? step.before : step.after });
    const standing = way === 'undo' ? 'undone' : 'done';
    store.db.prepare('UPDATE step SET standing = ? WHERE step_id = ?').run(standing, step.stepId);
    record(store, {
      action: way === 'undo' ? 'undone' : 'redone',
      facts: { step: step.action, subject: step.subject, of: step.subjectId },
    });
    return done(step.action);
  });
}
