import { largestOf } from '../algebra/powers-of-two';
import { climb, WIDEST_EXPONENT } from '../estimate/ascent';
import { maximise } from '../estimate/maximise';
import { freeParameters, type Structure, withFixed } from '../model/structure';
import { log } from '../numbers/elementary';
import { isRestricted, type Likelihoods, ownLikelihood } from './likelihoods';
import { type Ends, type Profile, profileInterval } from './profile';

/** How far apart, relative to its size, two log-likelihoods may stand and still be the same hill. */
const SAME_HILL = 1e-10;

type ProfileLikelihood = (value: number) => number | null;

/**
 * Profile-likelihood interval of one variance parameter of a fit by full or restricted likelihood.
 *
 * index: of the parameter in the structure; step: about its standard error. Every value is judged with the other parameters at their best:
 * climbed to from the last value's, and searched for from all starts at the ends; where the two differ, everywhere.
 * Null ends where the fit has no likelihood, or a side is open.
 *
 * Example: the size exponent of 60 libraries, full likelihood: 0.2989 to 0.8728.
 */
export function parameterInterval(
  likelihoods: Likelihoods,
  asked: { readonly index: number; readonly level: number; readonly step: number | null },
): Ends {
  const { structure, theta, estimate } = likelihoods.fitted;
  const maximum = ownLikelihood(likelihoods);
  const value = theta[asked.index] as number;
  const parameter = structure.parameters[asked.index];
  if (maximum === null || estimate.method === 'least-squares' || !parameter) return { low: null, high: null };
  const step = asked.step && asked.step > 0 ? asked.step : sizeOf(structure, theta, asked.index);
  const ends = (of: ProfileLikelihood) =>
    parameter.role === 'exponent'
      ? insideOf(WIDEST_EXPONENT, { of, estimate: value, maximum, level: asked.level, step })
      : profileInterval({ of, estimate: value, maximum, level: asked.level, floor: 0, ceiling: Infinity, step });
  const free = freeParameters(structure);
  if (free.length === 1 && structure.commonScale) return ends(scaleProfile(likelihoods));
  const searched = searchedProfile(likelihoods, asked.index);
  if (free.length === 1) return ends(searched);
  const climbed = climbedProfile(likelihoods, asked.index, searched);
  const found = ends(climbed);
  const agree = [found.low, found.high].every((end) => end === null || sameHill(climbed(end), searched(end)));
  return agree ? found : ends(searched);
}

/** The parameter's own value, or for a variance at 0 the size of the others. */
function sizeOf(structure: Structure, theta: Float64Array, index: number): number {
  const value = Math.abs(theta[index] as number);
  if (value > 0) return value;
  return index === structure.betweenAt ? largestOf(structure.variancesAt(theta)) : 1;
}

/** Within the exponents that are searched: an end of theirs is where the search ends, not the interval. */
function insideOf(widest: number, profile: Omit<Profile, 'floor' | 'ceiling'>): Ends {
  const { low, high } = profileInterval({ ...profile, floor: -widest, ceiling: widest });
  return { low: low === -widest ? null : low, high: high === widest ? null : high };
}

function sameHill(one: number | null, other: number | null): boolean {
  if (one === null || other === null) return one === other;
  if (one === other) return true;
  return Math.abs(one - other) <= SAME_HILL * (1 + Math.abs(one));
}

/** The parameter held at a value, the others searched for from all starts. */
function searchedProfile({ fitted, rows }: Likelihoods, index: number): ProfileLikelihood {
  const { structure } = fitted;
  const name = structure.parameters[index]?.name as string;
  const restricted = isRestricted(fitted);
  return (value) => {
    if (value === 0 && index === structure.scaleAt && structure.betweenAt < 0) return -Infinity;
    const found = maximise({ rows, structure: withFixed(structure, name, value), restricted });
    return found.ok ? found.value.logLikelihood : null;
  };
}

/** The same by climbing from where the last value's climb ended; searched where that leads nowhere. */
function climbedProfile({ fitted, rows }: Likelihoods, index: number, searched: ProfileLikelihood): ProfileLikelihood {
  const { structure } = fitted;
  const name = structure.parameters[index]?.name as string;
  const restricted = isRestricted(fitted);
  let from = fitted.theta;
  return (value) => {
    const start = from.with(index, value);
    const arrival =
      value === 0 ? null : climb({ rows, structure: withFixed(structure, name, value), restricted }, start);
    if (arrival?.ended !== 'maximum') return searched(value);
    from = arrival.theta;
    return arrival.logLikelihood;
  };
}

/** One common scale alone: l(phi) = l_max - N/2 [ln(phi / phi^) + phi^ / phi - 1], N the likelihood's own divisor. */
function scaleProfile(likelihoods: Likelihoods): ProfileLikelihood {
  const { fitted, rows } = likelihoods;
  const counted = rows.cells - (isRestricted(fitted) ? rows.terms : 0);
  const estimate = fitted.theta[fitted.structure.scaleAt] as number;
  const maximum = ownLikelihood(likelihoods);
  return (value) => {
    if (maximum === null) return null;
    if (!(value > 0)) return -Infinity;
    const ratio = value / estimate;
    return maximum - (counted / 2) * (log(ratio) + 1 / ratio - 1);
  };
}
