import {
  atLevel,
  freeParameters,
  interiorPoint,
  levelsOf,
  type Parameter,
  type PlacedPart,
  partVariances,
  type Structure,
} from '../model/structure';
import { log, pow } from '../numbers/elementary';
import { mean } from '../numbers/sums';
import { bestScale, type Place } from './ascent';
import type { Climb } from './ascent-step';
import { heightAt } from './likelihood';
import { growsTogether } from './search-space';

/** The range over which variances are varied, as multiples of a middle size; delta; gammas, along columns of mean square 1. */
const SIZES = [1e-3, 1e2] as const;
const EXPONENTS = [-1, 3] as const;
const GAMMAS = [-2, 2] as const;
/** Values an axis where there are one, two, or more of them; in a check, which begins from a maximum that is known, fewer. */
const FINE = [24, 9, 6];
const COARSE = [10, 5, 5];
/** From this many axes on, one is swept after the other from several points, in place of a whole grid. */
const SWEPT = 3;

/** Something that is varied over a few values while everything else stays. */
interface Axis {
  readonly values: readonly number[];
  readonly set: (theta: Float64Array, value: number) => Float64Array;
}

/**
 * Where a search should begin: the points of a coarse grid whose likelihood no neighbour on the grid exceeds, the highest first; with three or
 * more things to vary, the ends of sweeps over one after the other.
 *
 * Along a common scale there is nothing to search: it is set to its best value at every point.
 */
export function startsOf(model: Climb & { readonly brief?: boolean }, most: number): Float64Array[] {
  const middle = scaledMiddle(model);
  const axes = axesOf(model.structure, middle, model.brief ? COARSE : FINE);
  if (axes.length === 0) return [middle, ...(model.brief ? [] : nearlyFitted(model.structure, middle))];
  const tops = axes.length < SWEPT ? gridTops(model, middle, axes) : sweptTops(model, middle, axes);
  return [
    ...tops.slice(0, most).map(({ theta }) => theta),
    ...(model.brief ? [] : nearlyFitted(model.structure, middle)),
  ];
}

/** A class of few cells may be fitted all but exactly: a likelihood that grows without bound there is looked for. */
const NEARLY_FITTED = 1e-6;
/** Up to so many classes. */
const FEW_CLASSES = 8;

function nearlyFitted({ parameters }: Structure, middle: Float64Array): Float64Array[] {
  const classes = parameters.flatMap(({ role, fixed }, i) => (role === 'class' && fixed === null ? [i] : []));
  if (classes.length < 2 || classes.length > FEW_CLASSES) return [];
  return classes.map((i) => middle.with(i, (middle[i] as number) * NEARLY_FITTED));
}

function byHeight(one: Place, other: Place): number {
  return other.logLikelihood - one.logLikelihood;
}

function gridTops(model: Climb, middle: Float64Array, axes: readonly Axis[]): Place[] {
  const places = axes.reduce<number[][]>(
    (all, axis) => all.flatMap((place) => axis.values.map((_, n) => [...place, n])),
    [[]],
  );
  const found = new Map<string, Place | null>();
  for (const place of places) {
    if (model.hooks?.cancelled()) return [];
    const theta = axes.reduce((at, axis, a) => axis.set(at, axis.values[place[a] as number] as number), middle);
    found.set(place.join(), bestScale(model, theta));
  }
  const height = (place: readonly number[]) => found.get(place.join())?.logLikelihood ?? -Infinity;
  const isTop = (place: readonly number[]) =>
    place.every((n, a) => [n - 1, n + 1].every((m) => height(place.with(a, m)) <= height(place)));
  return places
    .filter(isTop)
    .flatMap((place) => found.get(place.join()) ?? [])
    .sort(byHeight);
}

/** From the middle and from points far out on every axis: each axis in turn at its best value, the others where they stand. */
function sweptTops(model: Climb, middle: Float64Array, axes: readonly Axis[]): Place[] {
  const far = axes.flatMap(({ values, set }) =>
    [values.at(1), values.at(-2)].map((value) => set(middle, value as number)),
  );
  const ends = [middle, ...far].flatMap((from) => swept(model, from, axes) ?? []);
  return ends
    .sort(byHeight)
    .filter((end, e) => ends.findIndex(({ logLikelihood }) => logLikelihood === end.logLikelihood) === e);
}

