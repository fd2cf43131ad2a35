import {
  freeParameters,
  interiorPoint,
  type Parameter,
  type PlacedPart,
  type Structure,
  withFixed,
} from '../model/structure';
import { log, pow } from '../numbers/elementary';
import { bestScale, climb, type Place } from './ascent';
import type { Climb } from './ascent-step';
import { heightAt, likelihoodAt } from './likelihood';
import { searchForm } from './search-form';
import { canVanish, growsTogether, withoutIdle } from './search-space';

/** A score above this share of its own standard deviation rises. */
const RISES = 1e-9;
/** Correlations of neighbours, in order, tried where one stands at 0, or where it says nothing because its part does. */
const PROBES = [1e-3, 0.02, 0.1, 0.3, 0.6, 0.9];
/** A likelihood is higher by more than rounding. */
const HIGHER = 1e-10;

/**
 * The maximum that one start leads to: uphill, along a boundary where a part vanishes on the way, and back inside where the likelihood rises from
 * there. Cheaper than `maximise` by the starts that it does not try; null where the way is lost.
 *
 * start: every parameter of the structure, fixed ones at their value. Returns theta in the same order.
 */
export function follow(model: Climb, start: Float64Array): Place | null {
  const form = searchForm(withoutIdle(model.structure));
  const place = followed({ ...model, structure: form.structure }, form.inward(start));
  return place && { ...place, theta: form.outward(place.theta) };
}

function followed(model: Climb, start: Float64Array): Place | null {
  const { structure } = model;
  const free = freeParameters(structure);
  if (free.length === 0) {
    const theta = start.map((value, i) => structure.parameters[i]?.fixed ?? value);
    const at = heightAt({ ...model, theta });
    return at && { theta, logLikelihood: at.logLikelihood };
  }
  const [face] = canVanish(structure).filter((i) => start[i] === 0);
  if (face !== undefined) return fromFace(model, face, start);
  const inside = insideOf(model, start);
  if (free.length === 1 && growsTogether(structure)) return bestScale(model, inside);
  const arrival = climb(model, inside);
  if (arrival.ended === 'maximum') return arrival;
  if (arrival.ended === 'lost') return null;
  return fromFace(model, arrival.parameter, start);
}

/** Along a boundary first, and inside from there where the likelihood rises. */
function fromFace(model: Climb, index: number, start: Float64Array): Place | null {
  const edge = followed({ ...model, structure: onFace(model.structure, index) }, start.with(index, 0));
  if (!edge) return followedInside(model, start);
  for (const leaving of leavingBoundary(model, index, edge)) {
    const back = climb(model, leaving);
    if (back.ended === 'maximum' && back.logLikelihood > edge.logLikelihood) return back;
  }
  return edge;
}

function followedInside(model: Climb, start: Float64Array): Place | null {
  const arrival = climb(model, insideOf(model, start));
  return arrival.ended === 'maximum' ? arrival : null;
}

/** The structure with one parameter at 0, and nothing that says nothing then left free. */
export function onFace(structure: Structure, index: number): Structure {
  return withoutIdle(withFixed(structure, structure.parameters[index]?.name as string, 0));
}

/** The start with free parameters at their boundary taken inside their range, fixed ones at their value. */
function insideOf({ structure }: Climb, start: Float64Array): Float64Array {
  const inside = interiorPoint(structure);
  return start.map((value, i) => {
    const { fixed, low, role } = structure.parameters[i] as Parameter;
    if (fixed !== null) return fixed;
    const atEnd = role === 'correlation' ? !(value > low) : value === low;
    return atEnd ? (inside[i] as number) : value;
  });
}

/** Starts just inside the boundary at which a parameter is 0, where the likelihood rises from it: none or one. */
export function leavingBoundary(model: Climb, index: number, top: Place): Float64Array[] {
  const { structure } = model;
  if (structure.parameters[index]?.role === 'correlation') return probed(model, index, top);
  const placed = structure.parts.find(
    ({ part, at, rhoAt }) => rhoAt >= 0 && index >= at && index < at + part.parameters.length,
  );
  if (!placed || structure.parameters[placed.rhoAt]?.fixed !== null) return rising(model, index, top.theta);
  const found = correlationsOf(structure, placed).flatMap((rho) => {
    const start = rising(model, index, top.theta.with(placed.rhoAt, rho));
    return start.flatMap((theta) => bestScale(model, theta) ?? []);
  });
  const best = found.reduce<Place | null>(
    (most, place) => (most && most.logLikelihood >= place.logLikelihood ? most : place),
    null,
  );
  return best ? [best.theta] : [];
}

/** Where the score of a variance at 0 is above it: one step of scoring inside. */
function rising(model: Climb, index: number, theta: Float64Array): Float64Array[] {
  const at = likelihoodAt({ ...model, theta });
  const place = freeParameters(model.structure).indexOf(index);
  const score = at?.score[place] as number;
  const information = at?.information[place]?.[place] as number;
  if (!at || !(score > RISES * Math.sqrt(information))) return [];
  return [theta.with(index, (score / information) * (at.units[place] as number))];
}

/** The first of a few small correlations at which the likelihood is higher than where there is none. */
function probed(model: Climb, index: number, top: Place): Float64Array[] {
  const placed = model.structure.parts.find(({ rhoAt }) => rhoAt === index) as PlacedPart;
  for (const rho of correlationsOf(model.structure, placed)) {
    const there = bestScale(model, top.theta.with(index, rho));
    if (there && there.logLikelihood > top.logLikelihood + HIGHER) return [there.theta];
  }
  return [];
}

function correlationsOf(structure: Structure, { rhoAt }: PlacedPart): number[] {
  const { inside, low } = structure.parameters[rhoAt] as Parameter;
  const steps = log(inside) / log(0.3);
  const up = PROBES.map((probe) => pow(probe, steps));
  return low < 0 ? [...up, 0.5 * low] : up;
}
