import type { BlockForm, RanksSlope, SerialSlope } from '../algebra/block-form';
import { freeParameters, type Links, type Structure } from '../model/structure';
import { log } from '../numbers/elementary';
import { unitOf } from './likelihood-place';
import { denseBlock, type LinkedBlock } from './linked-block';
import { ranksBlock } from './ranks-block';
import { serialBlock } from './serial-block';

/** One block and its cells. */
export interface Placed {
  readonly cells: Int32Array;
  readonly block: LinkedBlock;
}

/** Omega at one point, block by block, and what its derivatives by the free parameters do to whitened vectors. */
export interface LinkedPlace {
  readonly placed: readonly Placed[];
  /** 1 for a cell outside all blocks. */
  readonly alone: Uint8Array;
  /** Omega_gg. */
  readonly variances: Float64Array;
  /** ln det Omega. */
  readonly logOmega: number;
  /** Of each free parameter, as in `Likelihood`. */
  readonly units: () => Float64Array;
  /** d_a unit_a / v of each free parameter, length G: what M_a is for a cell alone. */
  readonly slopes: () => readonly Float64Array[];
}

/**
 * Omega factored block by block; null where it is not positive definite.
 *
 * middle: variances near Omega's own, by whose roots everything is counted.
 */
export function linkedPlace(of: {
  readonly structure: Structure;
  readonly theta: Float64Array;
  readonly middle: Float64Array;
}): LinkedPlace | null {
  const { structure, theta, middle } = of;
  const variances = structure.variancesAt(theta);
  if (!variances.every((v) => v > 0 && v < Infinity)) return null;
  const { units, slopes } = derivativesAt({ structure, theta, variances });
  const placed = blocksAt(of, units);
  if (!placed) return null;
  const alone = new Uint8Array(variances.length).fill(1);
  const { logs } = middleOf(middle);
  let logOmega = 0;
  for (const { cells, block } of placed) {
    logOmega += block.logDeterminant;
    for (let i = 0; i < cells.length; i++) {
      const g = cells[i] as number;
      alone[g] = 0;
      logOmega += logs[g] as number;
    }
  }
  for (let g = 0; g < alone.length; g++) if (alone[g]) logOmega += log(variances[g] as number);
  return { placed, alone, variances, logOmega, units, slopes };
}

interface Middle {
  readonly roots: Float64Array;
  readonly logs: Float64Array;
}

const middles = new WeakMap<Float64Array, Middle>();

/** Roots and logarithms of the middle variances, taken once. */
function middleOf(middle: Float64Array): Middle {
  const known = middles.get(middle);
  if (known) return known;
  const made = { roots: middle.map(Math.sqrt), logs: middle.map(log) };
  middles.set(middle, made);
  return made;
}

function blocksAt(
  { structure, theta, middle }: Parameters<typeof linkedPlace>[0],
  units: () => Float64Array,
): Placed[] | null {
  const { links } = structure;
  if (!links) return [];
  const free = freeParameters(structure);
  const { roots } = middleOf(middle);
  const known = { roots, free, units };
  const placed: Placed[] = [];
  const put = (cells: Int32Array, block: LinkedBlock | null): boolean => {
    if (block) placed.push({ cells, block });
    return block !== null;
  };
  const { together } = links;
  const joined = together?.formAt(theta) ?? null;
  if (together && joined) {
    const block = formBlock({ cells: together.cells, form: joined, slopes: () => together.formSlopesAt(theta) }, known);
    if (!put(together.cells, block)) return null;
  }
  const dense = denseBlocks({ links, theta }, known);
  for (const [b, cells] of links.blocks.entries()) {
    if (joined && links.kinds[b] === 'ranks') continue;
    const form = links.formAt(theta, b);
    const block = form ? formBlock({ cells, form, slopes: () => links.formSlopesAt(theta, b) }, known) : dense(b);
    if (!put(cells, block)) return null;
  }
  return placed;
}

/** What all blocks of one Omega are counted in, and which parameters are asked for. */
interface Counted {
  /** Of the middle variances, by cell. */
  readonly roots: Float64Array;
  readonly free: readonly number[];
  readonly units: () => Float64Array;
}

/** Full blocks: their matrices stand one after the other in one stretch of memory, and so do those of each derivative. */
function denseBlocks(
  { links, theta }: { readonly links: Links; readonly theta: Float64Array },
  { roots, free, units }: Counted,
): (b: number) => LinkedBlock | null {
  const { offsets, total } = offsetsOf(links);
  let own: Float64Array | null = null;
  const bySlope = new Map<number, Float64Array>();
  const room = (b: number, all: () => Float64Array): Float64Array => {
    const { length } = links.blocks[b] as Int32Array;
    const from = offsets[b] as number;
    return from < 0 ? new Float64Array(length * length) : all().subarray(from, from + length * length);
  };
  const slopeRoom = (parameter: number): Float64Array => {
    const known = bySlope.get(parameter) ?? new Float64Array(total);
    bySlope.set(parameter, known);
    return known;
  };
  return (b) =>
    denseBlock({
      cells: links.blocks[b] as Int32Array,
      matrix: links.blockAt(
        theta,
        b,
        room(b, () => (own ??= new Float64Array(total))),
      ),
      roots,
      units,
      slopes: () => {
        const wanted = (i: number) => (free.includes(i) ? room(b, () => slopeRoom(i)) : null);
        const all = links.blockDerivativesAt(theta, b, wanted);
        return free.map((i) => all[i] ?? null);
      },
    });
}

