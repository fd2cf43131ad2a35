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

/** The structures of every fit that was kept, those of fits that were undone included. Without an uncovering on record the answer was in view throughout. */
export function structuresTried(store: Store): StructuresTried {
  const all = entries(store);
  const uncovered = all.find(({ action }) => action === 'answer-uncovered')?.number ?? 0;
  const fits = all.filter(({ action }) => action === 'fit-kept');
  return countStructures(
    fits.map(({ number, facts }) => ({ tried: facts['tried'] as readonly Tried[], inView: number > uncovered })),
  );
}
