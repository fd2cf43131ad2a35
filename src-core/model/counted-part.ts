import { exp } from '../numbers/elementary';
import type { Part } from '../protocol/plan';
import type { Cells } from '../table/cells';
import { type MeanDependent, meansAt, predictorOf, samplingAt, smoothedMeans } from './mean-dependent';
import { isLinked } from './outcome-scale';

/** A binomial or counts part on its cells. */
export interface CountedPart {
  /** a_g: known where the outcome itself was transformed, else to begin with. */
  readonly base: Float64Array;
  /** Null where the variances follow from the observed outcome. */
  readonly meanDependent: MeanDependent | null;
}

/**
 * The variances of a binomial or counts part.
 *
 *     identity, and maximum likelihood with a link: from fitted means, `meanDependent`
 *     a transformed outcome, from the observed one:  logit  1 / (m p (1 - p))    log  (1 - p) / (m p)  |  1 / c
 *
 * cells: on the scale of the fit (`onOutcomeScale`), halves included: p and m are then those with halves. m: effective size. A variance that is 0
 * (p = 1 on log) is the caller's to refuse.
 *
 * Example: 5 of 20 on logit: p = .25, variance .2667.
 * Source: Berkson 1955.
 */
export function countedPart(part: Extract<Part, { kind: 'binomial' | 'counts' }>, cells: Cells): CountedPart {
  const { plan } = cells;
  const amounts = amountsOf(part.kind, cells);
  if (plan.outcomeScale !== 'identity' && !isLinked(plan))
    return { base: ofObserved(part.kind, { cells, amounts }), meanDependent: null };
  const whole = plan.outcomeScale === 'identity' && plan.roles.outcomeUnit === 'percent' ? 100 : 1;
  const meanDependent: MeanDependent = {
    kind: part.kind,
    scale: plan.outcomeScale,
    observed: cells.outcome.high.map((y) => y / whole),
    amounts,
    whole,
    asCounted: part.kind === 'counts' || amounts.every((m, g) => m === cells.size?.[g]),
    labels: cells.labels,
  };
  const start = predictorOf(meanDependent, smoothedMeans(meanDependent));
  return { base: samplingAt(meanDependent, meansAt(meanDependent, start)), meanDependent };
}

/** m_g, or exposure over `per`. */
function amountsOf(kind: 'binomial' | 'counts', { plan, effectiveSize, exposure }: Cells): Float64Array {
  const amounts = kind === 'binomial' ? effectiveSize : exposure;
  if (!amounts) throw new RangeError('sizes or exposures are needed: the form of the plan was not checked');
  return kind === 'binomial' ? amounts : amounts.map((e) => e / plan.roles.per);
}

function ofObserved(
  kind: 'binomial' | 'counts',
  { cells, amounts }: { readonly cells: Cells; readonly amounts: Float64Array },
): Float64Array {
  const { outcome, addedHalves, plan } = cells;
  return outcome.high.map((on, g) => {
    const amount = (amounts[g] as number) + 2 * (addedHalves?.[g] ?? 0);
    if (plan.outcomeScale === 'log') {
      const y = exp(on);
      return kind === 'counts' ? 1 / (amount * y) : (1 - y) / (amount * y);
    }
    const odds = exp(-Math.abs(on));
    return ((1 + odds) * (1 + odds)) / odds / amount;
  });
}
