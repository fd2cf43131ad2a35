/** What a column asks for, in points at the size at which it was measured. */
export interface Wish {
  /** Nothing is broken. */
  readonly natural: number;
  /** Broken at every place that allows it. */
  readonly least: number;
  /** Share of what is left over. */
  readonly breadth: number;
}

/**
 * Shares a width among columns.
 *
 * Where every natural width fits, what is left over goes by breadth, up to spare a column; where only the least widths fit, each grows towards its natural width, the shares by
 * breadth times what it lacks.
 *
 * Null where not even the least widths fit.
 *
 * Example: `shareWidth([{natural: 90, least: 20, breadth: 1}, {natural: 30, least: 30, breadth: 1}], 100, 0)` is `[70, 30]`.
 */
export function shareWidth(wishes: readonly Wish[], width: number, spare: number): number[] | null {
  const natural = sum(wishes.map((wish) => wish.natural));
  if (natural <= width) {
    const breadth = sum(wishes.map((wish) => wish.breadth));
    return wishes.map((wish) => wish.natural + Math.min(spare, ((width - natural) * wish.breadth) / breadth));
  }
  const least = sum(wishes.map((wish) => wish.least));
  if (least > width) return null;
  return grow(wishes, width - least);
}

/** Adds room to the least widths, none beyond its natural width. */
function grow(wishes: readonly Wish[], room: number): number[] {
  const widths = wishes.map((wish) => wish.least);
  let left = room;
  for (let round = 0; round < wishes.length && left > 1e-6; round++) {
    const lacks = wishes.map((wish, i) => wish.natural - (widths[i] as number));
    const claims = lacks.map((lack, i) => (lack > 1e-9 ? lack * (wishes[i] as Wish).breadth : 0));
    const all = sum(claims);
    if (all === 0) break;
    const given = claims.map((claim, i) => Math.min(lacks[i] as number, (left * claim) / all));
    for (const [i, more] of given.entries()) widths[i] = (widths[i] as number) + more;
    left -= sum(given);
  }
  return widths;
}

/**
 * Cuts columns that cannot stand side by side into groups that can, each led by the first column: no more groups than it takes, and about as much in each.
 *
 * The first column takes at most 0.4 of the width. A column that is too wide on its own stands alone and breaks inside its words.
 *
 * Example: four columns of least width 40 in a width of 100 give `[[0, 1], [0, 2], [0, 3]]`.
 */
export function groupColumns(wishes: readonly Wish[], width: number): number[][] {
  const first = Math.min(wishes[0]?.least ?? 0, FIRST * width);
  const fewest = fillGroups(wishes, first, width);
  let best = fewest;
  let low = first;
  let high = width;
  for (let step = 0; step < 20; step++) {
    const middle = (low + high) / 2;
    const groups = fillGroups(wishes, first, middle);
    if (groups.length > fewest.length) low = middle;
    else {
      best = groups;
      high = middle;
    }
  }
  return best;
}

/** The most that the first column takes of the width where columns are cut into groups. */
export const FIRST = 0.4;

function fillGroups(wishes: readonly Wish[], first: number, width: number): number[][] {
  const groups: number[][] = [];
  let group = [0];
  let used = first;
  for (const [i, wish] of wishes.entries()) {
    if (i === 0) continue;
    if (group.length > 1 && used + wish.least > width) {
      groups.push(group);
      group = [0];
      used = first;
    }
    group.push(i);
    used += wish.least;
  }
  return [...groups, group];
}

/** Widths for a group whose least widths may not fit: those that ask for most give way. */
export function squeezeWidth(wishes: readonly Wish[], width: number): number[] {
  const shared = shareWidth(wishes, width, 0);
  if (shared !== null) return shared;
  let high = Math.max(...wishes.map((wish) => wish.least));
  let low = 0;
  for (let step = 0; step < 50; step++) {
    const middle = (low + high) / 2;
    if (sum(wishes.map((wish) => Math.min(wish.least, middle))) > width) high = middle;
    else low = middle;
  }
  return wishes.map((wish) => Math.min(wish.least, low));
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}
