import { plainNumberIn } from '@core/index';
import type { Status } from '@core/protocol/plan';
import type { SourceColumn, SourceTable } from '@core/protocol/source';

/** Why a type is proposed; words are made elsewhere. */
type ProposalReason =
  | 'numbers'
  | 'numbers-and-tokens'
  | 'leading-zeros'
  | 'few-whole-numbers'
  | 'repeated-texts'
  | 'distinct-texts'
  | 'blank'
  | 'reads-both-ways';

/** A text that producers use for a status, as it stands in a column, how often, and what it would mean if confirmed; null: it means different things. */
interface ProposedToken {
  readonly token: string;
  readonly rows: number;
  readonly status: Status | null;
}

export interface Proposal {
  readonly column: string;
  readonly type: 'number' | 'category' | 'text';
  readonly reason: ProposalReason;
  readonly distinct: number;
  /** To be confirmed for each file: the same token means different things to different producers. */
  readonly tokens: readonly ProposedToken[];
}

/** What a token usually says. Letters and dashes that change their meaning with the producer have none. */
const usual = new Map<string, Status | null>([
  ['..', 'not-collected'],
  ['...', 'not-collected'],
  [':', 'not-collected'],
  ['-', null],
  ['\u2013', null],
  ['*', null],
  ['x', null],
  ['X', null],
  ['c', 'suppressed-confidential'],
  ['[c]', 'suppressed-confidential'],
  ['(D)', 'suppressed-confidential'],
  ['u', 'suppressed-unreliable'],
  ['[u]', 'suppressed-unreliable'],
  ['(S)', 'suppressed-unreliable'],
  ['z', 'not-applicable'],
  ['[z]', 'not-applicable'],
  ['[x]', 'not-collected'],
  ['[low]', 'rounds-to-zero'],
  ['NA', null],
  ['N/A', null],
  ['#N/A', null],
  ['n/a', null],
  ['NaN', null],
]);

const interval = /^(?:[<>\u2264\u2265]=?\s*\d[\d.,]*|\d+\s*[-\u2013]\s*\d+)$/;

/** Whole numbers with no more different values than this are offered as codes of a category. */
const FEW = 8;

/**
 * Proposes for each column whether it holds numbers, categories or texts, with the reason, and lists the tokens that look like statuses.
 *
 * Nothing is decided: a number stays a text until a role or a term of the plan asks for it. Years are numbers: whole numbers are proposed as a
 * category only where they are few, repeat, and are small codes or carry leading zeros.
 *
 * Example: a column of "01", "02", "01" is proposed as a category because of its leading zeros.
 */
export function proposeTypes(table: SourceTable): Proposal[] {
  return table.columns.map(proposalFor);
}

function proposalFor(column: SourceColumn): Proposal {
  const { counts, tokens, plain } = surveyed(column);
  const made = (type: Proposal['type'], reason: ProposalReason): Proposal => ({
    column: column.name,
    type,
    reason,
    distinct: counts.size,
    tokens,
  });
  if (counts.size === 0 && tokens.length === 0) return made('text', 'blank');
  const texts = [...counts.keys()];
  const repeats = [...counts.values()].some((rows) => rows > 1);
  if (texts.some((text) => plain(text) === null) || texts.length === 0) {
    // Without any number, tokens are labels like other texts.
    return made(repeats || texts.length === 0 ? 'category' : 'text', repeats ? 'repeated-texts' : 'distinct-texts');
  }
  if ('settle' in column.style) return made('number', 'reads-both-ways');
  if (texts.some((text) => /^0\d/.test(text))) return made('category', 'leading-zeros');
  if (repeats && texts.length <= FEW && texts.every((text) => /^\d{1,2}$/.test(text)))
    return made('category', 'few-whole-numbers');
  return made('number', tokens.length > 0 ? 'numbers-and-tokens' : 'numbers');
}

interface Surveyed {
  /** Texts that are neither blank nor tokens, with their rows. */
  readonly counts: ReadonlyMap<string, number>;
  readonly tokens: readonly ProposedToken[];
  readonly plain: (text: string) => string | null;
}

function surveyed({ texts, style }: SourceColumn): Surveyed {
  const plain = plainNumberIn('settle' in style ? { decimal: '.', group: ',' } : style);
  const all = new Map<string, number>();
  for (const text of texts) {
    const key = text.trim();
    if (key !== '') all.set(key, (all.get(key) ?? 0) + 1);
  }
  const looksLikeToken = (text: string) => usual.has(text) || (interval.test(text) && plain(text) === null);
  const tokens = [...all]
    .filter(([text]) => looksLikeToken(text))
    .map(([token, rows]) => ({
      token,
      rows,
      status: usual.has(token) ? (usual.get(token) ?? null) : ('interval' as const),
    }));
  return { counts: new Map([...all].filter(([text]) => !looksLikeToken(text))), tokens, plain };
}
