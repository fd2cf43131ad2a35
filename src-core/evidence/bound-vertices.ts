import type { Fitted } from '../estimate/fitted';
import { seeded } from '../numbers/random';
import { plainDot, plainSquares, sumOfSquares } from '../numbers/sums';
import type { Coefficient } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Movable } from './moved-outcome';

/** Up to so many uncertain values every vertex is tried: 2^12. */
const ALL_UP_TO = 12;
/** Vertices drawn beyond that, and the work (cells times coefficients) that they may take together. */
const DRAWN = 4096;
const FEWEST = 200;
const WORK = 4e8;
const STEPS = 20;

/** Uncertain outcomes around a fit: moves from its response to either end; 0 for a cell that is known. */
export interface Box {
  readonly down: Float64Array;
  readonly up: Float64Array;
}

export interface VertexVerdict {
  /** By coefficient: the interval excludes zero on the side of the estimate at every vertex tried. */
  readonly holds: readonly boolean[];
  readonly tried: number;
  /** True where every vertex was tried. */
  readonly all: boolean;
}

/** What a vertex says: true where the coefficient's interval excludes zero on the side that `sides` names. */
type Reads = (moves: Float64Array) => readonly boolean[];

/**
 * Whether every coefficient stays significant at the vertices of a box of outcomes, weights held.
 *
 * Up to 12 uncertain values: all vertices. Beyond: all values down, all up, both extremes of every coefficient, what steps of steepest fall of its
 * ratio reach from there, and vertices drawn with seed 1, 4,096 of them or as many as the work allows.
 *
 * sides: the sign on which each coefficient was significant, 0 where it was not: that one cannot stay so.
 * judge: intervals of a moved fit; null where the plan's inference refuses it. simple: errors follow the scale alone, so that the judge is asked
 * once.
 */
export function verdictAt(of: {
  readonly movable: Movable;
  readonly box: Box;
  readonly sides: readonly number[];
  readonly judge: (fitted: Fitted) => readonly Coefficient[] | null;
  readonly simple: boolean;
  readonly hooks: Hooks;
}): VertexVerdict {
  const { movable, box, sides, hooks } = of;
  const uncertain = [...box.down.keys()].filter((g) => box.down[g] !== 0 || box.up[g] !== 0);
  const all = uncertain.length <= ALL_UP_TO;
  const reads = of.simple ? simpleReads(of, all ? uncertain : null) : judgedReads(of);
  const holds = sides.map((side) => side !== 0);
  let tried = 0;
  const look = (moves: Float64Array): void => {
    tried++;
    for (const [j, held] of reads(moves).entries()) if (!held) holds[j] = false;
  };
  const vertices = all ? everyVertex(box, uncertain) : someVertices(movable, { box, uncertain, sides });
  for (const moves of vertices) {
    if (hooks.cancelled() || !holds.includes(true)) break;
    if (tried % 256 === 0) hooks.progress('sensitivity', Math.min(1, tried / DRAWN));
    look(moves);
  }
  return { holds, tried, all };
}

function* everyVertex({ down, up }: Box, uncertain: readonly number[]): Generator<Float64Array> {
  const moves = new Float64Array(down.length);
  for (let vertex = 0; vertex < 1 << uncertain.length; vertex++) {
    for (const [i, g] of uncertain.entries()) moves[g] = ((vertex >> i) & 1 ? up[g] : down[g]) as number;
    yield moves;
  }
}

function* someVertices(
  movable: Movable,
  of: { readonly box: Box; readonly uncertain: readonly number[]; readonly sides: readonly number[] },
): Generator<Float64Array> {
  const { box, uncertain, sides } = of;
  yield box.down;
  yield box.up;
  for (const [j, side] of sides.entries()) {
    if (side === 0) continue;
    for (const towards of [-1, 1]) {
      const extreme = vertexBy(movable.fitted.pulls[j] as Float64Array, box, towards);
      yield extreme;
      yield* fallFrom(movable, { box, j, extreme });
    }
  }
  const { pulls } = movable.fitted;
  const draws = Math.max(FEWEST, Math.min(DRAWN, Math.floor(WORK / (box.down.length * pulls.length))));
  const random = seeded(1);
  const moves = new Float64Array(box.down.length);
  for (let draw = 0; draw < draws; draw++) {
    for (const g of uncertain) moves[g] = (random.bits() >>> 31 === 1 ? box.up[g] : box.down[g]) as number;
    yield moves;
  }
}

