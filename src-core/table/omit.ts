import { pairAt } from '../numbers/decimals';
import { fromNumber, subtract } from '../numbers/double-double';
import type { Omit } from '../protocol/plan';
import type { Column } from './column';
import { composed } from './declarations';

/** The rule that takes each row out, the first that does; null for rows left. */
export type OmittedBy = readonly (Omit | null)[];

/**
 * Which rows the plan's rules leave out.
 *
 * Values in a list compare as text as it stands (normal form C), a JSON number with the column's number; the ends of a range are inclusive: numbers with the
 * column's numbers, texts in code-point order; an end that is left out is open. What has no number lies in no range of numbers.
 *
 * Example: {from: null, to: 2018} takes out the years up to 2018.
 */
export function omittedRows(
  rows: number,
  rules: readonly { readonly omit: Omit; readonly column: Column }[],
): OmittedBy {
  const by: (Omit | null)[] = Array.from({ length: rows }, () => null);
  for (const { omit, column } of rules) {
    const matches = matcher(omit, column);
    for (let row = 0; row < rows; row++) if (by[row] === null && matches(row)) by[row] = omit;
  }
  return by;
}

function matcher({ is }: Omit, column: Column): (row: number) => boolean {
  const text = (row: number) => composed(column.texts[row] as string);
  if (Array.isArray(is)) {
    const texts = new Set(is.flatMap((value) => (typeof value === 'string' ? [composed(value)] : [])));
    const numbers = is.filter((value) => typeof value === 'number');
    return (row) => texts.has(text(row)) || numbers.some((value) => comparison(column, row, value) === 0);
  }
  const from = bound(is.from, column, text);
  const to = bound(is.to, column, text);
  return (row) => {
    const [low, high] = [from(row), to(row)];
    return low !== null && low >= 0 && high !== null && high <= 0;
  };
}

/** Sign of a row's value less an end of a range, null where the two cannot be compared; `open` gives 0. */
function bound(
  end: number | string | null,
  column: Column,
  text: (row: number) => string,
): (row: number) => number | null {
  if (end === null) return () => 0;
  if (typeof end === 'number') return (row) => comparison(column, row, end);
  const limit = composed(end);
  return (row) => inCodePointOrder(text(row), limit);
}

/** Sign of the column's number less another; null where it has none. */
function comparison(column: Column, row: number, other: number): number | null {
  const { values } = column.numbers();
  const [difference] = subtract(pairAt(values, row), fromNumber(other));
  if (Number.isNaN(difference)) return null;
  // A number of the plan is a double: it means the text that reads to the same double.
  return values.high[row] === other ? 0 : Math.sign(difference);
}

/** Order of two texts by code points, as a negative, zero or positive number. */
export function inCodePointOrder(a: string, b: string): number {
  const [left, right] = [[...a], [...b]];
  for (let i = 0; i < Math.min(left.length, right.length); i++) {
    const apart = (left[i]?.codePointAt(0) ?? 0) - (right[i]?.codePointAt(0) ?? 0);
    if (apart !== 0) return apart;
  }
  return left.length - right.length;
}
