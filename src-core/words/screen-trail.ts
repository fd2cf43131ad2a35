import type { TrailLook } from '../protocol/bridge';
import type { Table } from '../protocol/page-table';
import { count, plural, quoted } from './numbers';
import { timeText } from './remarks';
import { headingOfPlace } from './report-places';
import { actionText } from './screen-shell';

export type Entry = TrailLook['entries'][number];

export const trailTexts = {
  title: 'Trail',
  reading: 'The trail is being read and verified …',
  head: 'Head of the trail',
  headSays:
    'The chain shows an alteration only against a head that is kept elsewhere: on a printed page, in a letter, with a colleague. Copy it, and keep it outside this file.',
  copyHead: 'Copy the head',
  copied: 'Copied',
  again: 'Verify again',
  which: 'Which entries',
  earlier: 'Show earlier entries',
  hash: 'Hash of the entry',
  nobody: 'no name asked for',
  entries: 'Entries',
  none: 'No entry of this kind.',
  broken: 'The trail does not hold together. What follows is shown as it is stored; nothing of it was changed.',
  chain:
    'Each entry carries the hash of the one before it, so that none can be changed, put in or left out in between without a trace.',
} as const;

/** The line above the entries, around its phrase. */
export const trailLine = { shown: 'Listed is', end: 'in the order in which it happened.' } as const;

/** Which entries are listed. */
export const trailKinds = {
  all: 'every entry',
  record: 'what cannot be taken back: decisions, coverings, editions, sign-off',
  plans: 'each change of a plan or a note',
  fits: 'each fit that was kept',
} as const;

export type TrailKind = keyof typeof trailKinds;

const kinds: Readonly<Record<string, Exclude<TrailKind, 'all'>>> = {
  decided: 'record',
  'answer-covered': 'record',
  'answer-uncovered': 'record',
  frozen: 'record',
  'signed-off': 'record',
  created: 'record',
  'plan-added': 'plans',
  'plan-changed': 'plans',
  'plan-renamed': 'plans',
  'note-changed': 'plans',
  undone: 'plans',
  redone: 'plans',
  'fit-kept': 'fits',
};

export function isOfKind({ action }: Pick<Entry, 'action'>, kind: TrailKind): boolean {
  return kind === 'all' || kinds[action] === kind;
}

/** What the verification found: "The trail is whole: 23 entries, …". */
export function wholeText(whole: TrailLook['whole']): string {
  if (whole === null) return trailTexts.broken;
  return `The trail is whole: ${plural(whole.entries, 'entry', 'entries')}, verified just now. ${trailTexts.chain}`;
}

/** Every entry as a sentence, in order; plans are called by the names that they had at the time. */
export function trailSentences(entries: readonly Entry[]): readonly string[] {
  const names = new Map<unknown, string>();
  return entries.map((entry) => {
    const { facts } = entry;
    const before = names.get(facts['plan']);
    if (typeof facts['name'] === 'string') names.set(facts['plan'], facts['name']);
    return sentenceOf(entry, { names, before });
  });
}

interface Names {
  readonly names: ReadonlyMap<unknown, string>;
  /** Name of the entry's plan before it. */
  readonly before: string | undefined;
}

