import type { Structure } from './structure';

/** Which cells are alike. */
export interface Alike {
  /** A group a cell, numbered as they first appear. */
  readonly groupOf: Int32Array;
  readonly groups: number;
}

/** Groups of cells: those of one group have one variance at every theta. */
export function alikeCells({ parts, count }: Pick<Structure, 'parts' | 'count'>): Alike {
  let alike: Alike = { groupOf: new Int32Array(count), groups: count > 0 ? 1 : 0 };
  for (const { part } of parts)
    for (const key of part.keys) {
      const own = codesOf(key);
      if (own.groups < 2) continue;
      alike = alike.groups < 2 ? own : together(alike, own);
    }
  return alike;
}

/** Cells that agree in both groupings. */
function together(a: Alike, b: Alike): Alike {
  const pairs = new Float64Array(a.groupOf.length);
  for (let g = 0; g < pairs.length; g++) pairs[g] = (a.groupOf[g] as number) * b.groups + (b.groupOf[g] as number);
  return codesOf(pairs);
}

/** Equal numbers, numbered as they first appear: a table of places that is searched from each number's bits on. */
function codesOf(values: ArrayLike<number>): Alike {
  const count = values.length;
  const groupOf = new Int32Array(count);
  const bits = new Int32Array(2);
  const number = new Float64Array(bits.buffer);
  let known = new Float64Array(512);
  let table = new Int32Array(1024).fill(-1);
  let groups = 0;
  const placeOf = (value: number): number => {
    number[0] = value;
    const mixed = Math.imul((bits[0] as number) ^ Math.imul(bits[1] as number, 0x85ebca6b), 0x9e3779b1);
    let place = (mixed ^ (mixed >>> 15)) & (table.length - 1);
    for (;;) {
      const code = table[place] as number;
      if (code < 0 || known[code] === value) return place;
      place = (place + 1) & (table.length - 1);
    }
  };
  for (let g = 0; g < count; g++) {
    const value = (values[g] as number) + 0; // one zero
    const place = placeOf(value);
    const code = table[place] as number;
    groupOf[g] = code < 0 ? groups : code;
    if (code >= 0) continue;
    table[place] = groups;
    known[groups++] = value;
    if (groups < known.length) continue;
    const wider = new Float64Array(2 * known.length);
    wider.set(known);
    known = wider;
    table = new Int32Array(2 * table.length).fill(-1);
    for (let i = 0; i < groups; i++) table[placeOf(known[i] as number)] = i;
  }
  return { groupOf, groups };
}