/** The vertex that goes furthest along (towards 1) or against (-1) a direction; cells that it does not touch stay. */
export function vertexBy(direction: Float64Array, { down, up }: Box, towards: number): Float64Array {
  return direction.map((c, g) => (c === 0 ? 0 : c * towards > 0 ? (up[g] as number) : (down[g] as number)));
}

/**
 * Vertices along which the size of a coefficient's ratio falls: ln |t| has the gradient C_j / b_j - Q y / r~'r~, and each step goes to the vertex
 * furthest against it.
 */
function* fallFrom(
  movable: Movable,
  of: { readonly box: Box; readonly j: number; readonly extreme: Float64Array },
): Generator<Float64Array> {
  const { box, j } = of;
  const pull = movable.fitted.pulls[j] as Float64Array;
  const scaled = movable.fitted.scale !== null;
  let moves = of.extreme;
  let least = Infinity;
  for (let step = 0; step < STEPS; step++) {
    const estimate = (movable.fitted.coefficients[j] as number) + plainDot(pull, moves);
    const whitened = addedTo(movable.whitened, movable.whitenedMoves(moves));
    const squares = sumOfSquares(whitened);
    const size = Math.abs(estimate) / Math.sqrt(movable.scaleRatio(squares));
    if (!(size < least) || estimate === 0) return;
    least = size;
    const gradient = movable.backwards(whitened);
    const fall = pull.map((c, g) => c / estimate - (scaled ? (gradient[g] as number) / squares : 0));
    moves = vertexBy(fall, box, -1);
    yield moves;
  }
}

function judgedReads({
  movable,
  sides,
  judge,
}: {
  readonly movable: Movable;
  readonly sides: readonly number[];
  readonly judge: (fitted: Fitted) => readonly Coefficient[] | null;
}): Reads {
  return (moves) => {
    const found = judge(movable.moved(moves));
    return sides.map((side, j) => found !== null && clears(found[j] as Coefficient, side));
  };
}

/** The interval lies wholly on the side named. */
export function clears({ low, high }: Coefficient, side: number): boolean {
  return side > 0 ? low !== null && low > 0 : side < 0 ? high !== null && high < 0 : false;
}

/** Errors move with the scale alone, references stay: |b| against its reach at the first fit times the root of the scale's ratio. */
function simpleReads(
  of: {
    readonly movable: Movable;
    readonly box: Box;
    readonly sides: readonly number[];
    readonly judge: (fitted: Fitted) => readonly Coefficient[] | null;
  },
  few: readonly number[] | null,
): Reads {
  const { movable, sides } = of;
  const first = of.judge(movable.fitted);
  const reach = sides.map((_, j) => reachOf(first?.[j] ?? null));
  const squaresAt = few ? squaresOfFew(movable, few) : squaresOf(movable);
  const { coefficients, pulls, scale } = movable.fitted;
  return (moves) => {
    const ratio = scale === null ? 1 : movable.scaleRatio(squaresAt(moves));
    return sides.map((side, j) => {
      const distance = reach[j] as number | null;
      if (side === 0 || distance === null) return false;
      const pull = pulls[j] as Float64Array;
      const moved = few
        ? few.reduce((sum, g) => sum + (pull[g] as number) * (moves[g] as number), 0)
        : plainDot(pull, moves);
      return side * ((coefficients[j] as number) + moved) > distance * Math.sqrt(ratio);
    });
  };
}

function reachOf(one: Coefficient | null): number | null {
  return one === null || one.low === null || one.high === null ? null : (one.high - one.low) / 2;
}

function squaresOf(movable: Movable): (moves: Float64Array) => number {
  return (moves) => plainSquares(addedTo(movable.whitened, movable.whitenedMoves(moves)));
}

/** The same for moves of a few cells: a quadratic form in them. */
function squaresOfFew(movable: Movable, few: readonly number[]): (moves: Float64Array) => number {
  const count = movable.whitened.length;
  const units = few.map((g) => movable.whitenedMoves(new Float64Array(count).fill(1, g, g + 1)));
  const first = plainSquares(movable.whitened);
  const linear = units.map((unit) => 2 * plainDot(unit, movable.whitened));
  const square = units.map((a) => units.map((b) => plainDot(a, b)));
  return (moves) => {
    let sum = first;
    for (const [i, g] of few.entries()) {
      const move = moves[g] as number;
      sum += move * (linear[i] as number);
      for (const [l, h] of few.entries()) sum += move * (moves[h] as number) * ((square[i] as number[])[l] as number);
    }
    return Math.max(0, sum);
  };
}

function addedTo(a: Float64Array, b: Float64Array): Float64Array {
  return a.map((value, g) => value + (b[g] as number));
}
