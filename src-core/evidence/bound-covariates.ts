import { factorOf } from '../algebra/factored';
import { fitAt } from '../estimate/fit-at';
import type { Fitted } from '../estimate/fitted';
import { type Design, designOf } from '../model/design';
import { fromDoubles } from '../numbers/decimals';
import { seeded } from '../numbers/random';
import { sumOfSquares } from '../numbers/sums';
import { done, type Outcome } from '../protocol/outcome';
import { movedCells } from '../table/limited';
import type { BoundModel } from './bound-model';
import { withScale } from './moved-outcome';

/** A vertex: whether each outcome and each covariate stands at its upper end. Known values are the same at either. */
export interface Corner {
  readonly outcome: Uint8Array;
  readonly covariates: readonly Uint8Array[];
}

/** The fit at corners of outcomes and covariates, weights held. */
export interface Corners {
  readonly at: (corner: Corner) => Fitted | null;
  /** The corner that first-order steps from the middle reach for one coefficient, downwards (-1) or upwards (1), with the fit there. */
  readonly extreme: (j: number, towards: number) => { readonly corner: Corner; readonly fitted: Fitted } | null;
  /** Every corner, or some of them drawn with seed 1; all: which of the two. */
  readonly some: () => { readonly corners: Iterable<Corner>; readonly all: boolean };
}

const STEPS = 60;
/** Single values that are turned one by one where turning several leads no further. */
const SINGLES = 24;
const ALL_UP_TO = 12;
const DRAWN = 200;

/**
 * Outcomes and covariates that are known to within limits, together.
 *
 *     db = Phi dX' A^-1 r - C dX b + C dy
 *
 * A coefficient is not linear in its columns: from where a fit stands, each uncertain value goes to the end that this says, until no step leads
 * further. Ends of the outcome must be finite here. Refuses a covariate whose ends a term cannot take (`transform-undefined`).
 */
export function cornersOf(bounded: BoundModel): Outcome<Corners> {
  const { limited, model, held } = bounded;
  const designs: { readonly down: Design; readonly up: Design }[] = [];
  for (const { name, low, high } of limited.covariates) {
    const made = (values: Float64Array): Outcome<Design> =>
      designOf(
        model.known,
        movedCells(limited.cells, { outcome: limited.cells.outcome.high, covariates: new Map([[name, values]]) }),
      );
    const [down, up] = [made(low), made(high)];
    if (!down.ok) return down;
    if (!up.ok) return up;
    designs.push({ down: down.value, up: up.value });
  }
  const before = sumOfSquares(held.whitened);
  const at = (corner: Corner): Fitted | null => {
    const covariates = new Map(
      limited.covariates.map(({ name, low, high }, c) => [
        name,
        low.map((end, g) => ((corner.covariates[c] as Uint8Array)[g] ? (high[g] as number) : end)),
      ]),
    );
    const design = designOf(
      model.known,
      movedCells(limited.cells, { outcome: limited.cells.outcome.high, covariates }),
    );
    if (!design.ok) return null;
    const response = fromDoubles(bounded.low.map((end, g) => (corner.outcome[g] ? (bounded.high[g] as number) : end)));
    const { structure, estimate, theta, startsTried } = held;
    const weighting = held.targetIsStructure ? null : held.weighting;
    const there = fitAt({ response, design: design.value, structure, estimate, weighting, theta, startsTried });
    return withScale(there, sumOfSquares(there.whitened) / before);
  };
  return done({
    at,
    extreme: (j, towards) => {
      const beyond = (one: Fitted | null, best: Place | null): one is Fitted =>
        one !== null &&
        (!best || towards * (one.coefficients[j] as number) > towards * (best.fitted.coefficients[j] as number));
      let best: Place | null = null;
      for (let step = 0; step < STEPS; step++) {
        const effects = effectsAt(bounded, { designs, from: best?.fitted ?? held, j });
        const tried = nextCorners(best?.corner ?? null, effects, towards);
        let moved = false;
        for (const corner of tried) {
          const fitted = at(corner);
          if (!beyond(fitted, best)) continue;
          best = { corner, fitted };
          moved = true;
          break;
        }
        if (!moved) break;
      }
      return best;
    },
    some: () => cornersIn(bounded),
  });
}

