import type { Pair } from '../numbers/double-double';
import { comparable } from './declarations';

/** Ends of a value known as an interval only, null where it is open, in the column's own unit. */
export type Ends = readonly [low: number | null, high: number | null];

const below = /^(?:<=|<|\u2264)(.+)$/u;
const above = /^(?:>=|>|\u2265)(.+)$/u;
const between = /^(.*?[\d.,])\s*(?:-|\u2013|\u2014|\.\.|to)\s*([+\u2212-]?[\d.,].*)$/u;

/**
 * The ends that an interval's text names.
 *
 * "<5", "≤5" and "<=5" are open below, ">100" above; "1-9", "1–9", "1..9" and "1 to 9" have both. A text that names no numbers is open on both sides.
 * Strict and loose bounds have the same end.
 *
 * Example: `intervalEnds('1-9', read)` is [1, 9].
 */
export function intervalEnds(text: string, read: (text: string) => Pair | null): Ends {
  const key = comparable(text);
  const number = (part: string | undefined) => (part === undefined ? null : (read(part)?.[0] ?? null));
  const pair = between.exec(key);
  if (pair) {
    const [low, high] = [number(pair[1]), number(pair[2])];
    if (low !== null && high !== null) return [low, high];
  }
  return [number(above.exec(key)?.[1]), number(below.exec(key)?.[1])];
}
