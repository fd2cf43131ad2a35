/**
 * The valid name that is fewest single-character changes (one put in, taken out or replaced) away from what was found.
 *
 * Names are compared in Unicode normal form C, by code points; a tie goes to the name that stands first. null: there is no valid name.
 *
 *     nearestName('incom', ['rooms', 'income'])   // 'income'
 *
 * Source: Levenshtein 1966.
 */
export function nearestName(found: string, names: readonly string[]): string | null {
  let best: string | null = null;
  let fewest = Number.POSITIVE_INFINITY;
  for (const name of names) {
    const changes = changesBetween(found, name);
    if (changes < fewest) {
      best = name;
      fewest = changes;
    }
  }
  return best;
}

/** Longer names are told apart by their beginnings: a message of megabytes is not worth the time. */
const longest = 200;

function changesBetween(found: string, name: string): number {
  const from = [...found.normalize('NFC')].slice(0, longest);
  const to = [...name.normalize('NFC')].slice(0, longest);
  let above = Array.from({ length: to.length + 1 }, (_, j) => j);
  from.forEach((letter, i) => {
    const row = [i + 1];
    to.forEach((other, j) => {
      const replaced = (above[j] as number) + (letter === other ? 0 : 1);
      row.push(Math.min(replaced, (above[j + 1] as number) + 1, (row[j] as number) + 1));
    });
    above = row;
  });
  return above[to.length] as number;
}

/** True where two names are the same name: equal in Unicode normal form C. */
export function sameName(one: string, other: string): boolean {
  return one === other || one.normalize('NFC') === other.normalize('NFC');
}
