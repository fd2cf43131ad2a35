import { largestOf } from '../algebra/powers-of-two';
import { WIDEST_EXPONENT } from '../estimate/ascent';
import { follow } from '../estimate/follow';
import { maximise } from '../estimate/maximise';
import { freeParameters, type Structure, withFixed } from '../model/structure';
import { log } from '../numbers/elementary';
import type { Hooks } from '../protocol/source';
import { isRestricted, type Likelihoods, ownLikelihood } from './likelihoods';
import { type Ends, type Profile, profileInterval } from './profile';

/** How far apart, relative to its size, two log-likelihoods may stand and still be the same hill. */
const SAME_HILL = 1e-10;
/** How many hills are followed at most. */
const HILLS = 3;

type ProfileLikelihood = (value: number) => number | null;

/**
 * Profile-likelihood interval of one variance parameter of a fit by full or restricted likelihood.
 *
 * index: of the parameter in the structure; step: about its standard error. Every value is judged with the other parameters at their best:
 * followed from the last value's, and searched for from all starts at the ends; where the search finds a higher hill, that is followed as well.
 * Null ends where the fit has no likelihood, a side is open, or the run is cancelled (`hooks`). Nothing in an exponent beyond those that are searched counts as found.
 *
 * Example: the size exponent of 60 libraries, full likelihood: 0.2989 to 0.8728.
 */
export function parameterInterval(
  likelihoods: Likelihoods,
  asked: { readonly index: number; readonly level: number; readonly step: number | null },
  hooks?: Hooks,
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
  if (freeParameters(structure).length === 1 && structure.commonScale) return ends(scaleProfile(likelihoods));
  return overHills(likelihoods, { index: asked.index, ends, hooks });
}

/** The ends over the hills that are known, until a search at the ends finds no higher one. */
function overHills(
  { fitted, rows }: Likelihoods,
  asked: { readonly index: number; readonly ends: (of: ProfileLikelihood) => Ends; readonly hooks: Hooks | undefined },
): Ends {
  const { index, ends, hooks } = asked;
  const { structure } = fitted;
  const name = structure.parameters[index]?.name as string;
  const at = (value: number) => ({
    rows,
    structure: withFixed(structure, name, value),
    restricted: isRestricted(fitted),
  });
  const nothing = (value: number) => value === 0 && index === structure.scaleAt && structure.betweenAt < 0;
  const hills = [fitted.theta];
  const followed: ProfileLikelihood = (value) => {
    if (hooks?.cancelled()) return null;
    if (nothing(value)) return -Infinity;
    let highest: number | null = null;
    for (const [i, from] of hills.entries()) {
      const place = follow({ ...at(value), heightOnly: true }, from.with(index, value));
      if (!place) continue;
      hills[i] = place.theta;
      highest = Math.max(highest ?? -Infinity, place.logLikelihood);
    }
    return highest;
  };
  for (;;) {
    const found = ends(followed);
    if (hills.length === HILLS || freeParameters(structure).length === 1) return found;
    const higher = [found.low, found.high].flatMap((end) => {
      const searched = end === null || nothing(end) ? null : maximise(at(end));
      const known = end === null ? null : followed(end);
      return searched?.ok && !sameHill(searched.value.logLikelihood, known) ? [searched.value.theta] : [];
    });
    if (higher.length === 0) return found;
    hills.push(...higher.slice(0, HILLS - hills.length));
  }
}

function sameHill(searched: number, followed: number | null): boolean {
  return followed !== null && searched - followed <= SAME_HILL * (1 + Math.abs(searched));
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
