import type { DataComparison, DataPreview } from '../protocol/bridge';
import { holdsNumbers } from '../protocol/column-roles';
import type { CellLook, DataLook } from '../protocol/data-look';
import type { Derive, Encoding, Read, Status } from '../protocol/plan';
import { count, exact, list, listSome, plural, quoted } from './numbers';
import { valuelessPhrases } from './omissions';

export const dataTexts = {
  bring: 'Bring a table in',
  bringSays:
    'One row a cell: what names it, its mean, rate or proportion, and the number of respondents or the error behind it. Drop a file anywhere on this page, choose one, or paste the table.',
  bringNote:
    'Comma, semicolon, tab or pipe between the fields; any of four encodings. The bytes are kept as they are, and everything read from them can be corrected here before it counts.',
  choose: 'Choose a file …',
  paste: 'Paste a table …',
  pasteTitle: 'Paste a table',
  pasteLabel: 'The table as text, its header first',
  pasteName: 'Name for it',
  pastedFile: 'pasted.csv',
  take: 'Take it in',
  leave: 'Leave it',
  dropHere: 'Let go to bring the file in',
  reading: 'How the file was read',
  preview: 'The first rows',
  columns: 'What each column is',
  column: 'column',
  firstValues: 'first values',
  what: 'what it is',
  explains: 'explains the outcome',
  unit: 'unit',
  tokens: 'Marks that are not numbers',
  tokensNote:
    'The same mark means different things to different producers: it counts only once it is confirmed for this file.',
  footnote: (mark: string) => `${quoted(mark)} is a footnote mark: it is split off numbers.`,
  confirmAll: 'Confirm all as proposed',
  tokenTitle: (token: string) => `What does ${quoted(token)} mean here?`,
  missingHere: (column: string) => `a missing code of ${column}`,
  unconfirmed: 'not confirmed',
  steps: 'Joined files, derived columns, rules of omission',
  noSteps: 'Nothing is joined, derived or left out by rule.',
  join: 'Join a file …',
  derive: 'Derive a column …',
  omit: 'Leave rows out …',
  remove: 'Take it back',
  cells: 'Which rows become cells',
  problems: 'To be mended before these are cells',
  unmatched: (n: number) => `${plural(n, 'key')} met nothing in a join`,
  rows: 'Rows that are left out',
  allUsed: 'Every row is used.',
  attendance: 'Attendance',
  glance: 'Outcome against size',
  accept: 'Accept these data',
  acceptSays: 'Next, the variance is stated; nothing is fitted before.',
  accepted: 'These data are accepted.',
  replace: 'Replace the data …',
  replaceTitle: 'Replace the data',
  replaceSays: 'By next year’s file, or a corrected one, under the same plan. Nothing changes before you accept it.',
  acceptReplacement: 'Replace the data',
  whatFor: 'What is this file for?',
  asData: 'A new plan from it',
  asReplacement: (file: string) => `Replace ${quoted(file)} by it`,
  asJoin: (file: string) => `Join it to ${quoted(file)}`,
  title: 'Title of the report',
  noTitle: 'no title yet',
  question: 'What is asked',
  source: 'Source',
  extracted: 'Extracted on',
  analyst: 'Analyst',
  unsaid: 'not said',
  set: 'Set',
  outcomeMissing: 'Say which column is the outcome: then the cells can be counted here.',
  looking: 'Looking at the rows …',
  stopped: 'Stopped before the rows were looked at.',
  lookAgain: 'Look at them',
} as const;

const encodings: { readonly [E in Encoding]: string } = {
  'utf-8': 'UTF-8',
  'utf-16le': 'UTF-16, little end first',
  'utf-16be': 'UTF-16, big end first',
  'windows-1252': 'Windows-1252',
};

const delimiters: ReadonlyMap<string, string> = new Map([
  [',', 'commas'],
  [';', 'semicolons'],
  ['\t', 'tabs'],
  ['|', 'upright strokes'],
]);

const groups: ReadonlyMap<string | null, string> = new Map([
  [null, 'found by column'],
  ['none', 'no mark'],
  ['.', 'a point'],
  [',', 'a comma'],
  [' ', 'a space'],
  ['\u00a0', 'a no-break space'],
  ['\u202f', 'a narrow no-break space'],
  ["'", 'an apostrophe'],
  ['\u2019', 'a curly apostrophe'],
]);

/** The ways of reading a file, as choices: null is found out from the bytes. */
export const readingChoices = {
  encoding: [null, 'utf-8', 'utf-16le', 'utf-16be', 'windows-1252'] as const,
  delimiter: [null, ',', ';', '\t', '|'] as const,
  decimal: [null, '.', ','] as const,
  group: [null, 'none', '.', ',', ' ', '\u00a0', '\u202f', "'", '\u2019'] as const,
};

