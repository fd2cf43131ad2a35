import { componentsOf } from '../numbers/components';
import { pow } from '../numbers/elementary';
import type { Block, Known, Slope, Tied } from './linked-parts';
import { type Links, type Parameter, type PlacedPart, partVariances } from './structure';
import { formKindOf, formOf, formSlopesOf, joinedRanks } from './structure-forms';
import { type Chain, chainsOf } from './structure-rho';

/**
 * What ties the cells of a structure together: connected components over all its parts, and Omega with its derivatives on each of them.
 *
 * Null where no part ties two cells together.
 */
export function linksOf(parts: readonly PlacedPart[], count: number): Links | null {
  const chains = parts.map(({ part }) => (part.link ? chainsOf(part.link, count) : []));
  if (chains.every(({ length }) => length === 0)) return null;
  const blocks = blocksOf(parts, chains, count);
  const kinds = blocks.map(formKindOf);
  const joined = joinedRanks(blocks, kinds);
  const knownAt = remembered(parts);
  const square = (b: number) => new Float64Array(sizeOf(blocks[b] as Block) * sizeOf(blocks[b] as Block));
  return {
    blocks: blocks.map(({ cells }) => cells),
    blockAt: (theta, b, into = square(b)) => omegaOf(blocks[b] as Block, knownAt(theta), { count, into }),
    blockDerivativesAt: (theta, b, room = () => square(b)) =>
      derivativesOf(blocks[b] as Block, knownAt(theta), { count, room }),
    kinds,
    together: joined && {
      cells: joined.cells,
      formAt: (theta) => formOf('ranks', joined, knownAt(theta)),
      formSlopesAt: (theta) => formSlopesOf('ranks', joined, knownAt(theta)),
    },
    formAt: (theta, b) => formOf(kinds[b] ?? null, blocks[b] as Block, knownAt(theta)),
    formSlopesAt: (theta, b) => formSlopesOf(kinds[b] ?? null, blocks[b] as Block, knownAt(theta)),
  };
}

function sizeOf({ cells }: Block): number {
  return cells.length;
}

/** Connected components of two or more cells, in the order of their first cell. */
function blocksOf(parts: readonly PlacedPart[], chains: readonly (readonly Chain[])[], count: number): Block[] {
  const firstOf = componentsOf(
    count,
    chains.flat().map(({ cells }) => cells),
  );
  const members = new Map<number, number[]>();
  for (const [g, first] of firstOf.entries()) {
    const own = members.get(first);
    if (own) own.push(g);
    else members.set(first, [g]);
  }
  const placeOf = new Int32Array(count);
  const byRoot = new Map<number, { cells: Int32Array; tied: { placed: PlacedPart; chains: Chain[] }[] }>();
  for (const [first, cells] of members) {
    if (cells.length < 2) continue;
    for (const [place, g] of cells.entries()) placeOf[g] = place;
    byRoot.set(first, { cells: Int32Array.from(cells), tied: parts.map((placed) => ({ placed, chains: [] })) });
  }
  for (const [p, own] of chains.entries())
    for (const chain of own)
      byRoot
        .get(firstOf[chain.cells[0] as number] as number)
        ?.tied[p]?.chains.push({ ...chain, cells: chain.cells.map((g) => placeOf[g] as number) });
  return [...byRoot.values()];
}

/** Variances at theta, kept until another theta is asked for: blocks are asked for one after the other. */
function remembered(parts: readonly PlacedPart[]): (theta: Float64Array) => Known {
  let last: Known | null = null;
  return (theta) => {
    if (last && sameNumbers(last.theta, theta)) return last;
    const held = theta.slice();
    const variances = parts.map((placed) => partVariances(placed, held));
    let slopes: (readonly Slope[])[] | null = null;
    const made = ({ part, at }: PlacedPart): Slope[] =>
      part
        .slopesAt(held.subarray(at, at + part.parameters.length))
        .map((values) => ({ values, roots: values.map(Math.sqrt) }));
    last = {
      theta: held,
      variances,
      roots: variances.map((own) => own.map(Math.sqrt)),
      slopes: () => (slopes ??= parts.map(made)),
    };
    return last;
  };
}