const offsetsKnown = new WeakMap<Links, { readonly offsets: Float64Array; readonly total: number }>();

/** Where the full matrix of each block that always needs one begins; -1 for the others. */
function offsetsOf(links: Links): { readonly offsets: Float64Array; readonly total: number } {
  const known = offsetsKnown.get(links);
  if (known) return known;
  const offsets = new Float64Array(links.blocks.length);
  let total = 0;
  for (const [b, { length }] of links.blocks.entries()) {
    const full = links.kinds[b] === null;
    offsets[b] = full ? total : -1;
    if (full) total += length * length;
  }
  const made = { offsets, total };
  offsetsKnown.set(links, made);
  return made;
}

/** A block by its form, with the derivatives by all parameters. */
interface Formed {
  readonly cells: Int32Array;
  readonly form: BlockForm;
  readonly slopes: () => readonly (RanksSlope | SerialSlope | null)[];
}

function formBlock({ cells, form, slopes: ofAll }: Formed, counted: Counted): LinkedBlock | null {
  const roots = gathered(counted.roots, cells);
  const unit = (a: number): number => counted.units()[a] as number;
  const slopes = () => {
    const all = ofAll();
    return counted.free.map((i) => all[i] ?? null);
  };
  if (form.kind === 'serial')
    return serialBlock({
      form: { ...form, variances: perRoot(form.variances, roots) },
      slopes: () => slopes().map((slope, a) => (slope && 'by' in slope ? timesSerial(slope, unit(a)) : null)),
    });
  return ranksBlock({
    form: { ...form, ...perRoots(form, { roots, unit: 1 }), diagonal: perRoot(form.diagonal, roots) },
    slopes: () =>
      slopes().map((slope, a) => (slope && 'ranks' in slope ? perRoots(slope, { roots, unit: unit(a) }) : null)),
  });
}

function gathered(values: Float64Array, cells: Int32Array): Float64Array {
  const own = new Float64Array(cells.length);
  for (let i = 0; i < own.length; i++) own[i] = values[cells[i] as number] as number;
  return own;
}

function timesSerial(slope: SerialSlope, unit: number): SerialSlope {
  const times = (value: number): number => value * unit;
  return slope.by === 'steps'
    ? { by: 'steps', steps: slope.steps.map(times) }
    : { by: 'variances', relative: slope.relative.map(times) };
}

/** A diagonal and rank-one terms in units of the roots, times a unit. */
function perRoots(
  { diagonal, ranks }: RanksSlope,
  { roots, unit }: { readonly roots: Float64Array; readonly unit: number },
): RanksSlope {
  return {
    diagonal: diagonal && perRoot(diagonal, roots).map((value) => value * unit),
    ranks: ranks.map(({ factor, vector, places }) => ({
      factor: factor * unit,
      vector: vector.map((value, a) => value / (roots[places[a] as number] as number)),
      places,
    })),
  };
}

function perRoot(diagonal: Float64Array, roots: Float64Array): Float64Array {
  return diagonal.map((value, i) => value / (roots[i] as number) / (roots[i] as number));
}

function derivativesAt({
  structure,
  theta,
  variances,
}: {
  readonly structure: Structure;
  readonly theta: Float64Array;
  readonly variances: Float64Array;
}): Pick<LinkedPlace, 'units' | 'slopes'> {
  const free = freeParameters(structure);
  let known: { units: Float64Array; slopes: Float64Array[] } | null = null;
  const made = () => {
    const derivatives = structure.derivativesAt(theta);
    const units = Float64Array.from(free, (i) =>
      unitOf(structure.parameters[i], derivatives[i] as Float64Array, variances),
    );
    const slopes = free.map((i, a) =>
      (derivatives[i] as Float64Array).map((d, g) => (d * (units[a] as number)) / (variances[g] as number)),
    );
    return { units, slopes };
  };
  return { units: () => (known ??= made()).units, slopes: () => (known ??= made()).slopes };
}

/** Rows of some cells from those of all, each of a given width; into: where they are to stand. */
export function rowsOf(
  all: Float64Array,
  cells: Int32Array,
  { width, into = new Float64Array(cells.length * width) }: { readonly width: number; readonly into?: Float64Array },
): Float64Array {
  for (let i = 0; i < cells.length; i++) {
    const from = (cells[i] as number) * width;
    for (let c = 0; c < width; c++) into[i * width + c] = all[from + c] as number;
  }
  return into;
}

/** Room for the rows of one block after another, by length and purpose: taken once, and written over. */
export function roomForRows(): (length: number, purpose: number) => Float64Array {
  const kept: Map<number, Float64Array>[] = [];
  return (length, purpose) => {
    const own = (kept[purpose] ??= new Map<number, Float64Array>());
    const known = own.get(length);
    if (known) return known;
    const made = new Float64Array(length);
    own.set(length, made);
    return made;
  };
}
