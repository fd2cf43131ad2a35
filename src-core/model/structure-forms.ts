import type { BlockForm, RankOne, RanksSlope, SerialForm, SerialSlope } from '../algebra/block-form';
import { type RankLayout, rankLayoutOf, thicknessOf } from '../algebra/rank-layout';
import { pow } from '../numbers/elementary';
import type { Block, Known, Tied } from './linked-parts';
import type { Chain } from './structure-rho';

/** Below this share of the squared block, the places of its rank-one terms are worth taking one by one. */
const THIN = 1 / 8;

/** What a block can be made of, whatever the parameters: one chain, a diagonal with rank-one terms, or nothing but its full matrix. */
export type FormKind = BlockForm['kind'] | null;

/**
 * One serial part alone on the block is a chain; common shocks and exchangeable correlations are rank-one terms, unless they cross so often that the
 * full block costs less.
 */
export function formKindOf({ cells, tied }: Block): FormKind {
  const tying = tied.filter(({ chains }) => chains.length > 0);
  const kinds = tying.map(({ placed }) => placed.part.link?.kind);
  if (kinds.includes('matrix')) return null;
  if (kinds.includes('serial')) return tied.length === 1 && tied[0]?.chains.length === 1 ? 'serial' : null;
  const thickness = thicknessOf(layoutAt({ cells, tied }));
  return thickness <= Math.max(cells.length, THIN * cells.length * cells.length) ? 'ranks' : null;
}

const places = new WeakMap<Chain, Int32Array>();
const layouts = new WeakMap<Block, RankLayout>();

/** The places of a chain, one list for good: terms are told apart by it. */
function placesOf(chain: Chain): Int32Array {
  const known = places.get(chain) ?? Int32Array.from(chain.cells);
  places.set(chain, known);
  return known;
}

function layoutAt(block: Block): RankLayout {
  const known =
    layouts.get(block) ??
    rankLayoutOf(
      block.cells.length,
      block.tied.flatMap(({ chains }) => chains.map(placesOf)),
    );
  layouts.set(block, known);
  return known;
}

/**
 * Blocks of ranks as one: their terms do not touch, and one list of them costs less than many short ones. Null where there are fewer than two.
 */
export function joinedRanks(blocks: readonly Block[], kinds: readonly FormKind[]): Block | null {
  const own = blocks.filter((_, b) => kinds[b] === 'ranks');
  if (own.length < 2) return null;
  const cells = Int32Array.from(own.flatMap((block) => [...block.cells]));
  let offset = 0;
  const tied = (own[0] as Block).tied.map(({ placed }): { placed: Tied['placed']; chains: Chain[] } => ({
    placed,
    chains: [],
  }));
  for (const block of own) {
    for (const [p, { chains }] of block.tied.entries())
      for (const chain of chains) tied[p]?.chains.push({ ...chain, cells: chain.cells.map((i) => i + offset) });
    offset += block.cells.length;
  }
  return { cells, tied };
}

/** The block at theta by its form; null where it has none, or a variance of 0 leaves a slope undefined. */
export function formOf(kind: FormKind, block: Block, known: Known): BlockForm | null {
  if (kind === 'serial') return chainForm(block, known);
  if (kind !== 'ranks' || vanishes(block, known)) return null;
  const diagonal = new Float64Array(block.cells.length);
  const ranks: RankOne[] = [];
  for (const [p, tied] of block.tied.entries()) {
    const own = valuesOf(block, known.variances[p] as Float64Array);
    const rho = rhoOf(tied, known.theta);
    addTo(diagonal, own, { tied, alone: 1 - rho });
    for (const chain of tied.chains) ranks.push(rankOf(own, chain, rho));
  }
  return { kind: 'ranks', diagonal, ranks, layout: layoutAt(block) };
}

/** Derivatives of a block that `formOf` has given a form, one a parameter; null where 0. */
export function formSlopesOf(kind: FormKind, block: Block, known: Known): (RanksSlope | SerialSlope | null)[] {
  return block.tied.flatMap((tied, p) => {
    const { part, rhoAt } = tied.placed;
    const variances = valuesOf(block, known.variances[p] as Float64Array);
    const own = part.parameters.map(({ role }, i) => {
      const slope = valuesOf(block, known.slopes()[p]?.[i]?.values as Float64Array);
      if (slope.every((value) => value === 0)) return null;
      if (kind === 'serial')
        return { by: 'variances', relative: slope.map((d, g) => d / (variances[g] as number)) } as const;
      const isLevel = role === 'scale' || role === 'between' || role === 'shared';
      return partSlope({ tied, slope, variances: isLevel ? null : variances, rho: rhoOf(tied, known.theta) });
    });
    if (rhoAt < 0) return own;
    const byRho = kind === 'serial' ? stepSlopes(tied, known.theta) : rhoSlope(tied, variances);
    return [...own, byRho];
  });
}

