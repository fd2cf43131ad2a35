import type { Fitted } from '../estimate/fitted';
import type { Model } from '../inference/check-model';
import { plainDot } from '../numbers/sums';
import { done, type Outcome } from '../protocol/outcome';
import type { Inference, Plan } from '../protocol/plan';
import type { Bound, Coefficient } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { type Corner, type Corners, cornersOf } from './bound-covariates';
import { type BoundModel, boundModelOf, refittedAt, type Values } from './bound-model';
import { type Box, clears, type VertexVerdict, verdictAt, vertexBy } from './bound-vertices';
import { judgeOf } from './judge';
import { type Movable, movable } from './moved-outcome';

/** A pull below this share of its row's largest is rounding: an open end there says nothing. */
const NO_PULL = 1e-12;

/** One coefficient at an extreme of its bounds, for the changes that were tried. */
export interface BoundChange {
  readonly j: number;
  /** The columns whose values were moved. */
  readonly what: string;
  readonly one: Coefficient;
}

export interface BoundsFound {
  readonly bounds: Bound[];
  readonly changes: readonly BoundChange[];
}

/** What bounds are sought of: the chosen fit, its cells as the data stage left them, its model and what was claimed of it. */
export interface Asked {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly model: Model;
  readonly coefficients: readonly Coefficient[];
  readonly hooks: Hooks;
}

/**
 * The range of every coefficient over all values that suppressed, interval and rounded cells can have.
 *
 *     low, high = b_j + sum_g C_jg (end_g - y_g),  each end the one that the sign of C_jg asks for
 *
 * Cells left out for nothing but such a value take part. Exact where weights do not depend on the outcome and covariates are known; otherwise weights
 * are held at the chosen fit's variance parameters, and the whole fit is made again at both extremes. An end that is open on the way is null.
 * The sign survives where every extreme has it; significance where every vertex tried keeps the interval off zero (t is not monotone in y), the
 * extremes refitted included; with an open end it is not shown. Under `wild` intervals are those of CR0 on the same clusters.
 * Nothing where every value is known. Refuses what the model stage refuses on these cells.
 *
 * Source: METHODS of the program, 6.
 */
export function boundsOf(asked: Asked): Outcome<BoundsFound> {
  const { cells, plan, fitted, hooks, model: chosen } = asked;
  const { limited } = cells;
  const nothing = done({ bounds: [], changes: [] });
  if (!limited || hooks.cancelled()) return nothing;
  const bounded = boundModelOf({ plan, limited, chosen, fitted, hooks });
  if (!bounded.ok) return bounded;
  const { low, high, held } = bounded.value;
  const base = held.response.high;
  const box: Box = {
    down: low.map((end, g) => end - (base[g] as number)),
    up: high.map((end, g) => end - (base[g] as number)),
  };
  const uncertain = [...low.keys()].filter((g) => low[g] !== high[g]).length;
  const inCovariates = bounded.value.limited.covariates;
  if (uncertain === 0 && inCovariates.length === 0) return nothing;
  const open = [...low, ...high].some((end) => !Number.isFinite(end));
  if (inCovariates.length > 0) {
    const corners = cornersOf(bounded.value);
    if (!corners.ok) return corners;
    return done(byCorners(asked, { bounded: bounded.value, corners: corners.value, open }));
  }
  return done(byMoves(asked, { bounded: bounded.value, box, open }));
}

/** What is told of every bound alike. */
function overOf({ limited, low, high }: BoundModel): Omit<Bound['over'], 'vertices' | 'all'> {
  const moves = (g: number): boolean =>
    low[g] !== high[g] || limited.covariates.some((one) => one.low[g] !== one.high[g]);
  const brought = limited.usedAt.filter((place) => place < 0).length;
  return { cells: [...low.keys()].filter(moves).length, brought, outside: limited.outside.length };
}

function columnsMoved({ plan, limited, low, high }: BoundModel): string {
  const outcome = low.some((end, g) => end !== high[g]) ? [(plan.roles.outcome ?? plan.roles.count) as string] : [];
  return [...outcome, ...limited.covariates.map(({ name }) => name)].join(', ');
}