interface Place {
  readonly corner: Corner;
  readonly fitted: Fitted;
}

/** First-order effects on one coefficient of going from the lower to the upper end, value by value. */
interface Effects {
  readonly outcome: Float64Array;
  readonly covariates: readonly Float64Array[];
}

function effectsAt(
  { limited, low, high, held }: BoundModel,
  of: {
    readonly designs: readonly { readonly down: Design; readonly up: Design }[];
    readonly from: Fitted;
    readonly j: number;
  },
): Effects {
  const { designs, from, j } = of;
  const pull = from.pulls[j] as Float64Array;
  const inverse = from.gramInverse[j] as Float64Array;
  const solved = weighedResiduals(from, held);
  const outcome = pull.map((c, g) => c * ((high[g] as number) - (low[g] as number)));
  const covariates = designs.map(({ down, up }) =>
    Float64Array.from(limited.usedAt, (_, g) => {
      let effect = 0;
      for (const [l, column] of up.columns.entries()) {
        const apart = (column.high[g] as number) - (down.columns[l]?.high[g] as number);
        if (apart === 0) continue;
        effect +=
          apart *
          ((inverse[l] as number) * (solved[g] as number) - (pull[g] as number) * (from.coefficients[l] as number));
      }
      return effect;
    }),
  );
  return { outcome, covariates };
}

/** The corner that all effects point to; from a corner, then those that turn only the half of the values that promise most, a quarter ..., and one by one. */
function* nextCorners(from: Corner | null, effects: Effects, towards: number): Generator<Corner> {
  const columns = [effects.outcome, ...effects.covariates];
  if (!from) {
    const ends = columns.map((effect) => Uint8Array.from(effect, (e) => (towards * e > 0 ? 1 : 0)));
    yield { outcome: ends[0] as Uint8Array, covariates: ends.slice(1) };
    return;
  }
  const now = [from.outcome, ...from.covariates];
  const turns = columns.flatMap((effect, column) =>
    Array.from(effect, (e, g) => ({ column, g, gain: towards * e * (now[column]?.[g] ? -1 : 1) })),
  );
  const able = turns.filter(({ column, g }) => columns[column]?.[g] !== 0).sort((a, b) => b.gain - a.gain);
  const promising = able.filter(({ gain }) => gain > 0);
  const turned = (some: readonly { readonly column: number; readonly g: number }[]): Corner => {
    const ends = now.map((one) => one.slice());
    for (const { column, g } of some) (ends[column] as Uint8Array)[g] = now[column]?.[g] ? 0 : 1;
    return { outcome: ends[0] as Uint8Array, covariates: ends.slice(1) };
  };
  for (let count = promising.length; count > 1; count = count >> 1) yield turned(promising.slice(0, count));
  for (const turn of able.slice(0, SINGLES)) yield turned([turn]);
}

/** A^-1 r. */
function weighedResiduals({ residuals }: Fitted, { weighting }: Fitted): Float64Array {
  if (weighting.blocks) return factorOf(weighting).solve(residuals);
  return residuals.map((r, g) => r / (weighting.diagonal[g] as number));
}

function cornersIn({ limited, low, high }: BoundModel): { corners: Iterable<Corner>; all: boolean } {
  const places: { readonly column: number; readonly g: number }[] = [];
  for (const [g, end] of low.entries()) if (end !== high[g]) places.push({ column: -1, g });
  for (const [column, one] of limited.covariates.entries())
    for (const [g, end] of one.low.entries()) if (end !== one.high[g]) places.push({ column, g });
  const all = places.length <= ALL_UP_TO;
  const random = seeded(1);
  const made = (isUp: (i: number) => boolean): Corner => {
    const corner = {
      outcome: new Uint8Array(low.length),
      covariates: limited.covariates.map(() => new Uint8Array(low.length)),
    };
    for (const [i, { column, g }] of places.entries())
      (column < 0 ? corner.outcome : (corner.covariates[column] as Uint8Array))[g] = isUp(i) ? 1 : 0;
    return corner;
  };
  const count = all ? 1 << places.length : DRAWN;
  return {
    all,
    corners: (function* () {
      for (let n = 0; n < count; n++) yield made(all ? (i) => ((n >> i) & 1) === 1 : () => random.bits() >>> 31 === 1);
    })(),
  };
}
