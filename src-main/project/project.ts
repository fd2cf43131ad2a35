import { closeSync, existsSync, openSync } from 'node:fs';
import { resolve } from 'node:path';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { checkEdition } from './check-project';
import { type Access, checkLayout, connect, makeEmpty, usual } from './connection';
import { coverAnswer, decide, decisions, isAnswerCovered, signOff, signOffs, uncoverAnswer } from './decisions';
import { draft, draftBytes, hasDraftInput, keepDraft } from './draft';
import { editionHeads, editions, freezeEdition, nextEdition } from './editions';
import { fitsOf, fitText, keepFit, structuresTried } from './fits';
import { hasInput, inputBytes, keepInput } from './inputs';
import { notes, restoreNote, setNote } from './notes';
import { addPlan, changePlan, plans, renamePlan, restorePlan } from './plans';
import { freeOfJournal, saveAs } from './save-as';
import { change, changeTogether, guarded, type Store } from './store';
import { entries, headOf, record, verifyChain } from './trail';
import { goBack, ways } from './undo';
import { discard, draftOf, moveIntoPlace } from './write-whole';

/** One function of the room with its store filled in. */
type Bound<F> = F extends (store: Store, ...rest: infer Rest) => infer Answer ? (...rest: Rest) => Answer : never;

/**
 * An open project. Every change is on the disk, whole, when its function returns `ok`; a refused one left nothing.
 * Functions that only read give plain values.
 */
export interface Project {
  readonly file: string;
  readonly keepInput: (bytes: Uint8Array) => Outcome<string>;
  readonly hasInput: Bound<typeof hasInput>;
  readonly inputBytes: Bound<typeof inputBytes>;
  readonly plans: Bound<typeof plans>;
  readonly addPlan: Bound<typeof addPlan>;
  readonly changePlan: Bound<typeof changePlan>;
  readonly renamePlan: Bound<typeof renamePlan>;
  readonly notes: Bound<typeof notes>;
  readonly setNote: Bound<typeof setNote>;
  readonly draft: Bound<typeof draft>;
  readonly draftBytes: Bound<typeof draftBytes>;
  readonly hasDraftInput: Bound<typeof hasDraftInput>;
  readonly keepDraft: Bound<typeof keepDraft>;
  readonly ways: Bound<typeof ways>;
  readonly undo: () => Outcome<string | null>;
  readonly redo: () => Outcome<string | null>;
  readonly decisions: Bound<typeof decisions>;
  readonly decide: Bound<typeof decide>;
  readonly coverAnswer: Bound<typeof coverAnswer>;
  readonly isAnswerCovered: Bound<typeof isAnswerCovered>;
  readonly uncoverAnswer: Bound<typeof uncoverAnswer>;
  readonly signOffs: Bound<typeof signOffs>;
  readonly signOff: Bound<typeof signOff>;
  readonly keepFit: Bound<typeof keepFit>;
  readonly fitsOf: Bound<typeof fitsOf>;
  readonly fitText: Bound<typeof fitText>;
  readonly structuresTried: Bound<typeof structuresTried>;
  readonly trail: Bound<typeof entries>;
  readonly trailHead: Bound<typeof headOf>;
  readonly verifyTrail: Bound<typeof verifyChain>;
  readonly nextEdition: Bound<typeof nextEdition>;
  readonly freezeEdition: Bound<typeof freezeEdition>;
  readonly editions: Bound<typeof editions>;
  readonly editionHeads: Bound<typeof editionHeads>;
  readonly checkEdition: Bound<typeof checkEdition>;
  readonly saveAs: Bound<typeof saveAs>;
  /** Several changes as one, with waits between them: all kept, or none. */
  readonly together: <T>(work: () => Promise<Outcome<T>>) => Promise<Outcome<T>>;
  readonly close: () => void;
}

export interface Opening extends Partial<Access> {
  /** Now, ISO 8601 in UTC. */
  readonly clock?: () => string;
}

const now = () => new Date().toISOString();

/**
 * Makes a new, empty project; it appears under its name only when whole.
 *
 * Refusals: a file or a left-over journal of that name, and what the machine refuses.
 */
export function createProject(name: string, { clock = now, ...access }: Opening = {}): Outcome<Project> {
  const file = resolve(name);
  if (existsSync(file)) return refuse('already-there', { file });
  const free = freeOfJournal(file);
  if (!free.ok) return free;
  const draft = draftOf(file);
  const made = guarded(file, () => {
    closeSync(openSync(draft, 'w')); // the file system's own reason, where it refuses
    const db = makeEmpty(draft);
    try {
      const begun = change({ db, file, clock }, () =>
        done(record({ db, file, clock }, { action: 'created', facts: {} })),
      );
      if (!begun.ok) return begun;
    } finally {
      db.close();
    }
    moveIntoPlace(draft, file);
    return done(null);
  });
  if (made.ok) return openProject(file, { clock, ...access });
  discard(draft);
  return made;
}

/**
 * Opens a project at its last accepted change, whatever ended the program before.
 *
 * Refusals: no such file, another kind of file, a newer layout, damage, tables or guards that are not ours, and what the machine refuses.
 */
export function openProject(name: string, { clock = now, ...access }: Opening = {}): Outcome<Project> {
  const file = resolve(name);
  const opened = connect(file, { ...usual, ...access });
  if (!opened.ok) return opened;
  const layout = guarded(file, () => checkLayout(opened.value, file, access.steps));
  if (layout.ok) return done(projectOf({ db: opened.value, file, clock }));
  opened.value.close();
  return layout;
}

function projectOf(store: Store): Project {
  const bound =
    <Rest extends readonly unknown[], Answer>(work: (store: Store, ...rest: Rest) => Answer) =>
    (...rest: Rest) =>
      work(store, ...rest);
  const restore = { plan: restorePlan, note: restoreNote };
  return {
    file: store.file,
    keepInput: (bytes) => change(store, () => done(keepInput(store, bytes))),
    hasInput: bound(hasInput),
    inputBytes: bound(inputBytes),
    plans: bound(plans),
    addPlan: bound(addPlan),
    changePlan: bound(changePlan),
    renamePlan: bound(renamePlan),
    notes: bound(notes),
    setNote: bound(setNote),
    draft: bound(draft),
    draftBytes: bound(draftBytes),
    hasDraftInput: bound(hasDraftInput),
    keepDraft: bound(keepDraft),
    ways: bound(ways),
    undo: () => goBack(store, 'undo', restore),
    redo: () => goBack(store, 'redo', restore),
    decisions: bound(decisions),
    decide: bound(decide),
    coverAnswer: bound(coverAnswer),
    isAnswerCovered: bound(isAnswerCovered),
    uncoverAnswer: bound(uncoverAnswer),
    signOffs: bound(signOffs),
    signOff: bound(signOff),
    keepFit: bound(keepFit),
    fitsOf: bound(fitsOf),
    fitText: bound(fitText),
    structuresTried: bound(structuresTried),
    trail: bound(entries),
    trailHead: bound(headOf),
    verifyTrail: bound(verifyChain),
    nextEdition: bound(nextEdition),
    freezeEdition: bound(freezeEdition),
    editions: bound(editions),
    editionHeads: bound(editionHeads),
    checkEdition: bound(checkEdition),
    saveAs: bound(saveAs),
    together: (work) => changeTogether(store, work),
    close: () => void store.db.close(),
  };
}
