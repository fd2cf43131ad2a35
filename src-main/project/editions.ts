import { basename } from 'node:path';
import { done, type Outcome } from '@core/protocol/outcome';
import { type Decision, decisions } from './decisions';
import { structuresTried } from './fits';
import type { NamedInput } from './inputs';
import { type Note, notes } from './notes';
import { inputsOf, stateFacts } from './plans';
import { sha256Of } from './sha256';
import { change, type Store } from './store';
import type { StructuresTried } from './structures';
import { headOf, record } from './trail';

/** What an edition's report prints of the project: kept as it was at the freeze, so that the report can be printed again to the last byte. */
export interface EditionRecord {
  readonly number: number;
  readonly time: string;
  readonly author: string;
  /** Head of the trail before the edition's own entry. */
  readonly head: string;
  /** Name of the project's file, without its folder. */
  readonly project: string;
  readonly decisions: readonly Decision[];
  /** Absent where there are none, as in editions that were frozen before notes were printed. */
  readonly notes?: readonly Note[];
  readonly structuresTried: StructuresTried;
}

export interface Edition {
  readonly number: number;
  readonly facts: EditionRecord;
  /** The same as the text that was hashed. */
  readonly factsText: string;
  readonly plan: string;
  readonly inputs: readonly NamedInput[];
  readonly result: string;
  readonly report: Uint8Array;
  readonly resultSha256: string;
  readonly reportSha256: string;
  /** Number of its entry in the trail. */
  readonly entry: number;
}

/** What the report of an edition frozen now would print of the project. */
export function nextEdition(store: Store, author: string, name = basename(store.file, '.steelyard')): EditionRecord {
  const last = store.db.prepare('SELECT max(number) AS number FROM edition').get() as {
    readonly number: number | null;
  };
  const noted = notes(store);
  return {
    number: (last.number ?? 0) + 1,
    time: store.clock(),
    author: author.toWellFormed(),
    head: headOf(store),
    project: name,
    decisions: decisions(store),
    ...(noted.length > 0 ? { notes: noted } : {}),
    structuresTried: structuresTried(store),
  };
}

/**
 * Freezes a fit with its printed report as the next edition: never changed, never taken back. Answers the head of the trail after it.
 *
 * facts: of `nextEdition`, with nothing recorded since; stale ones are a bug of the caller.
 */
export function freezeEdition(
  store: Store,
  { fit, facts, report }: { readonly fit: number; readonly facts: EditionRecord; readonly report: Uint8Array },
): Outcome<string> {
  return change(store, () => {
    if (facts.head !== headOf(store)) throw new Error('the trail went on while the report was printed');
    const { db } = store;
    const { result, stateId } = db.prepare('SELECT result, state_id AS stateId FROM fit WHERE fit_id = ?').get(fit) as {
      readonly result: string;
      readonly stateId: number;
    };
    const text = JSON.stringify(facts);
    const hashes = { resultSha256: sha256Of(result), reportSha256: sha256Of(report) };
    const entry = record(store, {
      action: 'frozen',
      facts: { edition: facts.number, fit, ...stateFacts(store, stateId), ...hashes, factsSha256: sha256Of(text) },
      author: facts.author,
    });
    db.prepare(
      'INSERT INTO edition (number, fit_id, entry, facts, report, result_sha256, report_sha256) VALUES (?, ?, ?, ?, ?, ?, ?)',
    ).run(facts.number, fit, entry, text, report, hashes.resultSha256, hashes.reportSha256);
    return done(headOf(store));
  });
}

interface Row extends Omit<Edition, 'facts' | 'inputs'> {
  readonly stateId: number;
}

const selected = `SELECT number, entry, edition.facts AS factsText, plan, result, report, state_id AS stateId,
  result_sha256 AS resultSha256, report_sha256 AS reportSha256
FROM edition JOIN fit USING (fit_id) JOIN plan_state USING (state_id) WHERE @number IS NULL OR number = @number ORDER BY number`;

/** What a list of editions shows of each. */
export interface EditionHead {
  readonly facts: EditionRecord;
  /** Title of its plan. */
  readonly title: string;
}

/** Every edition without plan, result and report, the first first. */
export function editionHeads({ db }: Store): readonly EditionHead[] {
  const rows = db
    .prepare(
      `SELECT edition.facts AS factsText, plan ->> '$.title' AS title
       FROM edition JOIN fit USING (fit_id) JOIN plan_state USING (state_id) ORDER BY number`,
    )
    .all() as { readonly factsText: string; readonly title: string | null }[];
  return rows.map(({ factsText, title }) => ({ facts: JSON.parse(factsText) as EditionRecord, title: title ?? '' }));
}

/** Every edition, or the one of a number; the first first. */
export function editions(store: Store, number: number | null = null): readonly Edition[] {
  const all = store.db.prepare(selected).all({ number }) as Row[];
  return all.map(({ stateId, ...row }) => ({
    ...row,
    facts: JSON.parse(row.factsText) as EditionRecord,
    inputs: inputsOf(store, stateId),
  }));
}
