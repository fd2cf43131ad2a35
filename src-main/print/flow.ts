import type { MarginNote } from '@core/protocol/document';
import type { Pen } from './pen';
import { ascent, type Sheet, STYLES } from './sheet';

/** The smallest piece of a page: a line of text, a row, a figure. It is never cut. */
export interface Atom {
  /** Space above; none at the head of a page. */
  readonly before: number;
  readonly height: number;
  /** Stays on the page of the next one. */
  readonly keep: boolean;
  /** Reaches into the margin, whose notes it must not meet. */
  readonly wide?: boolean;
  readonly frame?: Frame;
  /** They begin on the line whose baseline lies this far below the top of the atom. */
  readonly notes?: { readonly below: number; readonly notes: readonly MarginNote[] };
  readonly draw: (top: number) => void;
}

/** What stands round a run of atoms, and again on each page that they run over: the head and closing rule of a table. */
export interface Frame {
  readonly head: number;
  readonly foot: number;
  readonly open: (top: number, again: boolean) => void;
  readonly close: (bottom: number) => void;
}

export interface Flow {
  readonly place: (atoms: readonly Atom[]) => void;
  readonly breakPage: () => void;
  /** Sets what notes are left, and gives the number of pages. */
  readonly finish: () => number;
}

interface NoteLine {
  readonly text: string;
  readonly about: boolean;
}

interface NoteText {
  readonly lines: readonly NoteLine[];
  readonly draw: (lines: readonly NoteLine[], top: number) => void;
}

const NOTE_GAP = 7;
/** How far below its line a note may begin where the margin is taken; a line whose note would begin lower waits. */
const DRIFT = 40;
/** Lines of a note that are not parted. */
const TOGETHER = 3;
const LEADING = STYLES.note.leading;

/** Lays atoms down one under another, from page to page, with their notes in the margin beside them. */
export function openFlow(pen: Pen, sheet: Sheet): Flow {
  let pages = 0;
  let y = sheet.top;
  /** How far down the margin is taken. */
  let lane = sheet.top - NOTE_GAP;
  let fresh = true;
  /** Open on this page; and the last that was, which opens again where its atoms run on. */
  let frame: Frame | undefined;
  let running: Frame | undefined;
  let waiting: NoteText[] = [];

  const turn = () => {
    closeFrame();
    pen.pdf.addPage();
    pages += 1;
    y = sheet.top;
    lane = sheet.top - NOTE_GAP;
    fresh = true;
    const notes = waiting;
    waiting = [];
    for (const note of notes) setNote(note, sheet.top);
  };

  const setNote = (note: NoteText, wanted: number) => {
    const free = lane + NOTE_GAP;
    const height = note.lines.length * LEADING;
    const raised = Math.max(free, Math.min(Math.max(wanted, free), sheet.bottom - height));
    const fitting = Math.max(0, Math.floor((sheet.bottom - raised) / LEADING + 1e-9));
    // A note keeps its first lines together, and is taken up on the next page where it must be cut.
    const now = fitting >= note.lines.length || (fitting >= TOGETHER && waiting.length === 0) ? fitting : 0;
    const here = waiting.length === 0 ? note.lines.slice(0, now) : [];
    if (here.length > 0) {
      note.draw(here, raised);
      lane = raised + here.length * LEADING;
    }
    if (here.length < note.lines.length) waiting.push({ ...note, lines: note.lines.slice(here.length) });
  };

  /** Where an atom's top would be, were it placed at height at of the page. */
  const topOf = (atom: Atom, at: number, around: Frame | undefined, first: boolean) => {
    const changes = atom.frame !== around;
    let top = at + (changes && around !== undefined ? around.foot : 0) + (first ? 0 : atom.before);
    if (atom.wide === true) top = Math.max(top, lane + NOTE_GAP);
    if (atom.notes !== undefined) top = Math.max(top, lane + NOTE_GAP + ascent(STYLES.note) - atom.notes.below - DRIFT);
    return top + (changes ? (atom.frame?.head ?? 0) : 0);
  };

  const fits = (chain: readonly Atom[]) => {
    let at = y;
    let around = frame;
    let first = fresh;
    for (const atom of chain) {
      if (atom.notes !== undefined && lane + NOTE_GAP + TOGETHER * LEADING > sheet.bottom) return false;
      at = topOf(atom, at, around, first) + atom.height;
      around = atom.frame;
      first = false;
    }
    return at + (around?.foot ?? 0) <= sheet.bottom + 1e-6;
  };

  const put = (atom: Atom) => {
    const top = topOf(atom, y, frame, fresh);
    if (atom.frame !== frame) {
      frame?.close(y);
      atom.frame?.open(top - atom.frame.head, atom.frame === running);
      running = frame = atom.frame;
    }
    fresh = false;
    atom.draw(top);
    y = top + atom.height;
    if (atom.wide === true) lane = y - NOTE_GAP;
    if (atom.notes !== undefined)
      for (const note of atom.notes.notes)
        setNote(noteText(pen, sheet, note), top + atom.notes.below - ascent(STYLES.note));
  };

  const closeFrame = () => {
    if (frame !== undefined) {
      frame.close(y);
      y += frame.foot;
    }
    frame = undefined;
  };

  return {
    place: (atoms) => {
      if (pages === 0) turn();
      for (const chain of chainsOf(atoms)) {
        if (!fresh && !fits(chain)) turn();
        for (const atom of chain) {
          if (!fresh && !fits([atom])) turn();
          put(atom);
        }
      }
    },
    breakPage: () => {
      closeFrame();
      if (!fresh) turn();
    },
    finish: () => {
      closeFrame();
      if (pages === 0) turn();
      while (waiting.length > 0) turn();
      return pages;
    },
  };
}

/** Runs of atoms that stay together. */
function chainsOf(atoms: readonly Atom[]): Atom[][] {
  const chains: Atom[][] = [];
  let chain: Atom[] = [];
  for (const atom of atoms) {
    chain.push(atom);
    if (!atom.keep) {
      chains.push(chain);
      chain = [];
    }
  }
  if (chain.length > 0) chains.push(chain);
  return chains;
}

function noteText(pen: Pen, sheet: Sheet, note: MarginNote): NoteText {
  const element = pen.element(pen.root, 'Note');
  const { marginLeft: x, marginWidth } = sheet;
  const about = note.about === '' ? [] : pen.breakText(note.about, marginWidth, STYLES.noteAbout);
  const text = pen.breakText(note.text, marginWidth, STYLES.note);
  return {
    lines: [
      ...about.map((line) => ({ text: `${line.trimEnd()} `, about: true })),
      ...text.map((line) => ({ text: line, about: false })),
    ],
    draw: (lines, top) =>
      pen.within(element, () => {
        for (const [i, line] of lines.entries()) {
          const style = line.about ? STYLES.noteAbout : STYLES.note;
          pen.write({ text: line.text, style, x, baseline: top + i * LEADING + ascent(style) });
        }
      }),
  };
}
