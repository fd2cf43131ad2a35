import { atLevel, levelsOf, type PlacedPart, partVariances, type Structure } from '../model/structure';
import { mean } from '../numbers/sums';

/** Where a fit of the same model, up to units and the order of cells, ended. */
export interface Near {
  readonly structure: Structure;
  readonly theta: Float64Array;
  /** By what all variances are expected to be multiplied. */
  readonly times: number;
}

/**
 * A start for the search: parameters by their names, and every part at the size that it had, times what is expected.
 *
 * structure: of the same parts in the same order; a parameter without a namesake stays at its middle value.
 */
export function startNear(structure: Structure, near: Near): Float64Array {
  const values = new Map(near.structure.parameters.map(({ name }, i) => [name, near.theta[i] as number]));
  const theta = Float64Array.from(
    structure.parameters,
    ({ name, fixed, inside }) => fixed ?? values.get(name) ?? inside,
  );
  for (const [p, placed] of structure.parts.entries()) {
    const aim = mean(partVariances(near.structure.parts[p] as PlacedPart, near.theta)) * near.times;
    const factor = aim / mean(partVariances(placed, theta));
    if (!(factor > 0 && factor < Infinity)) continue;
    for (const i of levelsOf(structure, placed)) {
      const parameter = structure.parameters[i];
      if (parameter?.fixed === null) theta[i] = atLevel(parameter, theta[i] as number, factor);
    }
  }
  return theta;
}
