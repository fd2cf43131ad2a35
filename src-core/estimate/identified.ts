import { symmetricEigen, symmetricInverse } from '../algebra/dense';
import type { Design } from '../model/design';
import { freeParameters, interiorPoint, type Structure } from '../model/structure';
import { done, type Outcome, refuse } from '../protocol/outcome';
import { alikeUnderWeights } from './alike-under-weights';
import { likelihoodAt } from './likelihood';
import { type LikelihoodRows, triedRows } from './likelihood-rows';

/** Below this smallest eigenvalue of the scaled information two parameters say the same; below the second, nearly so. */
const SAME = 1e-8;
const NEARLY = 1e-4;
/** A parameter takes part in what cannot be told apart when its share of that direction is above this. */
const TAKES_PART = 0.05;

/** How well a structure's parameters can be told apart on the data. */
export interface Identification {
  /** Smallest eigenvalue of the restricted expected information, scaled to unit diagonal; 1 with fewer than two free parameters. */
  readonly smallest: number;
  /** The most correlated pair, where the parameters can hardly be told apart; else null. */
  readonly hardlySeparate: { readonly first: string; readonly second: string; readonly correlation: number } | null;
}

/**
 * Judges, before any fit, whether the data can tell a structure's free parameters apart.
 *
 * The restricted expected information (the full one misses what the design absorbs) at an interior point where the parts weigh alike, scaled to
 * unit diagonal. Parameters that the user fixed do not count; with G = k there is nothing to judge and the fit itself refuses.
 * Refuses columns that the middle variances make depend on each other (`dependent-columns`), and a smallest eigenvalue below 1e-8 (`not-identified`: the kinds of the parts that say the same, in the plan's order).
 *
 * Example: per-size + between on cells of equal size.
 */
export function identificationOf(model: {
  readonly design: Design;
  readonly structure: Structure;
  readonly at?: string;
}): Outcome<Identification> {
  const { design, structure, at = '/variance' } = model;
  const cells = structure.count;
  const free = freeParameters(structure);
  if (free.length < 2 || cells <= design.columns.length) return done({ smallest: 1, hardlySeparate: null });
  const zeros = new Float64Array(cells);
  const rows = triedRows({ response: { high: zeros, low: zeros }, design, structure });
  if ('dependent' in rows) return alikeUnderWeights(design, rows.dependent, at);
  const information = informationInside(rows, structure, true);
  const scaled = information && unitDiagonal(information);
  const parts = (places: readonly number[]) => {
    const own = new Set(places.map((i) => structure.parameters[i]?.partAt));
    return structure.parts.flatMap(({ part }, p) => (own.has(p) ? [part.kind] : []));
  };
  const none = silent(rows, structure, information);
  if (!scaled || none.length > 0)
    return refuse('not-identified', { parts: parts(none.length > 0 ? none : free) }, `${at}/parts`);
  const { values, vectors } = symmetricEigen(scaled);
  const smallest = values.at(-1) as number;
  if (smallest < SAME) {
    const along = vectors.at(-1) as Float64Array;
    const taking = free.filter((_, a) => Math.abs(along[a] as number) > TAKES_PART);
    return refuse('not-identified', { parts: parts(taking) }, `${at}/parts`);
  }
  const names = free.map((i) => structure.parameters[i]?.name as string);
  return done({ smallest, hardlySeparate: smallest < NEARLY ? mostCorrelated(names, scaled) : null });
}

function informationInside(
  rows: LikelihoodRows,
  structure: Structure,
  restricted: boolean,
): readonly Float64Array[] | null {
  const theta = interiorPoint(structure);
  return likelihoodAt({ rows, structure, restricted, theta })?.information ?? null;
}

/** What is left of a parameter's information where the design takes up everything else is rounding. */
const TAKEN_UP = 1e-12;

/** The free parameters that say nothing: the design takes up all that they could tell. */
function silent(
  rows: LikelihoodRows,
  structure: Structure,
  restricted: readonly Float64Array[] | null,
): readonly number[] {
  const full = informationInside(rows, structure, false);
  return freeParameters(structure).filter((_, a) => {
    const whole = full?.[a]?.[a];
    return whole !== undefined && (restricted?.[a]?.[a] as number) <= TAKEN_UP * whole;
  });
}

function unitDiagonal(rows: readonly Float64Array[]): Float64Array[] | null {
  const roots = rows.map((row, a) => Math.sqrt(row[a] as number));
  if (!roots.every((root) => root > 0)) return null;
  return rows.map((row, a) => row.map((value, b) => value / (roots[a] as number) / (roots[b] as number)));
}

/** Correlation of the estimators, from the inverse of the information. */
function mostCorrelated(names: readonly string[], scaled: readonly Float64Array[]): Identification['hardlySeparate'] {
  const inverse = symmetricInverse(scaled);
  if (!inverse) return null;
  let most: Identification['hardlySeparate'] = null;
  const at = (a: number, b: number) => (inverse[a] as Float64Array)[b] as number;
  for (let a = 0; a < names.length; a++)
    for (let b = a + 1; b < names.length; b++) {
      const correlation = at(a, b) / Math.sqrt(at(a, a) * at(b, b));
      if (most && Math.abs(most.correlation) >= Math.abs(correlation)) continue;
      most = { first: names[a] as string, second: names[b] as string, correlation };
    }
  return most;
}
