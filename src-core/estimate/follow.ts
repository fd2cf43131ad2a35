import { freeParameters, interiorPoint, withFixed } from '../model/structure';
import { bestScale, climb, type Place, scalesTogether } from './ascent';
import type { Climb } from './ascent-step';
import { heightAt, likelihoodAt } from './likelihood';

/** A score above this share of its own standard deviation rises. */
const RISES = 1e-9;

/**
 * The maximum that one start leads to: uphill, along a boundary where a part vanishes on the way, and back inside where the likelihood rises from
 * there. Cheaper than `maximise` by the starts that it does not try; null where the way is lost.
 *
 * start: every parameter of the structure, fixed ones at their value. Returns theta in the same order.
 */
export function follow(model: Climb, start: Float64Array): Place | null {
  const { structure } = model;
  const free = freeParameters(structure);
  if (free.length === 0) {
    const at = heightAt({ ...model, theta: start });
    return at && { theta: start, logLikelihood: at.logLikelihood };
  }
  const from = heightAt({ ...model, theta: start }) ? start : insideOf(model, start);
  if (free.length === 1 && scalesTogether(structure)) return bestScale(model, from);
  const arrival = climb(model, from);
  if (arrival.ended === 'maximum') return arrival;
  if (arrival.ended === 'lost') return null;
  const name = structure.parameters[arrival.parameter]?.name as string;
  const edge = follow({ ...model, structure: withFixed(structure, name, 0) }, from.with(arrival.parameter, 0));
  if (!edge) return null;
  for (const inside of leavingBoundary(model, name, edge)) {
    const back = climb(model, inside);
    if (back.ended === 'maximum' && back.logLikelihood > edge.logLikelihood) return back;
  }
  return edge;
}

/** The start with its variances at 0 taken inside their range: nothing can be computed where all of them are 0. */
function insideOf({ structure }: Climb, start: Float64Array): Float64Array {
  const inside = interiorPoint(structure);
  return start.map((value, i) =>
    structure.parameters[i]?.fixed === null && value === 0 ? (inside[i] as number) : value,
  );
}

/** A start just inside the boundary at which a parameter is 0, where the likelihood rises from it: none or one. */
export function leavingBoundary(model: Climb, name: string, top: Place): Float64Array[] {
  const at = likelihoodAt({ ...model, theta: top.theta });
  const index = model.structure.parameters.findIndex((parameter) => parameter.name === name);
  const place = freeParameters(model.structure).indexOf(index);
  const score = at?.score[place] as number;
  const information = at?.information[place]?.[place] as number;
  if (!at || !(score > RISES * Math.sqrt(information))) return [];
  const theta = top.theta.slice();
  theta[index] = (score / information) * (at.units[place] as number);
  return [theta];
}
