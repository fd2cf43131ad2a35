import { largestOf } from '../algebra/powers-of-two';
import type { Climb } from '../estimate/ascent-step';
import { follow } from '../estimate/follow';
import { maximise } from '../estimate/maximise';
import { canVanish, WIDEST_EXPONENT } from '../estimate/search-space';
import { freeParameters, isVariance, type Parameter, type Structure, withFixed } from '../model/structure';
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
    endsWithin(parameter, { of, estimate: value, maximum, level: asked.level, step });
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
    ...(hooks && { hooks }),
  });
  const vanishes = canVanish(withFixed(structure, name, null)).includes(index);
  const nothing = (value: number) => value === 0 && isVariance(structure.parameters[index] as Parameter) && !vanishes;
  const hills: Hill[] = [new Map([[fitted.theta[index] as number, { theta: fitted.theta, height: null }]])];
  const followed: ProfileLikelihood = (value) => {
    if (hooks?.cancelled()) return null;
    if (nothing(value)) return -Infinity;
    const heights = hills.flatMap(
      (hill) => heightOn(hill, { value, index, climb: { ...at(value), heightOnly: true } }) ?? [],
    );
    return heights.length === 0 ? null : Math.max(...heights);
  };
  for (;;) {
    const found = ends(followed);
    if (hills.length === HILLS || freeParameters(structure).length === 1) return found;
    const higher = [found.low, found.high].flatMap((end) => {
      const searched = end === null || nothing(end) ? null : maximise({ ...at(end), heightOnly: true, brief: true });
      const known = end === null ? null : followed(end);
      if (!searched?.ok || end === null || sameHill(searched.value.logLikelihood, known)) return [];
      return [new Map([[end, { theta: searched.value.theta, height: searched.value.logLikelihood }]])];
    });
    if (higher.length === 0) return found;
    hills.push(...higher.slice(0, HILLS - hills.length));
  }
}

/** What is known of one hill: by the value held, the place of everything else and its height (null where only the place is known). */
type Hill = Map<number, { readonly theta: Float64Array; readonly height: number | null }>;

/** The height of a hill at a value, followed from the nearest value at which it is known: further away it may have joined another. */
function heightOn(
  hill: Hill,
  asked: { readonly value: number; readonly index: number; readonly climb: Climb },
): number | null {
  const { value, index, climb } = asked;
  const known = hill.get(value)?.height ?? null;
  if (known !== null) return known;
  const nearest = [...hill].reduce((best, one) => (Math.abs(one[0] - value) < Math.abs(best[0] - value) ? one : best));
  const place = follow(climb, nearest[1].theta.with(index, value));
  if (place) hill.set(value, { theta: place.theta, height: place.logLikelihood });
  return place?.logLikelihood ?? null;
}

function sameHill(searched: number, followed: number | null): boolean {
  return followed !== null && searched - followed <= SAME_HILL * (1 + Math.abs(searched));
}

/** The parameter's own value, or for a variance at 0 the size of the others. */
function sizeOf(structure: Structure, theta: Float64Array, index: number): number {
  const value = Math.abs(theta[index] as number);
  if (value > 0) return value;
  return isVariance(structure.parameters[index] as Parameter) ? largestOf(structure.variancesAt(theta)) : 1;
}

/** How near an open end of a correlation's range its profile is followed, as a share of the range. */
const NEAR_END = 1e-9;

/**
 * Within a parameter's range. An end of the exponents that are searched is where the search ends, not the interval; a correlation's profile that
 * stays within reach up to an end of its range ends there.
 */
function endsWithin(parameter: Parameter, profile: Omit<Profile, 'floor' | 'ceiling'>): Ends {
  const { role, low, high } = parameter;
  if (role === 'exponent') {
    const ends = profileInterval({ ...profile, floor: -WIDEST_EXPONENT, ceiling: WIDEST_EXPONENT });
    return {
      low: ends.low === -WIDEST_EXPONENT ? null : ends.low,
      high: ends.high === WIDEST_EXPONENT ? null : ends.high,
    };
  }
  if (role !== 'correlation') return profileInterval({ ...profile, floor: low, ceiling: high });
  const width = high - low;
  const floor = low === 0 ? 0 : low + NEAR_END * width;
  const ceiling = high - NEAR_END * width;
  const step = Math.min(profile.step, width / 4);
  const ends = profileInterval({ ...profile, step, floor, ceiling });
  return { low: ends.low === floor ? low : ends.low, high: ends.high === ceiling ? high : ends.high };
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