export const readingTitles = {
  encoding: 'Encoding',
  delimiter: 'What stands between fields',
  decimal: 'Decimal mark',
  group: 'Mark between thousands',
} as const;

/** What leads from one part of the sentence on reading to the next. */
export const readingJoints = {
  encoding: 'It was read as',
  delimiter: 'its fields parted by',
  decimal: 'the decimal mark',
  group: 'between thousands',
} as const;

export type ReadingKey = keyof typeof readingTitles;

/** One choice of how to read, in words. preview: what the file itself told, where nothing is stated. */
export function readingText(key: ReadingKey, value: Read[ReadingKey], preview: DataPreview | null = null): string {
  const found = preview?.found ?? null;
  const numbers = preview?.columns.filter((column) => holdsNumbers(column)) ?? [];
  if (key === 'encoding') {
    const told = (value ?? found?.encoding ?? null) as Encoding | null;
    return told === null ? 'found out' : encodings[told];
  }
  if (key === 'delimiter') {
    const told = value ?? found?.delimiter ?? null;
    return told === null ? 'found out' : (delimiters.get(told) ?? quoted(told));
  }
  if (key === 'decimal') {
    const told = value ?? agreed(numbers.map(({ decimal }) => decimal));
    return told === null || told === undefined ? 'found by column' : told === '.' ? 'a point' : 'a comma';
  }
  const told = value ?? agreed(numbers.map(({ group }) => group ?? 'none'));
  return groups.get(told ?? null) ?? quoted(String(told));
}

function agreed<T>(values: readonly T[]): T | undefined {
  return values.every((value) => value === values[0]) ? values[0] : undefined;
}

/** What a choice says of itself, where it is the one that is found out. */
export function readingSays(value: string | null): string {
  return value === null ? 'Found out from the file itself.' : '';
}

/** "care.csv has 57 data rows in 6 columns, 1.6 kB." */
export function fileSentence({ name, rows, columns, size }: DataPreview): string {
  return `${name} has ${plural(rows, 'data row')} in ${plural(columns.length, 'column')}, ${bytesText(size)}.`;
}

export function bytesText(size: number): string {
  if (size < 1000) return plural(size, 'byte');
  return size < 1e6 ? `${exact(Math.round(size / 100) / 10)} kB` : `${exact(Math.round(size / 1e5) / 10)} MB`;
}

export const statusTexts: { readonly [S in Status]: string } = {
  value: 'a value like any other',
  'true-zero': 'truly zero',
  'rounds-to-zero': 'rounds to zero',
  ...valuelessPhrases,
  provisional: 'provisional',
  estimated: 'estimated by its producer',
  'low-reliability': 'of low reliability',
  blank: 'left blank',
};

/** Statuses that a token can be declared to mean. */
export const statusChoices: readonly Status[] = [
  'suppressed-confidential',
  'suppressed-unreliable',
  'suppressed-unknown',
  'not-collected',
  'not-applicable',
  'true-zero',
  'rounds-to-zero',
  'interval',
  'provisional',
  'estimated',
  'low-reliability',
];

/** A token with where it stands: "“c” in 3 rows of mean_hours and 1 row of carers:". */
export function tokenPlaces(
  token: string,
  places: readonly { readonly column: string; readonly rows: number }[],
): string {
  const where = list(places.map(({ column, rows }) => `${plural(rows, 'row')} of ${column}`));
  return where === '' ? `${quoted(token)}:` : `${quoted(token)} in ${where}:`;
}

/** How many rows are used and how many are not. */
export function usedSentence({ rows, used }: DataLook): string {
  const left = rows.length - used;
  return `${plural(rows.length, 'row')}: ${plural(used, 'is', 'are')} used as ${used === 1 ? 'a cell' : 'cells'}, ${left === 0 ? 'none is' : plural(left, 'is', 'are')} left out.`;
}

export const rowHeads = {
  row: 'row',
  cell: 'cell',
  why: 'why',
  column: 'column',
  found: 'found',
  mend: 'to mend it',
} as const;

/** What stands in the way of a cell, as the register's four glyphs tell it. */
export type Presence = 'present' | 'suppressed' | 'missing' | 'omitted';

export const glyphs: { readonly [P in Presence]: { readonly sign: string; readonly text: string } } = {
  present: { sign: '●', text: 'present' },
  suppressed: { sign: '◐', text: 'suppressed' },
  missing: { sign: '○', text: 'missing' },
  omitted: { sign: '✕', text: 'left out by rule' },
};

