import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { Result } from '@core/protocol/result';
import { sha256Of } from './sha256';
import { change, type Store } from './store';
import { countStructures, type StructuresTried, structuresIn, type Tried } from './structures';
import { entries, record } from './trail';

/**
 * Keeps the result of a plan as it stands, as one text; answers the fit's number. The same result of the same state is kept once.
 *
 * Its entry in the trail carries the hash of the text, and each structure with its coefficients, so that what was tried stays on record.
 * Refusal: no such plan.
 */
export function keepFit(
  store: Store,
  {
    planId,
    result,
    author = null,
  }: { readonly planId: number; readonly result: string; readonly author?: string | null },
): Outcome<number> {
  return change(store, () => {
    const { db } = store;
    const plan = db.prepare('SELECT state_id AS state FROM plan WHERE plan_id = ?').get(planId) as
      | { readonly state: number | null }
      | undefined;
    if (plan === undefined || plan.state === null) return refuse('unknown-plan', { found: planId });
    const known = db
      .prepare('SELECT fit_id AS fit FROM fit WHERE state_id = ? AND result = ?')
      .get(plan.state, result) as { readonly fit: number } | undefined;
    if (known !== undefined) return done(known.fit);
    const added = db.prepare('INSERT INTO fit (state_id, result) VALUES (?, ?)').run(plan.state, result);
    const fit = Number(added.lastInsertRowid);
    const tried = structuresIn(JSON.parse(result) as Result);
    record(store, {
      action: 'fit-kept',
      facts: { plan: planId, state: plan.state, fit, resultSha256: sha256Of(result), tried },
      author,
    });
    return done(fit);
  });
}

/** A fit that was kept, without its text. */
export interface KeptFit {
  readonly fit: number;
  /** State of the plan that it is the fit of. */
  readonly stateId: number;
  /** The program's version that made it. */
  readonly version: string;
}

/** Every fit of a plan, the last first. */
export function fitsOf({ db }: Store, planId: number): readonly KeptFit[] {
  return db
    .prepare(
      `SELECT fit_id AS fit, state_id AS stateId, result ->> '$.made.version' AS version
       FROM fit JOIN plan_state USING (state_id) WHERE plan_id = ? ORDER BY fit_id DESC`,
    )
    .all(planId) as KeptFit[];
}

/** The result of a fit as the text that was kept; null where there is none of that number. */
export function fitText({ db }: Store, fit: number): string | null {
  const found = db.prepare('SELECT result FROM fit WHERE fit_id = ?').get(fit) as
    | { readonly result: string }
    | undefined;
  return found?.result ?? null;
}

/**
 * The structures of every fit that was kept, those of fits that were undone included.
 *
 * The answer was in view unless it was covered: from a covering on record to the uncovering after it, and from the start where an uncovering
 * stands without a covering before it.
 */
export function structuresTried(store: Store): StructuresTried {
  const all = entries(store);
  let inView = all.find(({ action }) => coverings.has(action))?.action !== 'answer-uncovered';
  const fits: { tried: readonly Tried[]; inView: boolean }[] = [];
  for (const { action, facts } of all) {
    if (coverings.has(action)) inView = action === 'answer-uncovered';
    if (action === 'fit-kept') fits.push({ tried: facts['tried'] as readonly Tried[], inView });
  }
  return countStructures(fits);
}

const coverings: ReadonlySet<string> = new Set(['answer-covered', 'answer-uncovered']);
