import type { EditionCheck } from '../protocol/bridge';
import type { Result } from '../protocol/result';
import { headings } from './headings';
import { count, list, plural, quoted } from './numbers';
import { editionLine, timeText } from './remarks';

export const reportTexts = {
  title: 'Report',
  noPlan:
    'There is no fitted plan yet. Bring a table in under Data and state its variance: the report follows from them.',
  covered:
    'The answer is covered, and the pages show it: they are not shown before it is uncovered. That is done under Variance, and goes on record.',
  setting: 'The pages are being set …',
  stopped: 'Stopped before the pages were set.',
  setAgain: 'Set them',
  noPages:
    'There are no pages to show: the plan could not be fitted. What stands in the way is told at the head of this page.',
  drawTrouble: 'The pages could not be drawn here. They can be saved as PDF all the same, and read as text.',
  // the pages
  pages: 'The pages as they print',
  before: 'Page before',
  after: 'Next page',
  page: 'Page',
  pageHelp: 'The arrow keys turn the pages.',
  noteHow: 'Point at a section to write a note on it.',
  contents: 'Turn to a section',
  save: 'Save the PDF …',
  saved: 'Saved',
  asText: 'Read as text',
  asPages: 'Show the pages',
  asTextSays: 'the same words, tables and figures as one running text',
  noSectionHere: 'No section begins on this page.',
  // what governs them
  whichTitle: 'Which report',
  current: 'the plan stands now',
  currentSays: 'Follows every change of the plan.',
  editionSays: 'As it was frozen, to the byte.',
  paperTitle: 'Paper',
  sectionsTitle: 'Sections',
  every: 'every section',
  sectionsSay: 'Page one and the variance statement stand in any case. The report says what was left out of it.',
  // notes
  note: 'Note on this section',
  noteKeep: 'Keep the note',
  notePrints: 'It prints under the heading of the section, with author and time.',
  noteDrop: 'Take the note out',
  noteSays: 'Can be undone; the trail keeps every wording.',
  noteFrozen: 'Notes are written on the report as it stands now.',
  // decisions
  decisions: 'Decisions',
  noDecision: 'No decision is on record.',
  decide: 'What was decided, and on what evidence',
  decideNow: 'Put on record',
  decideSays:
    'A decision stands with its author and time, in the trail and in the next edition. It cannot be taken back; a later one can correct it.',
  author: 'Author',
  authorSays: 'Asked for, never taken from this computer.',
  // editions
  editions: 'Editions',
  noEdition: 'No edition was frozen yet.',
  editionsSay:
    'An edition is a numbered report, frozen with its data, plan and result. It is never changed and never taken back, and anyone with this file can make it again and compare.',
  freeze: 'Freeze an edition …',
  freezeTitle: 'Freeze an edition',
  freezeSays:
    'Data, plan, result, decisions and the printed report are kept together under a number. This cannot be undone.',
  freezeNow: 'Freeze',
  freezing: 'Freezing …',
  freezeCovered: 'While the answer is covered no edition is frozen.',
  freezeUnfitted: 'Only a plan that is fitted can be frozen.',
  cancel: 'Leave it',
  show: 'Show its pages',
  shown: 'Shown above',
  check: 'Check it',
  checking: 'Making it again …',
  signOff: 'Sign off …',
  role: 'In which role',
  signNow: 'Sign off',
  signSays: 'Name, role and time go on record and cannot be taken back.',
  signers: 'Signed off by',
  readonly: 'This file cannot be written: nothing can be put on record in it.',
} as const;

/** Roles that sign as a rule; any other can be written. */
export const roleSuggestions: readonly string[] = ['Analyst', 'Reviewer', 'Custodian of the data'];

