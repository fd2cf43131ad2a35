import { leastSquares } from '../algebra/least-squares';
import { largestOf } from '../algebra/powers-of-two';
import type { Design } from '../model/design';
import {
  curvatureOf,
  heightOf,
  type MeanDependent,
  type Means,
  meansAt,
  outsideRange,
  softened,
} from '../model/mean-dependent';
import { fromDoubles } from '../numbers/decimals';
import { lengthOf } from '../numbers/sums';
import { separatedCells } from './separation';
import { weighedRows } from './weighed-rows';

/** Steps at most, and halvings of one of them. */
const STEPS = 100;
const HALVINGS = 60;
/** A step this short, in standard errors of the fitted means, changes no coefficient in its twelfth digit. */
const ARRIVED = 1e-12;
/** Below this length steps that no longer grow shorter are rounding. */
const NEARLY = 1e-9;
/** A mean this near an end of its range, as a share of the middle one, has run into it. */
const AT_THE_END = 1e-10;
/** What is added to counts where steps run into the ends of the range: less and less of a barrier. */
const BARRIERS = [0.5, 1e-2, 1e-4, 1e-6, 1e-8];
/** A step of a cell's predictor on log or logit, beside its size, that is still one. */
const STILL = 1e-8;

export interface Ascent {
  readonly part: MeanDependent;
  readonly design: Design;
  /** Asked in every step. */
  readonly cancelled?: () => boolean;
}

/** Where a climb ended. step: the last one by cell, in shares or rates on the identity scale. */
export type Summit = { readonly predictor: Float64Array; readonly means: Means; readonly rounds: number } & (
  | { readonly ended: 'there' | 'cancelled' }
  | { readonly ended: 'running'; readonly step: Float64Array }
  | { readonly ended: 'at-the-end'; readonly cells: readonly number[] }
);

/**
 * Maximises the likelihood of counts over the terms, from a start inside the range of the means.
 *
 *     eta <- eta + t X d,  d = (X' W X)^-1 X' u,  t halved until ln L does not fall and every mean stays inside
 *
 * u, W: slope and curvature by the linear predictor. ln L is concave in it, so that there is one maximum or none; where steps run into the end of the
 * range, they are taken again under a barrier that is lowered to nothing, which no step jams at.
 *
 * start: length G. Ends 'there'; 'at-the-end' with the cells whose means the maximum would have outside; 'running', without a maximum in reach; or 'cancelled'.
 *
 * Source: McCullagh & Nelder 1989 (iteratively reweighted least squares); Green 1984.
 */
export function climbMeans(ascent: Ascent, start: Float64Array): Summit {
  const { part, design, cancelled = () => false } = ascent;
  const ground = groundAt(design, curvatureOf(part, meansAt(part, start)).weights);
  const climb = (of: MeanDependent, from: Float64Array): Summit => steps({ part: of, ground, cancelled }, from);
  const direct = climb(part, start);
  if (direct.ended !== 'at-the-end') return direct;
  let from = start;
  let rounds = direct.rounds;
  for (const barrier of BARRIERS) {
    const held = climb(softened(part, barrier), from);
    rounds += held.rounds;
    from = held.predictor;
  }
  const last = climb(part, from);
  return { ...last, rounds: rounds + last.rounds };
}

/** The design whitened at the start and made orthonormal: one row a cell, and the root by which it was divided. */
interface Ground {
  readonly terms: number;
  readonly basis: Float64Array;
  readonly roots: Float64Array;
}

/** Null where nothing can be computed with the weights. */
function groundAt({ columns }: Design, weights: Float64Array): Ground | null {
  const variances = weights.map((w) => 1 / w);
  if (!variances.every((v) => v > 0 && v < Infinity)) return null;
  const solved = leastSquares({ columns, y: fromDoubles(new Float64Array(weights.length)), variances });
  if ('dependent' in solved) return null;
  const terms = columns.length;
  const basis = new Float64Array(weights.length * terms);
  for (const [j, vector] of solved.basis.entries())
    for (let g = 0; g < weights.length; g++) basis[g * terms + j] = vector[g] as number;
  return { terms, basis, roots: variances.map(Math.sqrt) };
}

interface Climb {
  readonly part: MeanDependent;
  readonly ground: Ground | null;
  readonly cancelled: () => boolean;
}

