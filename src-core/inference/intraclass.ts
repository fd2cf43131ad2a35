import { heightAt } from '../estimate/likelihood';
import type { Structure } from '../model/structure';
import { joinParts } from '../model/structure-join';
import type { Interval } from '../protocol/result';
import { isRestricted, type Likelihoods, ownLikelihood } from './likelihoods';
import { profileInterval } from './profile';

/** A first step for the share, which has no unit. */
const STEP = 0.1;

/**
 * Share of the variance of one person's answer that lies between cells, under between + per-size.
 *
 *     tau^2 / (tau^2 + phi), interval by profile likelihood: Omega = scale [(1 - share) / m + share], the scale at its best
 *
 * In [0, 1]. Null for every other structure, and where both are 0; the ends are null unless the method is full or restricted likelihood and
 * both parameters were estimated.
 *
 * Example: tau^2 2.1 and phi 36.5: 0.054.
 */
export function intraclassOf(likelihoods: Likelihoods, level: number): Interval | null {
  const { structure, theta, estimate } = likelihoods.fitted;
  const { parameters, scaleAt, betweenAt } = structure;
  if (betweenAt < 0 || parameters[scaleAt]?.part !== 'per-size') return null;
  const tau2 = theta[betweenAt] as number;
  const phi = theta[scaleAt] as number;
  if (!(tau2 + phi > 0)) return null;
  const share = tau2 / (tau2 + phi);
  const maximum = ownLikelihood(likelihoods);
  const known = parameters.some((parameter) => parameter.fixed !== null);
  if (maximum === null || known || estimate.method === 'least-squares')
    return { estimate: share, low: null, high: null };
  const of = (value: number) => likelihoodOfShare(likelihoods, value);
  return {
    estimate: share,
    ...profileInterval({ of, estimate: share, maximum, level, floor: 0, ceiling: 1, step: STEP }),
  };
}

/** l at a share, the scale at its best. */
function likelihoodOfShare({ fitted, rows }: Likelihoods, share: number): number | null {
  const structure = ofShare(fitted.structure, share);
  const at = heightAt({ rows, structure, restricted: isRestricted(fitted), theta: new Float64Array([1]) });
  return at && at.scaleRatio > 0 ? at.rescaled : null;
}

function ofShare({ sampling }: Structure, share: number): Structure {
  const shape = sampling.map((a) => (1 - share) * a + share);
  return joinParts({
    cells: shape.length,
    sampling: { kind: 'per-size', scale: 'free', at: () => shape, slopeAt: null },
    between: 'none',
    fixed: {},
  });
}