/** True where a variance that is no level of its own, as of a class, is 0 inside a group: the root of it has no slope. */
function vanishes({ cells, tied }: Block, { variances }: Known): boolean {
  return tied.some(({ placed, chains }, p) => {
    const levels = placed.part.parameters.every(
      ({ role }) => role === 'scale' || role === 'between' || role === 'shared',
    );
    return !levels && chains.length > 0 && cells.some((g) => variances[p]?.[g] === 0);
  });
}

function valuesOf({ cells }: Block, values: Float64Array): Float64Array {
  return Float64Array.from(cells, (g) => values[g] as number);
}

/** 1 for a common shock, which is a correlation of 1. */
function rhoOf({ placed }: Tied, theta: Float64Array): number {
  return placed.rhoAt < 0 ? 1 : (theta[placed.rhoAt] as number);
}

/** target += values, those inside a group by what is left to the cell alone. */
function addTo(target: Float64Array, values: Float64Array, of: { readonly tied: Tied; readonly alone: number }): void {
  const inside = new Uint8Array(target.length);
  for (const { cells } of of.tied.chains) for (const i of cells) inside[i] = 1;
  for (const [i, value] of values.entries()) target[i] = (target[i] as number) + (inside[i] ? of.alone * value : value);
}

/** rho root(v) root(v)' on a group; variances that are all the same stay as they are. */
function rankOf(variances: Float64Array, chain: Chain, rho: number): RankOne {
  const { cells } = chain;
  const own = placesOf(chain);
  const first = variances[cells[0] as number] as number;
  if (cells.every((i) => variances[i] === first))
    return { factor: rho * first, vector: new Float64Array(cells.length).fill(1), places: own };
  return { factor: rho, vector: Float64Array.from(cells, (i) => Math.sqrt(variances[i] as number)), places: own };
}

/** By a parameter of the part's variances. variances: null where they are the parameter times their slopes. */
function partSlope(of: {
  readonly tied: Tied;
  readonly slope: Float64Array;
  readonly variances: Float64Array | null;
  readonly rho: number;
}): RanksSlope {
  const { tied, slope, variances, rho } = of;
  const diagonal = new Float64Array(slope.length);
  addTo(diagonal, slope, { tied, alone: 1 - rho });
  const ranks = tied.chains.flatMap((chain): RankOne[] => {
    if (!variances) return [rankOf(slope, chain, rho)];
    const { cells } = chain;
    const own = placesOf(chain);
    const root = (i: number): number => Math.sqrt(variances[i] as number);
    const half = (i: number): number => (slope[i] as number) / root(i) / 2;
    // r h' + h r' as the difference of two squares.
    return [
      { factor: rho / 2, vector: Float64Array.from(cells, (i) => root(i) + half(i)), places: own },
      { factor: -rho / 2, vector: Float64Array.from(cells, (i) => root(i) - half(i)), places: own },
    ];
  });
  return { diagonal, ranks };
}

function rhoSlope(tied: Tied, variances: Float64Array): RanksSlope | null {
  if (tied.chains.length === 0) return null;
  const diagonal = new Float64Array(variances.length);
  for (const { cells } of tied.chains) for (const i of cells) diagonal[i] = -(variances[i] as number);
  return { diagonal, ranks: tied.chains.map((chain) => rankOf(variances, chain, 1)) };
}

function chainForm(block: Block, { theta, variances }: Known): SerialForm {
  const tied = block.tied[0] as Tied;
  const rho = rhoOf(tied, theta);
  const chain = tied.chains[0] as Tied['chains'][number];
  return {
    kind: 'serial',
    variances: valuesOf(block, variances[0] as Float64Array),
    order: Int32Array.from(chain.cells),
    steps: chain.gaps.map((gap) => (gap === 1 ? rho : pow(rho, gap))),
  };
}

/** d rho^gap / d rho of every step; 0 at rho = 0 where it has none. */
function stepSlopes(tied: Tied, theta: Float64Array): SerialSlope {
  const rho = rhoOf(tied, theta);
  const gaps = tied.chains[0]?.gaps ?? new Float64Array(0);
  const steps = gaps.map((gap) => (gap === 1 ? 1 : rho === 0 ? 0 : gap * (pow(rho, gap) / rho)));
  return { by: 'steps', steps };
}
