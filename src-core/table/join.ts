import { nearestName } from '../protocol/nearest';
import { problem } from '../protocol/outcome';
import type { Join } from '../protocol/plan';
import { below } from '../protocol/pointer';
import type { DataUsed } from '../protocol/result';
import type { SourceColumn, SourceTable } from '../protocol/source';
import { type Column, columnOf } from './column';
import { composed } from './declarations';
import { type Frame, noteUnknownCodes } from './frame';

type Unmatched = DataUsed['unmatched'][number];

/**
 * Joins a file, many of our rows to one of theirs; every column of theirs but the keys comes in.
 *
 * Keys are compared as text in normal form C: "5" does not match "05". A key that occurs twice on their side is noted with its rows, a name that is
 * taken with the files that hold it. Returned: the keys without a partner, ours first, each once; ours have missing values.
 */
export function joinTable(
  frame: Frame,
  { join, table, at }: { readonly join: Join; readonly table: SourceTable; readonly at: string },
): readonly Unmatched[] {
  noteUnknownCodes(frame, { names: table.columns.map(({ name }) => name), read: join.read, at: `${at}/read` });
  const keys = keysOf(frame, { join, table, at });
  if (keys === null) return [];
  const theirs = rowsByKey(keys.theirs, table.rows);
  noteRepeated(frame, { join, keys, rows: theirs, at });
  const ours = keyTexts(keys.ours, frame.rows);
  const rows = Int32Array.from(ours, (key) => theirs.get(key)?.[0] ?? -1);
  takeColumns(frame, { join, table, rows, at, keys });
  return unmatched({ file: join.file, keys, ours, theirs });
}

interface Keys {
  readonly ours: readonly Column[];
  readonly theirs: readonly SourceColumn[];
}

interface Joining {
  readonly join: Join;
  readonly table: SourceTable;
  readonly at: string;
}

function keysOf(frame: Frame, { join, table, at }: Joining): Keys | null {
  const names = table.columns.map(({ name }) => name);
  const pairs = Object.entries(join.on).map(([ours, theirs]) => {
    const place = below(at, 'on', ours);
    const mine = frame.find(ours, place);
    const named = table.columns.filter(({ name }) => composed(name) === composed(theirs));
    const [first, twin] = named;
    if (!first) {
      const facts = { found: theirs, nearest: nearestName(theirs, names) };
      frame.problems.push(problem('unknown-column', facts, place));
    } else if (twin) frame.problems.push(problem('name-clash', { column: theirs, files: [join.file] }, `${at}/file`));
    return mine && first && !twin ? { mine, first } : null;
  });
  const found = pairs.filter((pair) => pair !== null);
  if (found.length < pairs.length) {
    frame.complete = false;
    return null;
  }
  return { ours: found.map(({ mine }) => mine), theirs: found.map(({ first }) => first) };
}

/** One text a row that tells keys apart whatever stands in them. */
function keyTexts(columns: readonly { readonly texts: readonly string[] }[], rows: number): string[] {
  return Array.from({ length: rows }, (_, row) =>
    columns.length === 1
      ? composed(columns[0]?.texts[row] as string)
      : JSON.stringify(columns.map(({ texts }) => composed(texts[row] as string))),
  );
}

function rowsByKey(columns: readonly SourceColumn[], rows: number): Map<string, number[]> {
  const byKey = new Map<string, number[]>();
  for (const [row, key] of keyTexts(columns, rows).entries()) {
    const found = byKey.get(key);
    if (found) found.push(row);
    else byKey.set(key, [row]);
  }
  return byKey;
}

function keyAt(columns: readonly { readonly name: string; readonly texts: readonly string[] }[], row: number) {
  return Object.fromEntries(columns.map(({ name, texts }) => [name, texts[row] as string]));
}

function noteRepeated(
  frame: Frame,
  {
    join,
    keys,
    rows,
    at,
  }: { readonly join: Join; readonly keys: Keys; readonly rows: Map<string, number[]>; readonly at: string },
): void {
  const repeated = [...rows.values()].find(({ length }) => length > 1);
  if (!repeated) return;
  const facts = {
    file: join.file,
    key: keyAt(keys.theirs, repeated[0] as number),
    rows: repeated.map((row) => row + 1),
  };
  frame.problems.push(problem('join-keys-repeated', facts, at));
}

function takeColumns(
  frame: Frame,
  { join, table, rows, at, keys }: Joining & { readonly rows: Int32Array; readonly keys: Keys },
): void {
  const coming = table.columns.filter((column) => !keys.theirs.includes(column));
  const clash = coming.find(({ name }) => frame.holder(name) !== null);
  if (clash) {
    const files = [frame.holder(clash.name)?.file ?? join.file, join.file];
    frame.problems.push(problem('name-clash', { column: clash.name, files }, at));
  }
  const free = coming.filter(({ name }) => frame.holder(name) === null);
  for (const source of free)
    frame.take(columnOf({ source, read: join.read, file: join.file, fileAt: `${at}/file`, rows }));
}

function unmatched(of: {
  readonly file: string;
  readonly keys: Keys;
  readonly ours: readonly string[];
  readonly theirs: ReadonlyMap<string, readonly number[]>;
}): Unmatched[] {
  const { file, keys, ours, theirs } = of;
  const known = new Set(ours);
  const lonely = new Map<string, number>();
  for (const [row, key] of ours.entries()) if (!theirs.has(key) && !lonely.has(key)) lonely.set(key, row);
  const left = [...theirs].flatMap(([key, [row]]) => (known.has(key) || row === undefined ? [] : [row]));
  return [
    ...[...lonely.values()].map((row): Unmatched => ({ file, side: 'ours', key: keyAt(keys.ours, row) })),
    ...left.map((row): Unmatched => ({ file, side: 'theirs', key: keyAt(keys.theirs, row) })),
  ];
}
