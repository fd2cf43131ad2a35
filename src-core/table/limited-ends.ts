import type { Plan } from '../protocol/plan';
import type { Column } from './column';
import type { Ends } from './interval';

/** What a value is known to lie between, both ends included; infinite where open. */
export type Between = readonly [low: number, high: number];

/** What a limit or an interval says of a column, row by row. */
export interface EndsOf {
  /** The ends of a row's value, equal where it is known; null where nothing is known of it. */
  readonly at: (row: number) => Between | null;
  /** True where the row has no number of its own. */
  readonly lacks: (row: number) => boolean;
}

/**
 * The ends of a column's values.
 *
 *     a number, rounding to a base   x - base / 2 to x + base / 2; a true zero stays 0
 *     suppressed                     the limit's two ends
 *     an interval                    its own ends, an open one the limit's; null where neither names any
 *
 * limit: of this column, null without one; range: what any value of the column can be (a share 0 to 1): ends beyond it are drawn in.
 * A value that is missing, blank, not collected or not applicable has no ends.
 *
 * Example: 12.5 under a rounding to 1 lies between 12 and 13; "<5" of a count between 0 and 5.
 */
export function endsOf(
  column: Column,
  { limit, range }: { readonly limit: Plan['data']['limits'][string] | null; readonly range: (row: number) => Between },
): EndsOf {
  const { values, gaps, status, ends } = column.numbers();
  const stated: Ends | null = limit && 'suppressed' in limit ? limit.suppressed : null;
  const half = limit && 'rounding' in limit ? limit.rounding / 2 : 0;
  const raw = (row: number): Between | null => {
    const gap = gaps[row] ?? null;
    if (gap === null) {
      const value = values.high[row] as number;
      if (Number.isNaN(value)) return null;
      return half === 0 || status[row] === 'true-zero' ? [value, value] : [value - half, value + half];
    }
    if (gap === 'interval') {
      const [low, high] = ends.get(row) ?? [null, null];
      if (low === null && high === null && stated === null) return null;
      return open([low ?? stated?.[0] ?? null, high ?? stated?.[1] ?? null]);
    }
    return gap.startsWith('suppressed') && stated !== null ? open(stated) : null;
  };
  return {
    lacks: (row) => (gaps[row] ?? null) !== null,
    at: (row) => {
      const found = raw(row);
      if (found === null || found[0] === found[1]) return found;
      const [least, most] = range(row);
      const drawn: Between = [Math.max(found[0], least), Math.min(found[1], most)];
      return drawn[0] <= drawn[1] ? drawn : null;
    },
  };
}

function open([low, high]: Ends): Between {
  return [low ?? Number.NEGATIVE_INFINITY, high ?? Number.POSITIVE_INFINITY];
}