function byMoves(
  asked: Asked,
  of: { readonly bounded: BoundModel; readonly box: Box; readonly open: boolean },
): BoundsFound {
  const { bounded, box, open } = of;
  const { coefficients, hooks } = asked;
  const move = movable(bounded.held);
  const judge = heldJudge(asked, bounded);
  const simple = isSimple(asked.plan.inference);
  const sides = coefficients.map(sideOf);
  const verdict: VertexVerdict = open
    ? { holds: sides.map(() => false), tried: 0, all: false }
    : verdictAt({ movable: move, box, sides, judge, simple, hooks });
  const over = { ...overOf(bounded), vertices: verdict.tried, all: verdict.all };
  const what = columnsMoved(bounded);
  const changes: BoundChange[] = [];
  const bounds = coefficients.map((own, j): Bound => {
    const ends = [-1, 1].map((towards) => extremeOf({ asked, bounded, move, box, judge, j, towards }));
    for (const end of ends) if (end?.judged) changes.push({ j, what, one: end.judged });
    return boundFrom({ own, ends, weightsHeld: !bounded.fixedWeights, significant: verdict.holds[j] as boolean, over });
  });
  return { bounds, changes };
}

interface End {
  readonly held: number;
  /** Where weights move with the outcome: the same values, everything fitted again. */
  readonly refitted: number | null;
  readonly judged: Coefficient | null;
}

/** One end of a coefficient's range; null where an open value lies on the way. */
function extremeOf(of: {
  readonly asked: Asked;
  readonly bounded: BoundModel;
  readonly move: Movable;
  readonly box: Box;
  readonly judge: (fitted: Fitted) => readonly Coefficient[] | null;
  readonly j: number;
  readonly towards: number;
}): End | null {
  const { asked, bounded, move, box, judge, j, towards } = of;
  const pull = move.fitted.pulls[j] as Float64Array;
  const largest = pull.reduce((most, c) => Math.max(most, Math.abs(c)), 0);
  const direction = pull.map((c) => (Math.abs(c) <= NO_PULL * largest ? 0 : c));
  const moves = vertexBy(direction, box, towards);
  if (!moves.every(Number.isFinite)) return null;
  const held = (move.fitted.coefficients[j] as number) + plainDot(direction, moves);
  if (bounded.fixedWeights) return { held, refitted: null, judged: judge(move.moved(moves))?.[j] ?? null };
  const { outcome, cells } = bounded.limited;
  const end = (direction_: number, g: number): number =>
    direction_ === 0
      ? (cells.outcome.high[g] as number)
      : ((direction_ * towards > 0 ? outcome.high : outcome.low)[g] as number);
  const again = againAt(asked, bounded, { outcome: direction.map(end), covariates: new Map() });
  return { held, refitted: again?.[j]?.estimate ?? null, judged: again?.[j] ?? null };
}

/** Everything fitted again at some values, as the plan's inference tells it; null where it cannot be. */
function againAt(asked: Asked, bounded: BoundModel, values: Values): readonly Coefficient[] | null {
  if (asked.hooks.cancelled()) return null;
  const again = refittedAt(bounded, values, asked.hooks);
  return again.ok ? judgeOf(bounded.model.cells, withIntervals(asked.plan))(again.value, null) : null;
}

function boundFrom(of: {
  readonly own: Coefficient;
  readonly ends: readonly (End | null)[];
  readonly weightsHeld: boolean;
  readonly significant: boolean;
  readonly over: Bound['over'];
}): Bound {
  const { own, ends, weightsHeld, significant, over } = of;
  const [low = null, high = null] = ends;
  const side = sideOf(own);
  const sign = Math.sign(own.estimate);
  const keeps = (end: End | null): boolean =>
    end !== null && [end.held, end.refitted].every((value) => value === null || Math.sign(value) === sign);
  const again = ends.every(
    (end) => end !== null && (!weightsHeld || (end.judged !== null && clears(end.judged, side))),
  );
  return {
    term: own.term,
    low: low?.held ?? null,
    high: high?.held ?? null,
    weightsHeld,
    refitted: weightsHeld ? { low: low?.refitted ?? null, high: high?.refitted ?? null } : null,
    survives: { sign: sign !== 0 && ends.every(keeps), significance: side !== 0 && significant && again },
    over,
  };
}

