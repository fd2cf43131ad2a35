import { solve } from '../algebra/dense';
import { heightAt, likelihoodAt } from '../estimate/likelihood';
import { growsTogether } from '../estimate/search-space';
import { freeParameters, omegaAt, type Parameter } from '../model/structure';
import type { Evidence } from '../protocol/result';
import { bestWithout, likelihoodOfFit, type OwnLikelihood } from './best-without';
import { likelihoodsOf } from './between-likelihood';
import { boundaryDeparture } from './boundary-departure';
import { type Frame, solvedUnder } from './frame';
import { mixtureUpper, mixtureWeights } from './mixture';
import { evidenceOf, notApplicable, withDeparture } from './reading';

const TEST = 'boundary-likelihood-ratio';

/**
 * Likelihood ratios of the variances that a plan adds to sampling: is tau^2, is omega^2 above 0, each alone and all of them together?
 *
 *     2 (l at the fit - l where they are 0), by the method's own likelihood; one: half chi-square on 0, half on 1; two: weights 1/4 - a, 1/2,
 *     1/4 + a, a = arcsin(r) / 2 pi, r the correlation of the two estimators where both are 0
 *
 * One entry a set. Not applicable without an added variance that is estimated, and under methods other than full and restricted. p is null
 * where no mixture is known: three or more together, a correlation that vanishes with its part, another variance at 0 in the fit or without the part.
 * With phi at 0 in the fit the ratio of tau^2 stands, and no departure is told: there is no sampling part for it to stand beside.
 * detail: zero (names), weights of chi-square on 0, 1, 2, correlation (null but for two variances), likelihood.
 * Source: Self & Liang 1987.
 */
export function boundaryLikelihoodRatios(frame: Frame, cancelled: () => boolean): Evidence[] {
  const { structure, estimate } = frame.fitted;
  const added = freeParameters(structure).filter((i) => isAdded(structure.parameters[i]));
  const names = added.map((i) => structure.parameters[i]?.name as string);
  if (added.length === 0 || structure.meanDependent) return [notApplicable(TEST, 'structure')];
  const { method } = estimate;
  if (method !== 'full' && method !== 'restricted') return [notApplicable(TEST, 'method', { zero: names })];
  if (frame.freedom < 1) return [notApplicable(TEST, 'no-residual-freedom', { zero: names })];
  if (frame.perfect) return [notApplicable(TEST, 'no-residuals', { zero: names })];
  const likelihood = likelihoodOfFit(frame.fitted);
  const sets = [...added.map((i) => [i]), ...(added.length > 1 ? [added] : [])];
  return sets.map((zero) => ratioOf({ frame, likelihood, zero, cancelled }));
}

function isAdded(parameter: Parameter | undefined): boolean {
  return parameter?.role === 'between' || parameter?.role === 'shared';
}

interface Asked {
  readonly frame: Frame;
  readonly likelihood: OwnLikelihood;
  /** Indices of the variances set to 0. */
  readonly zero: readonly number[];
  readonly cancelled: () => boolean;
}

function ratioOf(asked: Asked): Evidence {
  const { frame, likelihood, zero, cancelled } = asked;
  const { structure, restricted } = likelihood;
  const { theta } = frame.fitted;
  const names = zero.map((i) => structure.parameters[i]?.name as string);
  const named = { zero: names, likelihood: restricted ? 'restricted' : 'full' };
  const at = heightAt({ ...likelihood, theta });
  const without = bestWithout(likelihood, names);
  if (!at || !without.ok) return notApplicable(TEST, 'no-convergence', named);
  const gone = zero.every((i) => theta[i] === 0);
  const statistic = gone ? 0 : Math.max(0, 2 * (at.logLikelihood - without.value.logLikelihood));
  const mixture = mixtureOf(asked, without.value.theta);
  if (!mixture) {
    const detail = { ...named, weights: [null, null, null], correlation: null, why: 'no-mixture' };
    return evidenceOf(TEST, { statistic, freedom1: zero.length, p: null, detail });
  }
  const { weights, correlation } = mixture;
  const detail = { ...named, weights, correlation };
  const p = mixtureUpper(statistic, weights);
  const evidence = evidenceOf(TEST, { statistic, freedom1: zero.length, p, detail });
  return withDeparture(
    evidence,
    zero.length === 1 ? departureOf(frame, likelihood, { at: zero[0] as number, cancelled }) : 'not-defined',
  );
}

/** Weights of the mixture; null where all else is not interior, or a parameter vanishes with the part. */
function mixtureOf(
  { frame, likelihood, zero }: Asked,
  theta: Float64Array,
): { readonly weights: [number, number, number]; readonly correlation: number | null } | null {
  const { structure } = likelihood;
  const { parameters, parts } = structure;
  const atZero = (place: Float64Array) => (i: number) => place[i] === 0 && isAdded(parameters[i]) && !zero.includes(i);
  const free = freeParameters(structure);
  if (free.some(atZero(frame.fitted.theta)) || free.some(atZero(theta)) || zero.length > 2) return null;
  const vanishes = parts.some(({ at, part, rhoAt }) => {
    const own = zero.some((i) => i >= at && i < at + part.parameters.length);
    return own && parameters[rhoAt]?.fixed === null;
  });
  if (vanishes) return null;
  if (zero.length === 1) return { weights: mixtureWeights(null), correlation: null };
  const correlation = correlationAt(likelihood, theta, zero as readonly [number, number]);
  return correlation === null ? null : { weights: mixtureWeights(correlation), correlation };
}

/** Correlation of two estimators from the inverse of the expected information of the likelihood used, every free parameter included. */
function correlationAt(
  likelihood: OwnLikelihood,
  theta: Float64Array,
  [first, second]: readonly [number, number],
): number | null {
  const information = likelihoodAt({ ...likelihood, theta })?.information;
  if (!information) return null;
  const free = freeParameters(likelihood.structure);
  const [a, b] = [free.indexOf(first), free.indexOf(second)];
  const columns = [a, b].map((at) =>
    solve(
      information,
      Float64Array.from(free, (_, i) => (i === at ? 1 : 0)),
    ),
  );
  const [one, other] = columns;
  if (!one || !other) return null;
  const correlation = (one[b] as number) / Math.sqrt((one[a] as number) * (other[b] as number));
  return Number.isFinite(correlation) ? Math.max(-1, Math.min(1, correlation)) : null;
}

function departureOf(
  frame: Frame,
  { structure, restricted }: OwnLikelihood,
  { at, cancelled }: { readonly at: number; readonly cancelled: () => boolean },
): ReturnType<typeof boundaryDeparture> {
  const { fitted } = frame;
  const omegaWith = (value: number) => omegaAt(structure, fitted.theta.with(at, value));
  if (!omegaWith(0).diagonal.every((v) => v > 0)) return 'not-defined';
  const { basis } = solvedUnder(fitted, new Float64Array(frame.count).fill(1));
  // One factor over all of Omega is estimated with the rest where every part is free to grow.
  const rule = { restricted, freeScale: growsTogether(structure) };
  const measure = structure.parameters[at]?.role === 'between' ? 'tau2' : 'omega2';
  const likelihoodAt = likelihoodsOf(basis, rule);
  return boundaryDeparture(frame, { measure, rule, omegaAt: omegaWith, likelihoodAt }, cancelled);
}