/** The sections that a plan can leave out, by the key of the result, in the order of the report. */
export const sectionsToOmit: readonly { readonly key: keyof Result; readonly name: string }[] = [
  { key: 'data', name: headings.data },
  { key: 'fit', name: `${headings.coefficients} and ${lower(headings.fit)}` },
  { key: 'robustBeside', name: headings.robust },
  { key: 'questions', name: headings.questions },
  { key: 'beside', name: `${headings.beside} and ${lower(headings.price)}` },
  { key: 'breakEven', name: headings.breakEven },
  { key: 'exponentScan', name: headings.scan },
  { key: 'betweenRules', name: headings.rules },
  { key: 'evidence', name: headings.evidence },
  { key: 'overturn', name: headings.overturn },
  { key: 'cautions', name: headings.cautions },
  { key: 'selfChecks', name: headings.checks },
  { key: 'cells', name: headings.appendixCells },
];

function lower(text: string): string {
  return text.slice(0, 1).toLowerCase() + text.slice(1);
}

/** What the report holds, as a phrase that can be changed: "every section", "all but Cautions and Questions". */
export function sectionsPhrase(omit: readonly string[]): string {
  if (omit.length === 0) return reportTexts.every;
  const names = omit.map((key) => sectionsToOmit.find((one) => one.key === key)?.name ?? key);
  return names.length > 3 ? `all sections but ${count(names.length)}` : `all but ${quotedList(names)}`;
}

function quotedList(names: readonly string[]): string {
  return list(names.map(quoted));
}

/** A page by its number: "3 of 14". */
export function pageOf(number: number, all: number): string {
  return `${count(number)} of ${count(all)}`;
}

/** A section in the list of contents. */
export function contentsText({ title, page }: { readonly title: string; readonly page: number }): string {
  return `${title}, page ${count(page)}`;
}

/** Name of a page for those who hear it. */
export function pageName(number: number, all: number): string {
  return `Page ${pageOf(number, all)} as it prints`;
}

/**
 * The line that governs the pages, around its phrases: which report, its paper, its sections. A phrase always has words after it, so that
 * no mark can come apart from it.
 */
export const reportLine = {
  which: (title: string): string => `The report of ${quoted(title)} is shown as`,
  paper: 'on',
  sections: 'paper with',
  /** pages: null while they are not known. */
  end: (pages: number | null): string => (pages === null ? 'in print.' : `and takes ${plural(pages, 'page')}.`),
  frozen: 'on the paper and with the sections of that time.',
} as const;

/** Which report is looked at. */
export function whichText(edition: { readonly number: number; readonly time: string } | null): string {
  return edition === null ? reportTexts.current : `edition ${count(edition.number)}, frozen ${timeText(edition.time)}`;
}

/** An edition in one line: its number, when, by whom. */
export function editionText(edition: {
  readonly number: number;
  readonly time: string;
  readonly author: string;
}): string {
  return editionLine(edition);
}

/** "Reviewer: R. Vos, 2026-03-01 09:30 UTC". */
export function signOffText(of: { readonly role: string; readonly author: string; readonly time: string }): string {
  return `${of.role}: ${of.author}, ${timeText(of.time)}`;
}

/** Who wrote something, and when. */
export function byText({ author, time }: { readonly author: string; readonly time: string }): string {
  return `${author}, ${timeText(time)}`;
}

/** What a check of an edition found. */
export function checkText({ number, how, problems }: EditionCheck): string {
  if (problems.length > 0) return `Edition ${count(number)} was made again from its plan and data, and differs:`;
  return how === 'bytes'
    ? `Made again from its plan and data just now: result and report are the same to the last byte.`
    : `Made again from its plan and data just now: the numbers are the same. Another version froze it, so bytes are not compared; its stored report has the hash that was recorded.`;
}

/** Said once an edition is frozen: its number, and the head to keep. */
export function frozenText({ number, head }: { readonly number: number; readonly head: string }): string {
  return `Edition ${count(number)} is frozen. Head of the trail after it: ${head}. Keep that elsewhere, outside this file.`;
}

/** Under which name the pages are saved, without ending. */
export function reportFileName(project: string, edition: number | null): string {
  return edition === null ? `${project} report` : `${project} edition ${count(edition)}`;
}

/** Names of undo steps made here; codes of words/screen-shell. */
export const reportAction = 'change-report';