function steps({ part, ground, cancelled }: Climb, start: Float64Array): Summit {
  let predictor = start;
  let means = meansAt(part, predictor);
  let height = heightOf(part, predictor, means);
  let last: Float64Array = new Float64Array(start.length);
  let before = Infinity;
  let parted: Float64Array | null = null;
  for (let rounds = 1; rounds <= STEPS; rounds++) {
    const at = { predictor, means, rounds };
    if (cancelled()) return { ...at, ended: 'cancelled' };
    const { scores, weights } = curvatureOf(part, means);
    const step = ground && proposed(ground, scores, weights);
    if (!step) return endedIn(part, at, last);
    last = step;
    const length = lengthOf(step.map((d, g) => d * Math.sqrt(weights[g] as number)));
    const next = halved({ part, predictor, step, height });
    if (next) {
      predictor = next.predictor;
      means = next.means;
      height = next.height;
    }
    const short = length <= ARRIVED + roundingOf(predictor, weights) || (length <= NEARLY && length > before / 2);
    if (short && !runs(part, predictor, step)) return { predictor, means, rounds, ended: 'there' };
    // Two steps alike that leave all but cells of none or all as they are: the likelihood rises along them without end.
    const parting = part.scale !== 'identity' && separatedCells(part, step) !== null;
    if (parting && parted && largestOf(step) > largestOf(parted) / 2)
      return { predictor, means, rounds, ended: 'running', step };
    parted = parting ? step : null;
    before = length;
    const cells = atTheEnd(part, means);
    if (!next && cells.length === 0) return { ...at, ended: 'at-the-end', cells: beyond(part, predictor, step) };
    if (cells.length > 0) return { predictor, means, rounds, ended: 'at-the-end', cells };
  }
  return endedIn(part, { predictor, means, rounds: STEPS }, last);
}

/** Whether a predictor still moves where its cell has no more say: it runs away from cells of none or all. */
function runs({ scale }: MeanDependent, predictor: Float64Array, step: Float64Array): boolean {
  return scale !== 'identity' && step.some((d, g) => Math.abs(d) > STILL * (1 + Math.abs(predictor[g] as number)));
}

/** X d, d by least squares of u / W; null where nothing can be computed with the weights, or they leave too little of a column. */
function proposed({ terms, basis, roots }: Ground, scores: Float64Array, weights: Float64Array): Float64Array | null {
  const relative = weights.map((w, g) => w * (roots[g] as number) * (roots[g] as number));
  if (!relative.every((w) => w > 0 && w < Infinity)) return null;
  const response = scores.map((u, g) => u / (weights[g] as number) / (roots[g] as number));
  const solved = weighedRows({ terms, basis, response }, relative);
  if (!solved) return null;
  return response.map((y, g) => (y - (solved.residuals[g] as number)) * (roots[g] as number));
}

/** The longest of the step's halves that stays inside and does not lose height; null where none does. */
function halved(of: {
  readonly part: MeanDependent;
  readonly predictor: Float64Array;
  readonly step: Float64Array;
  readonly height: number;
}) {
  const { part, step, height } = of;
  const slack = 1e-13 * Math.abs(height);
  let share = 1;
  for (let halving = 0; halving <= HALVINGS; halving++, share /= 2) {
    const predictor = of.predictor.map((eta, g) => eta + share * (step[g] as number));
    const means = meansAt(part, predictor);
    if (outsideRange(means).length > 0) continue;
    const found = heightOf(part, predictor, means);
    if (found >= height - slack) return { predictor, means, height: found };
  }
  return null;
}

/** What rounding of the predictor amounts to, in standard errors. */
function roundingOf(predictor: Float64Array, weights: Float64Array): number {
  return 4 * Number.EPSILON * lengthOf(predictor.map((eta, g) => eta * Math.sqrt(weights[g] as number)));
}

function endedIn(
  part: MeanDependent,
  at: { readonly predictor: Float64Array; readonly means: Means; readonly rounds: number },
  last: Float64Array,
): Summit {
  const cells = atTheEnd(part, at.means);
  return cells.length > 0 ? { ...at, ended: 'at-the-end', cells } : { ...at, ended: 'running', step: last };
}

/**
 * Cells whose mean has run into an end of its range that a finite predictor reaches: both ends on the identity scale, 1 on the log scale.
 */
function atTheEnd({ kind, scale, amounts, observed }: MeanDependent, { means, rest }: Means): number[] {
  if (scale === 'logit') return [];
  let [counted, total] = [0, 0];
  for (const [g, w] of amounts.entries()) {
    counted += w * (observed[g] as number);
    total += w;
  }
  const middle = counted / total;
  const low = scale === 'identity' ? AT_THE_END * (middle > 0 ? middle : 0.5 / total) : -1;
  const high = kind === 'binomial' ? AT_THE_END * (middle < 1 ? 1 - middle : 0.5 / total) : -1;
  return [...means.keys()].filter((g) => (means[g] as number) <= low || (rest[g] as number) <= high);
}

/** Cells that the whole step would take outside. */
function beyond(part: MeanDependent, predictor: Float64Array, step: Float64Array): number[] {
  return outsideRange(
    meansAt(
      part,
      predictor.map((eta, g) => eta + (step[g] as number)),
    ),
  );
}