function sameNumbers(a: Float64Array, b: Float64Array): boolean {
  return a.length === b.length && a.every((value, i) => Object.is(value, b[i]));
}

/** Root of a product of two variances, exact where they are equal. */
function geometric(a: number, b: number): number {
  return a === b ? a : Math.sqrt(a) * Math.sqrt(b);
}

/** What stands at a pair of places that a part ties together: its correlation, or the slope of that by rho, times what the two cells have of a level. */
interface Pairs {
  readonly block: Block;
  readonly tied: Tied;
  readonly theta: Float64Array;
  readonly count: number;
  readonly by: 'correlation' | 'slope';
  /** Of every cell, and its root: the pair has the root of the product. */
  readonly values: Float64Array;
  readonly roots: Float64Array;
  /** The pair has the slope of that root instead, `values` being the cells' slopes and these their variances. */
  readonly growing: Float64Array | null;
}

/** Adds a part's pairs i < j to the upper triangle of n x n. A matrix has its own entries. */
function addPairs(into: Float64Array, pairs: Pairs): void {
  const { tied, theta } = pairs;
  if (tied.placed.part.link?.kind === 'matrix') {
    if (pairs.by === 'correlation') addEntries(into, pairs, matrixLevel(tied.placed, theta));
    return;
  }
  const rho = tied.placed.rhoAt < 0 ? 1 : (theta[tied.placed.rhoAt] as number);
  const serial = tied.placed.part.link?.kind === 'serial';
  for (const chain of tied.chains) addChain(into, pairs, { chain, rho, serial });
}

function addChain(
  into: Float64Array,
  pairs: Pairs,
  { chain: { cells, gaps }, rho, serial }: { readonly chain: Chain; readonly rho: number; readonly serial: boolean },
): void {
  const { values, roots, growing } = pairs;
  const places = pairs.block.cells;
  const n = places.length;
  const bySlope = pairs.by === 'slope';
  const steps = serial ? gaps.map((gap) => (gap === 1 ? rho : pow(rho, gap))) : gaps;
  for (let a = 0; a < cells.length; a++) {
    const i = cells[a] as number;
    const g = places[i] as number;
    const value = values[g] as number;
    const root = roots[g] as number;
    let correlation = serial ? 1 : rho;
    let distance = 0;
    for (let c = a + 1; c < cells.length; c++) {
      const j = cells[c] as number;
      const h = places[j] as number;
      if (serial) {
        correlation *= steps[c - 1] as number;
        distance += gaps[c - 1] as number;
      }
      const other = values[h] as number;
      let level = value === other ? value : root * (roots[h] as number);
      if (growing) level = geometricSlope([value, other], [growing[g] as number, growing[h] as number]);
      const factor = bySlope ? (serial ? serialSlope(correlation, distance, rho) : 1) : correlation;
      const at = i < j ? i * n + j : j * n + i;
      into[at] = (into[at] as number) + factor * level;
    }
  }
}

/** A matrix's own entries times its level. */
function addEntries(into: Float64Array, { block: { cells }, tied, count }: Pairs, level: number): void {
  const { link } = tied.placed.part;
  if (link?.kind !== 'matrix') return;
  const n = cells.length;
  for (const { cells: places } of tied.chains)
    for (let a = 0; a < places.length; a++)
      for (let c = a + 1; c < places.length; c++) {
        const [i, j] = [places[a] as number, places[c] as number];
        const entry = link.entries[(cells[i] as number) * count + (cells[j] as number)] as number;
        if (entry !== 0) into[i * n + j] = (into[i * n + j] as number) + level * entry;
      }
}

/** d rho^distance / d rho; 0 at rho = 0 where it has none. */
function serialSlope(correlation: number, distance: number, rho: number): number {
  if (rho === 0) return distance === 1 ? 1 : 0;
  return (distance / rho) * correlation;
}

