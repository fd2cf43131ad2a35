import { freeParameters, interiorPoint, type Structure } from '../model/structure';
import { mean } from '../numbers/sums';
import { bestScale, scalesTogether } from './ascent';
import type { Climb } from './ascent-step';
import { heightAt } from './likelihood';

/** tau^2 and phi at these multiples of a middle size, delta at these values. */
const SIZES = [1e-3, 1e-2, 0.1, 0.3, 1, 3, 10, 100];
const EXPONENTS = [-1, -0.5, 0, 0.5, 1, 1.5, 2, 3];

/**
 * Where a search should begin: the points of a coarse grid whose likelihood no neighbour on the grid exceeds, the highest first.
 *
 * Along a common scale there is nothing to search: it is set to its best value at every point.
 */
export function startsOf(model: Climb, most: number): Float64Array[] {
  const { structure } = model;
  const middle = scaledMiddle(model);
  const axes = freeParameters(structure)
    .filter((i) => !(scalesTogether(structure) && i === firstScale(structure)))
    .map((i) => ({
      i,
      values: structure.parameters[i]?.role === 'exponent' ? EXPONENTS : SIZES.map((m) => m * (middle[i] as number)),
    }));
  if (axes.length === 0) return [middle];
  const places = axes.reduce<number[][]>(
    (all, axis) => all.flatMap((place) => axis.values.map((_, n) => [...place, n])),
    [[]],
  );
  // Beside an exponent tau^2 is counted in what the sampling part amounts to at that exponent.
  const beside = scalesTogether(structure) && structure.exponentAt >= 0 && structure.betweenAt >= 0;
  const samplingAt = (theta: Float64Array) => mean(structure.variancesAt(theta.with(structure.betweenAt, 0)));
  const heights = new Map<string, { theta: Float64Array; height: number }>();
  for (const place of places) {
    const theta = middle.slice();
    for (const [a, axis] of axes.entries()) theta[axis.i] = axis.values[place[a] as number] as number;
    if (beside)
      theta[structure.betweenAt] = ((theta[structure.betweenAt] as number) * samplingAt(theta)) / samplingAt(middle);
    const best = bestScale(model, theta);
    heights.set(place.join(), { theta: best?.theta ?? theta, height: best?.logLikelihood ?? -Infinity });
  }
  const height = (place: readonly number[]) => heights.get(place.join())?.height ?? -Infinity;
  const isTop = (place: readonly number[]) =>
    place.every((n, a) => [n - 1, n + 1].every((m) => height(place.with(a, m)) <= height(place)));
  return places
    .filter((place) => height(place) > -Infinity && isTop(place))
    .sort((one, other) => height(other) - height(one))
    .slice(0, most)
    .map((place) => heights.get(place.join())?.theta as Float64Array);
}

/** The interior point, its free variances at the size that the residuals there show. */
function scaledMiddle(model: Climb): Float64Array {
  const theta = interiorPoint(model.structure);
  const ratio = heightAt({ ...model, theta })?.scaleRatio ?? 1;
  if (!(ratio > 0)) return theta;
  return theta.map((value, i) => {
    const parameter = model.structure.parameters[i];
    return parameter?.fixed === null && parameter.role !== 'exponent' ? value * ratio : value;
  });
}

function firstScale({ parameters, scaleAt, betweenAt }: Structure): number {
  return parameters[scaleAt]?.fixed === null ? scaleAt : betweenAt;
}
