import { below } from '@core/protocol/pointer';

/** The first place at which two JSON values part. */
export interface Difference {
  /** JSON pointer. */
  readonly at: string;
  readonly found: string;
  readonly expected: string;
}

type Json = unknown;

/** How far a number may move between versions of the program, relative to itself; within `cells`, to the largest of its kind. */
const VERSIONS_AGREE = 1e-9;

/** Measures of the program itself, which a later version may take in another way. */
const notCompared = new Set(['made', 'selfChecks']);

/** The first leaf or length in which a value differs from the expected one; null where they are the same value. */
export function firstDifference(expected: Json, found: Json, at = ''): Difference | null {
  if (!isBranch(expected) || !isBranch(found) || Array.isArray(expected) !== Array.isArray(found))
    return Object.is(expected, found) ? null : { at, found: shown(found), expected: shown(expected) };
  for (const key of new Set([...Object.keys(expected), ...Object.keys(found)])) {
    const difference = firstDifference(expected[key], found[key], below(at, key));
    if (difference !== null) return difference;
  }
  return null;
}

/**
 * The first number of the expected value that is not found again within 1e-9 of itself.
 *
 * For a result that another version made: texts, new keys, and what was null or empty then are not compared. Within `cells` a number is
 * held against the largest of its kind, since residuals near zero carry rounding alone.
 */
export function firstMovedNumber(expected: Json, found: Json): Difference | null {
  const scales = new Map<string, number>();
  const note = (kind: string, value: number) => scales.set(kind, Math.max(scales.get(kind) ?? 0, Math.abs(value)));
  const cells = isBranch(expected) ? expected['cells'] : null;
  eachNumber(cells, 'cells', note);
  return movedWithin({ expected, found, at: '', kind: '' }, scales);
}

interface Pair {
  readonly expected: Json;
  readonly found: Json;
  readonly at: string;
  /** The place without indices. */
  readonly kind: string;
}

function movedWithin({ expected, found, at, kind }: Pair, scales: ReadonlyMap<string, number>): Difference | null {
  const differs = { at, found: shown(found), expected: shown(expected) };
  if (typeof expected === 'number') {
    if (typeof found !== 'number') return differs;
    const scale = Math.max(Math.abs(expected), Math.abs(found), scales.get(kind) ?? 0);
    return Math.abs(expected - found) <= VERSIONS_AGREE * scale ? null : differs;
  }
  if (!isBranch(expected)) return null;
  if (Array.isArray(expected)) {
    if (expected.length === 0) return null;
    if (!Array.isArray(found) || found.length !== expected.length) return { ...differs, ...lengths(expected, found) };
  }
  for (const [key, inside] of Object.entries(expected)) {
    if (at === '' && notCompared.has(key)) continue;
    const pair = { expected: inside, found: isBranch(found) ? found[key] : undefined };
    const place = { at: below(at, key), kind: kindOf(kind, key, expected) };
    const difference = movedWithin({ ...pair, ...place }, scales);
    if (difference !== null) return difference;
  }
  return null;
}

function eachNumber(value: Json, kind: string, tell: (kind: string, value: number) => void): void {
  if (typeof value === 'number') tell(kind, value);
  if (isBranch(value))
    for (const [key, inside] of Object.entries(value)) eachNumber(inside, kindOf(kind, key, value), tell);
}

function kindOf(kind: string, key: string, parent: object): string {
  if (Array.isArray(parent)) return kind;
  return kind === '' ? key : `${kind}.${key}`;
}

function lengths(expected: readonly Json[], found: Json): { readonly found: string; readonly expected: string } {
  return {
    found: Array.isArray(found) ? `[${found.length}]` : shown(found),
    expected: `[${expected.length}]`,
  };
}

function isBranch(value: Json): value is Record<string, Json> {
  return typeof value === 'object' && value !== null;
}

/** A value in at most 60 characters. */
function shown(value: Json): string {
  const text = value === undefined ? '\u2014' : JSON.stringify(value);
  return text.length <= 60 ? text : `${[...text].slice(0, 59).join('')}\u2026`;
}