/** Outcomes and covariates moved together. */
function byCorners(
  asked: Asked,
  of: { readonly bounded: BoundModel; readonly corners: Corners; readonly open: boolean },
): BoundsFound {
  const { bounded, corners, open } = of;
  const { coefficients, hooks } = asked;
  const judge = heldJudge(asked, bounded);
  const sides = coefficients.map(sideOf);
  const holds = sides.map((side) => side !== 0 && !open);
  const { corners: some, all } = corners.some();
  let vertices = 0;
  const furthest = new Map<string, { corner: Corner; fitted: Fitted }>();
  for (const corner of some) {
    if (hooks.cancelled() || (!all && !holds.includes(true))) break;
    vertices++;
    const there = corners.at(corner);
    if (there && all) keepFurthest(furthest, corner, there);
    const found = there && judge(there);
    for (const [j, side] of sides.entries()) if (!found || !clears(found[j] as Coefficient, side)) holds[j] = false;
  }
  const over = { ...overOf(bounded), vertices, all };
  const what = columnsMoved(bounded);
  const changes: BoundChange[] = [];
  const bounds = coefficients.map((own, j): Bound => {
    const ends = [-1, 1].map((towards): End | null => {
      const found = open || hooks.cancelled() ? null : (furthest.get(`${j} ${towards}`) ?? corners.extreme(j, towards));
      if (!found) return null;
      const again = againAt(asked, bounded, valuesAt(bounded, found.corner));
      const judged = again?.[j] ?? null;
      if (judged) changes.push({ j, what, one: judged });
      return { held: found.fitted.coefficients[j] as number, refitted: judged?.estimate ?? null, judged };
    });
    return boundFrom({ own, ends, weightsHeld: true, significant: holds[j] as boolean, over });
  });
  return { bounds, changes };
}

/** The furthest of all corners for every coefficient and direction. */
function keepFurthest(kept: Map<string, { corner: Corner; fitted: Fitted }>, corner: Corner, fitted: Fitted): void {
  for (const [j, estimate] of fitted.coefficients.entries())
    for (const towards of [-1, 1]) {
      const best = kept.get(`${j} ${towards}`);
      if (!best || towards * estimate > towards * (best.fitted.coefficients[j] as number))
        kept.set(`${j} ${towards}`, { corner, fitted });
    }
}

function valuesAt({ limited }: BoundModel, corner: Corner): Values {
  const pick = (
    { low, high }: { readonly low: Float64Array; readonly high: Float64Array },
    up: Uint8Array,
  ): Float64Array => low.map((end, g) => (up[g] ? (high[g] as number) : end));
  return {
    outcome: pick(limited.outcome, corner.outcome),
    covariates: new Map(limited.covariates.map((one, c) => [one.name, pick(one, corner.covariates[c] as Uint8Array)])),
  };
}

/** The side of zero on which an interval lies; 0 where it takes zero in or is undefined. */
function sideOf(one: Coefficient): number {
  return clears(one, 1) ? 1 : clears(one, -1) ? -1 : 0;
}

function heldJudge({ plan }: Asked, { model }: BoundModel): (fitted: Fitted) => readonly Coefficient[] | null {
  const judge = judgeOf(model.cells, withIntervals(plan));
  return (fitted) => judge(fitted, null);
}

/** Intervals follow the scale alone. */
function isSimple({ kind }: Inference): boolean {
  return kind === 'model' || kind === 'kenward-roger';
}

/** A bootstrap has no interval, and would have to be made at every vertex: its own t by CR0 stands in for it. */
function withIntervals(plan: Plan): Plan {
  const { inference } = plan;
  if (inference.kind !== 'wild') return plan;
  const { by, level } = inference;
  return { ...plan, inference: { kind: 'clustered', level, correction: 'CR0', by, alsoBy: null } };
}