function swept(model: Climb, from: Float64Array, axes: readonly Axis[]): Place | null {
  let best = bestScale(model, from);
  for (const { values, set } of axes)
    for (const value of values) {
      if (model.hooks?.cancelled()) return best;
      const there = bestScale(model, set(best?.theta ?? from, value));
      if (there && (!best || there.logLikelihood > best.logLikelihood)) best = there;
    }
  return best;
}

/** The interior point, its free variances at the size that the residuals there show. */
function scaledMiddle(model: Climb): Float64Array {
  const { structure } = model;
  const theta = interiorPoint(structure);
  const ratio = heightAt({ ...model, theta })?.scaleRatio ?? 1;
  if (!(ratio > 0 && ratio < Infinity)) return theta;
  for (const placed of structure.parts)
    for (const i of freeLevels(structure, placed))
      theta[i] = atLevel(structure.parameters[i], theta[i] as number, ratio);
  return theta;
}

function freeLevels(structure: Structure, placed: PlacedPart): number[] {
  return levelsOf(structure, placed).filter((i) => structure.parameters[i]?.fixed === null);
}

function axesOf(structure: Structure, middle: Float64Array, counts: readonly number[]): Axis[] {
  const together = growsTogether(structure);
  const sampling = structure.parts.find(({ part }) => part.kind !== 'between' && part.kind !== 'shared') as PlacedPart;
  const first = structure.parts.find((placed) => freeLevels(structure, placed).length > 0);
  const scaled = together ? (freeLevels(structure, sampling).length > 0 ? sampling : first) : undefined;
  const before = mean(partVariances(sampling, middle));
  const leveled = structure.parts.filter((placed) => placed !== scaled && freeLevels(structure, placed).length > 0);
  const constants = new Set(structure.parts.flatMap((placed) => levelsOf(structure, placed)));
  const plain = freeParameters(structure).filter((i) => !constants.has(i));
  const count = counts[Math.min(counts.length, plain.length + leveled.length) - 1] ?? 0;
  return [
    ...plain.map((i) => ({
      values: plainValues(structure.parameters[i] as Parameter, count),
      set: (theta: Float64Array, value: number) => theta.with(i, value),
    })),
    ...leveled.map((placed) => {
      // In what the sampling part amounts to, which an exponent changes.
      const inSampling = placed !== sampling && together;
      const size = mean(partVariances(placed, middle)) / (inSampling ? before : 1);
      return {
        values: stretchOver(SIZES, count, true),
        set: (theta: Float64Array, multiple: number) => {
          const aim = multiple * size * (inSampling ? mean(partVariances(sampling, theta)) : 1);
          return withMean(structure, { placed, theta, aim });
        },
      };
    }),
  ];
}

/** theta with the free levels of a part taken to a mean variance. */
function withMean(
  structure: Structure,
  { placed, theta, aim }: { readonly placed: PlacedPart; readonly theta: Float64Array; readonly aim: number },
): Float64Array {
  const factor = aim / mean(partVariances(placed, theta));
  const next = theta.slice();
  for (const i of freeLevels(structure, placed)) next[i] = atLevel(structure.parameters[i], theta[i] as number, factor);
  return next;
}

/** Values over a range, evenly or in equal ratios, the ends among them. */
function stretchOver([low, high]: readonly [number, number], count: number, inRatios: boolean): number[] {
  return Array.from({ length: count }, (_, n) => {
    const share = n / (count - 1);
    return inRatios ? low * pow(high / low, share) : low + (high - low) * share;
  });
}

/** Of what has no size of its own: correlations evenly over their range, those of a serial part as correlations of neighbours. */
function plainValues({ role, low, high, inside }: Parameter, count: number): readonly number[] {
  if (role === 'exponent') return stretchOver(EXPONENTS, count, false);
  if (role === 'gamma') return stretchOver(GAMMAS, count, false);
  const even = Array.from({ length: count }, (_, n) => low + ((high - low) * (n + 0.5)) / count);
  return low < 0 ? even : even.map((correlation) => pow(correlation, log(inside) / log(0.3)));
}
