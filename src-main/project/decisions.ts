import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { change, type Store } from './store';
import { entries, record } from './trail';

// Decisions, the uncovering of the answer and signatures stand in the trail and nowhere else: nobody can take them back.

export interface Decision {
  readonly author: string;
  readonly time: string;
  readonly text: string;
}

export interface SignOff {
  readonly edition: number;
  readonly role: string;
  readonly author: string;
  readonly time: string;
}

/** Puts on record who decided what. */
export function decide(
  store: Store,
  { author, text }: { readonly author: string; readonly text: string },
): Outcome<null> {
  return change(store, () => {
    record(store, { action: 'decided', facts: { text: text.toWellFormed() }, author });
    return done(null);
  });
}

export function decisions(store: Store): readonly Decision[] {
  return entries(store, 'decided').map(({ author, time, facts }) => ({
    author: author ?? '',
    time,
    text: facts['text'] as string,
  }));
}

/** Puts on record that the coefficients of interest are to be covered on every screen until the structure is accepted. */
export function coverAnswer(store: Store, { author }: { readonly author: string }): Outcome<null> {
  return change(store, () => {
    record(store, { action: 'answer-covered', facts: {}, author });
    return done(null);
  });
}

/** Whether the answer is covered now: it was covered, and not uncovered since. */
export function isAnswerCovered(store: Store): boolean {
  const last = entries(store).findLast(({ action }) => action === 'answer-covered' || action === 'answer-uncovered');
  return last?.action === 'answer-covered';
}

/** Puts on record that the coefficients of interest were uncovered: structures tried from here on were tried with the answer in view. */
export function uncoverAnswer(store: Store, { author }: { readonly author: string }): Outcome<null> {
  return change(store, () => {
    record(store, { action: 'answer-uncovered', facts: {}, author });
    return done(null);
  });
}

/** Puts on record that someone in a role stands behind an edition. Refusal: no such edition. */
export function signOff(store: Store, sign: Omit<SignOff, 'time'>): Outcome<null> {
  return change(store, () => {
    const { edition, role, author } = sign;
    const stands = store.db.prepare('SELECT 1 FROM edition WHERE number = ?').get(edition);
    if (stands === undefined) return refuse('no-edition', { file: store.file });
    record(store, { action: 'signed-off', facts: { edition, role: role.toWellFormed() }, author });
    return done(null);
  });
}

export function signOffs(store: Store): readonly SignOff[] {
  return entries(store, 'signed-off').map(({ author, time, facts }) => ({
    edition: facts['edition'] as number,
    role: facts['role'] as string,
    author: author ?? '',
    time,
  }));
}
