import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { NamedInput } from './inputs';
import { sha256Of } from './sha256';
import { change, type Store } from './store';
import { record, type TrailAction } from './trail';
import { addStep, type Restore } from './undo';

/** A plan as it stands in the project. */
export interface KeptPlan {
  readonly planId: number;
  readonly name: string;
  /** Of this wording of the plan with these inputs; every accepted change makes a new one. */
  readonly stateId: number;
  readonly plan: string;
  readonly inputs: readonly NamedInput[];
}

/** Which name and which state a plan has, as undo steps keep it. */
interface Standing {
  readonly name: string;
  readonly state: number;
}

export interface NewPlan {
  readonly name: string;
  readonly plan: Plan;
  readonly inputs: readonly NamedInput[];
  readonly author?: string | null;
}

export interface ChangedPlan {
  readonly planId: number;
  /** What was done, in one word of the screen that did it: the name of the undo step. */
  readonly action: string;
  readonly plan: Plan;
  /** Its files; those of the plan before where left out. */
  readonly inputs?: readonly NamedInput[];
  readonly author?: string | null;
}

export function plans(store: Store): readonly KeptPlan[] {
  const rows = store.db
    .prepare(
      'SELECT plan.plan_id AS planId, name, state_id AS stateId, plan_state.plan AS plan FROM plan JOIN plan_state USING (state_id) ORDER BY plan.plan_id',
    )
    .all() as Omit<KeptPlan, 'inputs'>[];
  return rows.map((row) => ({ ...row, inputs: inputsOf(store, row.stateId) }));
}

/** The files of one state of a plan, by name. */
export function inputsOf({ db }: Store, stateId: number): readonly NamedInput[] {
  return db
    .prepare('SELECT name, sha256 FROM state_input WHERE state_id = ? ORDER BY name')
    .all(stateId) as NamedInput[];
}

/** Adds a plan under a name of its own. Refusal: a name that is taken. */
export function addPlan(store: Store, { name, plan, inputs, author = null }: NewPlan): Outcome<number> {
  return change(store, () => {
    const named = freeName(store, name, null);
    if (!named.ok) return named;
    const planId = Number(store.db.prepare('INSERT INTO plan DEFAULT VALUES').run().lastInsertRowid);
    const state = addState(store, { planId, plan: JSON.stringify(plan), inputs });
    moveTo(store, { action: 'plan-added', step: 'add-plan', planId, to: { name: named.value, state }, author });
    return done(planId);
  });
}

/** Puts a changed plan in the place of the old: plan, undo step and entry of the trail in one transaction. Refusal: no such plan. */
export function changePlan(store: Store, { planId, action, plan, inputs, author = null }: ChangedPlan): Outcome<null> {
  return change(store, () => {
    const now = standingOf(store, planId);
    if (now === null) return refuse('unknown-plan', { found: planId });
    const files = inputs ?? inputsOf(store, now.state);
    const state = addState(store, { planId, plan: JSON.stringify(plan), inputs: files });
    moveTo(store, { action: 'plan-changed', step: action, planId, to: { ...now, state }, author });
    return done(null);
  });
}

/** Refusals: no such plan, a name that is taken. */
export function renamePlan(
  store: Store,
  { planId, name, author = null }: { readonly planId: number; readonly name: string; readonly author?: string | null },
): Outcome<null> {
  return change(store, () => {
    const now = standingOf(store, planId);
    if (now === null) return refuse('unknown-plan', { found: planId });
    const named = freeName(store, name, planId);
    if (!named.ok) return named;
    moveTo(store, { action: 'plan-renamed', step: 'rename-plan', planId, to: { ...now, name: named.value }, author });
    return done(null);
  });
}

export const restorePlan: Restore = ({ db }, { subjectId, value }) => {
  const standing = value === null ? null : (JSON.parse(value) as Standing);
  db.prepare('UPDATE plan SET name = ?, state_id = ? WHERE plan_id = ?').run(
    standing?.name ?? null,
    standing?.state ?? null,
    subjectId,
  );
};

interface Move {
  readonly action: TrailAction;
  readonly step: string;
  readonly planId: number;
  readonly to: Standing;
  readonly author: string | null;
}

function moveTo(store: Store, { action, step, planId, to, author }: Move): void {
  const before = standingOf(store, planId);
  const after = JSON.stringify(to);
  restorePlan(store, { subjectId: planId, value: after });
  addStep(store, {
    action: step,
    subject: 'plan',
    subjectId: planId,
    before: before === null ? null : JSON.stringify(before),
    after,
  });
  const isNew = before?.state !== to.state;
  const facts = { plan: planId, name: to.name, step, ...(isNew ? stateFacts(store, to.state) : {}) };
  record(store, { action, facts, author });
}

/** What the trail holds of one state of a plan. */
export interface StateFacts {
  readonly state: number;
  /** Of the plan's text. */
  readonly planSha256: string;
  readonly inputs: readonly NamedInput[];
}

/** The facts of a state as it lies in the file; null where there is none of that number. */
export function stateFacts(store: Store, state: number): StateFacts | null {
  const found = store.db.prepare('SELECT plan FROM plan_state WHERE state_id = ?').get(state) as
    | { readonly plan: string }
    | undefined;
  return found === undefined ? null : { state, planSha256: sha256Of(found.plan), inputs: inputsOf(store, state) };
}

function standingOf({ db }: Store, planId: number): Standing | null {
  const found = db
    .prepare('SELECT name, state_id AS state FROM plan WHERE plan_id = ? AND state_id IS NOT NULL')
    .get(planId) as Standing | undefined;
  return found ?? null;
}

function addState(
  { db }: Store,
  { planId, plan, inputs }: { readonly planId: number; readonly plan: string; readonly inputs: readonly NamedInput[] },
): number {
  const added = db.prepare('INSERT INTO plan_state (plan_id, plan) VALUES (?, ?)').run(planId, plan);
  const state = Number(added.lastInsertRowid);
  const insert = db.prepare('INSERT INTO state_input (state_id, name, sha256) VALUES (?, ?, ?)');
  for (const { name, sha256 } of inputs) insert.run(state, name, sha256);
  return state;
}

/** A name as it is kept (Unicode form C, no outer spaces), if no other plan has it. An empty one is a bug of the caller. */
function freeName({ db }: Store, wanted: string, planId: number | null): Outcome<string> {
  const name = wanted.toWellFormed().normalize('NFC').trim();
  if (name === '') throw new RangeError('a plan needs a name');
  const taken = db.prepare('SELECT 1 FROM plan WHERE name = ? AND plan_id IS NOT ?').get(name, planId);
  return taken === undefined ? done(name) : refuse('name-taken', { name });
}