export function presenceOf({ reason }: CellLook): Presence {
  if (reason === null) return 'present';
  if (reason.code === 'omit-rule') return 'omitted';
  return reason.code.startsWith('suppressed') || reason.code === 'interval' ? 'suppressed' : 'missing';
}

export const registerTexts = {
  line: (block: string, present: number, all: number) => `${block}: ${present} of ${all} present`,
  total: 'present',
  absent: 'no such row',
  more: 'Show more lines',
  note: 'A ruled line a block, a glyph a cell; totals count those present.',
} as const;

/** Before anything is accepted: what other data would change. */
export function comparisonSentences({ added, lost, changed, used }: DataComparison): readonly string[] {
  const cells = new Set(changed.map(({ label }) => label)).size;
  return [
    added.length === 0
      ? 'No cell is added.'
      : `${plural(added.length, 'cell is', 'cells are')} added: ${listSome(added)}.`,
    lost.length === 0 ? 'No cell is lost.' : `${plural(lost.length, 'cell is', 'cells are')} lost: ${listSome(lost)}.`,
    changed.length === 0
      ? 'No value is changed.'
      : `${plural(changed.length, 'value is', 'values are')} changed, in ${plural(cells, 'cell')}.`,
    `Used: ${plural(used.after, 'cell')}, before ${count(used.before)}.`,
  ];
}

export const comparisonHeads = {
  cell: 'cell',
  column: 'column',
  before: 'before',
  after: 'after',
  caption: 'Changed values',
} as const;

/** Words of the forms for joins, derived columns and rules. */
export const formTexts = {
  joinTitle: (file: string) => `Join ${quoted(file)}`,
  joinSays: 'Rows with the same keys come together, many to one; every other column of the file comes in.',
  ours: (file: string) => `in ${file}`,
  keyPair: 'Key',
  addKey: 'Another key',
  add: 'Add it',
  deriveTitle: 'A derived column',
  name: 'Name',
  kind: 'Kind',
  of: 'of',
  over: 'over',
  minus: 'minus',
  by: 'within groups of',
  order: 'in order of',
  steps: 'steps back',
  omitTitle: 'A rule of omission',
  where: 'Leave out rows where',
  is: 'is',
  isHint: 'One text a line, each as it stands in the file',
  from: 'from',
  to: 'to',
  values: 'one of these',
  range: 'in a range, ends included',
  because: 'because',
  becauseHint: 'The reason stands in the report.',
  becauseNeeded: 'Say why: the reason stands in the report.',
} as const;

export const deriveNames: { readonly [K in Derive['as']]: string } = {
  lag: 'value so many steps before',
  change: 'change over so many steps',
  ratio: 'ratio of two columns',
  difference: 'difference of two columns',
  centred: 'less its mean',
  'group-mean': 'mean of its group',
  'within-group-deviation': 'less the mean of its group',
};

/** Remedies of a problem row. */
export const remedyTexts = {
  status: (token: string, status: Status) => `${quoted(token)} means: ${statusTexts[status]}`,
  missing: (token: string, column: string) => `${quoted(token)} is a missing code of ${column}`,
  noNumber: (column: string) => `${quoted(column)} holds words: it is something else`,
  footnote: (mark: string) => `${quoted(mark)} is a footnote mark`,
  omit: (column: string, text: string) => `leave rows with ${quoted(text)} in ${column} out`,
  omitBecause: (column: string) => `not a number in ${column}`,
  decimal: (mark: '.' | ',') => (mark === '.' ? 'points are decimal marks' : 'commas are decimal marks'),
  group: (mark: string) => `between thousands stands ${groups.get(mark) ?? quoted(mark)}`,
  otherFile: 'take the corrected file in',
} as const;

/** How many matters stand in the way. */
export function problemsSentence(matters: number): string {
  if (matters === 0) return 'Nothing stands in the way.';
  return `${plural(matters, 'matter stands', 'matters stand')} in the way. What mends one can be undone.`;
}

/** The other rows of the same trouble. */
export function alsoRows(rows: readonly number[]): string {
  return `So ${rows.length === 1 ? 'does row' : 'do rows'} ${listSome(
    rows.map((row) => count(row)),
    12,
  )}.`;
}

/** Share of rows read so far, for long files. */
export function takenText(name: string): string {
  return `Reading ${quoted(name)} …`;
}

export const glanceTexts = {
  caption: (outcome: string, size: string) =>
    `${outcome} against ${size}, a point a used cell. Unequal spread along the axis is what a variance structure has to explain.`,
  alt: (cells: number, outcome: string, size: string) =>
    `${plural(cells, 'point')}: ${outcome} upwards, ${size} to the right on a scale of equal factors.`,
  cell: 'cell',
  byOrder: 'place in the file',
} as const;