function sentenceOf({ action, facts }: Entry, { names, before }: Names): string {
  const planName = (id: unknown) => `the plan ${quoted(names.get(id) ?? text(id))}`;
  switch (action) {
    case 'created':
      return 'The project was created.';
    case 'plan-added':
      return `A plan was added: ${quoted(text(facts['name']))}.`;
    case 'plan-changed':
      return `In ${planName(facts['plan'])} ${changed(actionText(text(facts['step'])))}.`;
    case 'plan-renamed':
      return `The plan ${quoted(before ?? text(facts['plan']))} is called ${quoted(text(facts['name']))} from here on.`;
    case 'note-changed':
      return facts['text'] === null
        ? `The note on ${quoted(headingOfPlace(text(facts['place'])))} was taken out.`
        : `A note was written on ${quoted(headingOfPlace(text(facts['place'])))}: ${quoted(text(facts['text']))}`;
    case 'undone':
    case 'redone': {
      const what = `${action === 'undone' ? 'Undone' : 'Redone'}: ${actionText(text(facts['step']))}`;
      return facts['subject'] === 'plan' && names.has(facts['of'])
        ? `${what}, in ${planName(facts['of'])}.`
        : `${what}.`;
    }
    case 'fit-kept':
      return `A fit of ${planName(facts['plan'])} was kept${besides(facts['tried'])}.`;
    case 'decided':
      return `Decided: ${text(facts['text'])}`;
    case 'answer-covered':
      return 'The answer was covered: coefficients of interest are hidden until the structure is accepted.';
    case 'answer-uncovered':
      return 'The answer was uncovered: structures tried from here on were tried with the answer in view.';
    case 'frozen':
      return `Edition ${text(facts['edition'])} was frozen.`;
    case 'signed-off':
      return `Edition ${text(facts['edition'])} was signed off, in the role ${quoted(text(facts['role']))}.`;
    default:
      return `${action.replaceAll('-', ' ')}.`;
  }
}

function changed(what: string): string {
  return what.endsWith('replaced') ? `${what.replace(/ replaced$/, '')} were replaced` : `this was changed: ${what}`;
}

function besides(tried: unknown): string {
  const others = Array.isArray(tried) ? tried.length - 1 : 0;
  return others > 0 ? `, with ${plural(others, 'structure')} beside it` : '';
}

/** A fact as text; what is missing is a dash. */
function text(fact: unknown): string {
  if (typeof fact === 'string') return fact;
  return typeof fact === 'number' ? count(fact) : '–';
}

/** Who and when: "2026-03-01 09:30 UTC, R. Vos". */
export function entryByText({ time, author }: Pick<Entry, 'time' | 'author'>): string {
  return author === null ? timeText(time) : `${timeText(time)}, ${author}`;
}

/** Hashes that an entry records of what lies in the file, by what they are of. */
export function hashesOf({ facts }: Pick<Entry, 'facts'>): readonly { readonly name: string; readonly hash: string }[] {
  const named = Object.entries(hashNames).flatMap(([key, name]) => {
    const hash = facts[key];
    return typeof hash === 'string' ? [{ name, hash }] : [];
  });
  const inputs = Array.isArray(facts['inputs']) ? (facts['inputs'] as { name: string; sha256: string }[]) : [];
  return [...named, ...inputs.map(({ name, sha256 }) => ({ name: quoted(name), hash: sha256 }))];
}

const hashNames = {
  planSha256: 'the plan',
  resultSha256: 'the result',
  reportSha256: 'the report',
  factsSha256: 'what the report prints of the project',
} as const;

export const hashesTitle = 'Hashes on record';

/** A hash in groups of eight, so that it can be read aloud and compared. */
export function grouped(hash: string): string {
  return hash.replace(/.{8}(?=.)/g, '$& ');
}

/** Number of an entry, as it is called. */
export const numberText = (number: number): string => `${count(number)}.`;

/** How much of a long trail is shown. */
export function shownEntries(shown: number, all: number): string {
  return `The last ${count(shown)} of ${plural(all, 'entry', 'entries')}`;
}

/** The entries as a table, for copying and saving. */
export function trailTable(entries: readonly Entry[], sentences: readonly string[]): Table {
  const left = (heading: string) => ({ text: heading, align: 'left' }) as const;
  return {
    caption: trailTexts.title,
    head: [{ text: 'entry', align: 'right' }, left('time'), left('author'), left('what happened'), left('hash')],
    rows: entries.map((entry, i) => [
      { value: entry.number, text: count(entry.number) },
      { value: entry.time, text: timeText(entry.time) },
      { value: entry.author, text: entry.author ?? '' },
      { value: null, text: sentences[i] ?? '' },
      { value: entry.hash, text: entry.hash },
    ]),
  };
}
