import { problem } from '../protocol/outcome';
import type { Caution } from '../protocol/result';
import type { Column } from './column';
import { comparable } from './declarations';
import type { Frame } from './frame';

/** What joins the parts of a label. */
const LABEL_JOINT = ' · ';

/**
 * The label of every row: the label columns' texts joined, or the data row's number where there are none. A blank part is empty text.
 *
 * Example: the columns parish and year give "Elm · 2021".
 */
export function labelsOf(rows: number, columns: readonly Column[] | null): string[] {
  return Array.from({ length: rows }, (_, row) =>
    columns === null || columns.length === 0
      ? String(row + 1)
      : columns.map(({ texts }) => texts[row] as string).join(LABEL_JOINT),
  );
}

/**
 * A label as labels are compared: in normal form C, the outer spaces of its parts left out; hidden characters count.
 *
 * Example: "Beck  · 2021" and "Beck · 2021" are one label.
 */
export function labelKey(label: string): string {
  return comparable(label.split(LABEL_JOINT).map(comparable).join(LABEL_JOINT));
}

/** Notes the first label that stands in more than one of the rows. */
export function noteRepeatedLabel(frame: Frame, rows: readonly number[]): void {
  const holding = new Map<string, number[]>();
  for (const row of rows) {
    const key = labelKey(frame.labels[row] as string);
    const found = holding.get(key);
    if (found) found.push(row);
    else holding.set(key, [row]);
  }
  const repeated = [...holding.values()].find(({ length }) => length > 1);
  if (!repeated) return;
  const facts = { label: frame.labels[repeated[0] as number] as string, rows: repeated.map((row) => row + 1) };
  frame.problems.push(problem('repeated-label', facts, '/roles/label'));
}

/** Characters that nobody sees: format characters, joiners, fillers, variation selectors. */
const hidden = /\p{Default_Ignorable_Code_Point}|\p{Cf}/gu;

/**
 * A caution for every set of labels that differ by hidden characters alone, with their rows.
 *
 * Example: "Elm" and "El\u200bm" are two labels, and look like one.
 */
export function lookAlikes(labels: readonly string[], rows: readonly number[]): Caution[] {
  const seen = new Map<string, number[]>();
  for (const row of rows) {
    const bare = labelKey((labels[row] as string).replace(hidden, '').replace(/\p{Zs}/gu, ' '));
    const found = seen.get(bare);
    if (found) found.push(row);
    else seen.set(bare, [row]);
  }
  return [...seen.values()]
    .filter(({ length }) => length > 1)
    .map((alike) => ({
      code: 'labels-look-alike',
      group: 'for-record',
      facts: { labels: alike.map((row) => labels[row] as string), rows: alike.map((row) => row + 1) },
    }));
}