/** Omega of a block; into: n x n, of zeros. */
function omegaOf(block: Block, { theta, variances, roots }: Known, { count, into }: Room): Float64Array {
  const { cells, tied } = block;
  const n = cells.length;
  for (let p = 0; p < tied.length; p++) {
    const own = variances[p] as Float64Array;
    for (let i = 0; i < n; i++) into[i * n + i] = (into[i * n + i] as number) + (own[cells[i] as number] as number);
    addPairs(into, {
      ...{ block, tied: tied[p] as Tied, theta, count, by: 'correlation', growing: null },
      ...{ values: own, roots: roots[p] as Float64Array },
    });
  }
  return mirrored(into, n);
}

/** G, and where a matrix is to stand. */
interface Room {
  readonly count: number;
  readonly into: Float64Array;
}

/** The factor of a matrix's entries. */
function matrixLevel({ part, at }: PlacedPart, theta: Float64Array): number {
  return part.parameters.length === 0 ? 1 : (theta[at] as number);
}

/** Copies the upper triangle to the lower. */
function mirrored(square: Float64Array, n: number): Float64Array {
  for (let i = 0; i < n; i++) for (let j = i + 1; j < n; j++) square[j * n + i] = square[i * n + j] as number;
  return square;
}

/** The derivatives of a block that are asked for. */
function derivativesOf(
  block: Block,
  known: Known,
  { count, room }: { readonly count: number; readonly room: (parameter: number) => Float64Array | null },
): (Float64Array | null)[] {
  const all: (Float64Array | null)[] = [];
  for (let p = 0; p < block.tied.length; p++) {
    const { part, rhoAt } = (block.tied[p] as Tied).placed;
    for (let i = 0; i < part.parameters.length; i++) {
      const into = room(all.length);
      all.push(into && partDerivative(block, known, { count, into, p, i }));
    }
    if (rhoAt < 0) continue;
    const into = room(all.length);
    all.push(into && rhoDerivative(block, known, { count, into, p }));
  }
  return all;
}

/** dOmega by a parameter of the variances: a level's is the part with its slopes for variances, so that it may be 0. */
function partDerivative(
  block: Block,
  { theta, variances, slopes }: Known,
  { count, into, p, i: own }: Room & { readonly p: number; readonly i: number },
): Float64Array | null {
  const { cells } = block;
  const tied = block.tied[p] as Tied;
  const { role } = tied.placed.part.parameters[own] as { readonly role: Parameter['role'] };
  const { values, roots } = (slopes()[p] as readonly Slope[])[own] as Slope;
  const n = cells.length;
  let any = false;
  for (let i = 0; i < n; i++) {
    const slope = values[cells[i] as number] as number;
    into[i * n + i] = slope;
    any ||= slope !== 0;
  }
  if (!any) return null;
  const isLevel = role === 'scale' || role === 'between' || role === 'shared';
  const growing = isLevel ? null : (variances[p] as Float64Array);
  const pairs = { block, tied, theta, count, by: 'correlation', values, roots, growing } as const;
  if (tied.placed.part.link?.kind === 'matrix') addEntries(into, pairs, 1);
  else addPairs(into, pairs);
  return mirrored(into, n);
}

/** d (v w)^1/2 where dv = a and dw = b; at a variance of 0, where it has none, that of two equal growths. */
function geometricSlope([a, b]: readonly [number, number], [v, w]: readonly [number, number]): number {
  if (v === w && a === b) return a;
  if (v > 0 && w > 0) return (a * Math.sqrt(w / v) + b * Math.sqrt(v / w)) / 2;
  return v === 0 && w === 0 && a > 0 && b > 0 ? geometric(a, b) : 0;
}

function rhoDerivative(
  block: Block,
  { theta, variances, roots }: Known,
  { count, into, p }: Room & { readonly p: number },
): Float64Array | null {
  const tied = block.tied[p] as Tied;
  if (tied.chains.length === 0) return null;
  addPairs(into, {
    ...{ block, tied, theta, count, by: 'slope', growing: null },
    ...{ values: variances[p] as Float64Array, roots: roots[p] as Float64Array },
  });
  return mirrored(into, block.cells.length);
}
