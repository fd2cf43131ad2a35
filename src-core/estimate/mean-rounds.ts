import { type MeanDependent, meansAt, outsideRange } from '../model/mean-dependent';
import { lengthOf, plainDot, plainSquares } from '../numbers/sums';
import { done, type Outcome, refuse } from '../protocol/outcome';
import type { Model } from './fit-model';
import type { Fitted } from './fitted';
import { besideOthers, outside, type Settle, settledAt, sharesOf } from './mean-settled';

/** Rounds at most. */
const ROUNDS = 100;
/** A change this short, in standard errors of the cells, is the searches' own. */
const SETTLED = 1e-10;
/** Below this length changes that no longer grow shorter are so too. */
const NEARLY = 1e-8;

/**
 * Beside other parts: fit, means, variances, fit again until nothing changes; each step drawn on by what the last one left (Anderson 1965), and halved
 * where it would leave the range.
 */
export function byRounds(
  model: Model,
  part: MeanDependent,
  of: { readonly settle: Settle; readonly start: Float64Array },
): Outcome<Fitted> {
  let predictor = of.start;
  let before = Infinity;
  let last: { readonly next: Float64Array; readonly step: Float64Array } | null = null;
  for (let rounds = 1; rounds <= ROUNDS; rounds++) {
    if (model.hooks?.cancelled()) return refuse('cancelled', {});
    const structure = settledAt(model.structure, part, meansAt(part, predictor));
    const fitted = of.settle({ ...model, structure, weighting: null });
    if (!fitted.ok) return fitted;
    const next = sharesOf(model, part, fitted.value.residuals);
    const step = next.map((value, g) => value - (predictor[g] as number));
    const length = lengthOf(step.map((d, g) => (d * part.whole) / Math.sqrt(fitted.value.variances[g] as number)));
    if (length <= SETTLED || (length <= NEARLY && length > before / 2))
      return settledRounds(model, part, { settle: of.settle, predictor: next, rounds });
    const aim: Float64Array = last && length < before ? drawnOn({ next, step }, last) : next;
    last = { next, step };
    before = length;
    const moved =
      insideStep(part, predictor, { aim, share: 1 }) ?? insideStep(part, predictor, { aim: next, share: 0.5 });
    if (!moved) return outside(part, outsideRange(meansAt(part, next)), next);
    predictor = moved;
  }
  return refuse('not-settled', { part: part.kind, rounds: ROUNDS }, '/variance');
}

function settledRounds(
  model: Model,
  part: MeanDependent,
  of: { readonly settle: Settle; readonly predictor: Float64Array; readonly rounds: number },
): Outcome<Fitted> {
  const means = meansAt(part, of.predictor);
  const wrong = outsideRange(means);
  if (wrong.length > 0) return outside(part, wrong, of.predictor);
  const fitted = of.settle({ ...model, structure: settledAt(model.structure, part, means) });
  if (!fitted.ok) return fitted;
  return done({ ...fitted.value, fixedPoint: besideOthers(part, means, of.rounds) });
}

interface Round {
  readonly next: Float64Array;
  readonly step: Float64Array;
}

/** The mixture of two rounds whose steps, mixed alike, are shortest. */
function drawnOn(now: Round, last: Round): Float64Array {
  const change = now.step.map((d, g) => d - (last.step[g] as number));
  const squares = plainSquares(change);
  if (!(squares > 0)) return now.next;
  const share = plainDot(change, now.step) / squares;
  return now.next.map((value, g) => value - share * (value - (last.next[g] as number)));
}

/** The longest of halves of the way to an aim that stays inside the range; null where none does. */
function insideStep(
  part: MeanDependent,
  from: Float64Array,
  of: { readonly aim: Float64Array; readonly share: number },
): Float64Array | null {
  for (let share = of.share; share > 1e-9; share /= 2) {
    const moved = from.map((value, g) => value + share * ((of.aim[g] as number) - value));
    if (outsideRange(meansAt(part, moved)).length === 0) return moved;
  }
  return null;
}
