import type { PlacedPart, Structure } from '../model/structure';
import { joinPlaced } from '../model/structure-join';
import { logLinearPart } from '../model/variance-part';
import { plainDot } from '../numbers/sums';

/** A structure as it is searched, and the way between its parameters and those of the plan. */
export interface SearchForm {
  readonly structure: Structure;
  readonly inward: (theta: Float64Array) => Float64Array;
  readonly outward: (theta: Float64Array) => Float64Array;
}

/**
 * A structure whose free gammas are counted along columns that are orthogonal to each other and of mean square 1, the constant first where it is
 * free: coefficients of columns such as a year or a long size could hardly be searched otherwise. Every other structure is its own form.
 *
 *     Z gamma = Q (R gamma)
 */
export function searchForm(structure: Structure): SearchForm {
  const placed = structure.parts.find(({ part }) => part.kind === 'log-linear');
  const free = placed ? freeGammas(structure, placed) : [];
  if (!placed || free.length < 2) return { structure, inward: same, outward: same };
  const columns = placed.part.keys as readonly Float64Array[];
  const { basis, triangle } = orthogonal(free.map((i) => columns[i - placed.at] as Float64Array));
  const own = placed.part.parameters.map((_, i) => {
    const place = free.indexOf(placed.at + i);
    return place < 0 ? (columns[i] as Float64Array) : (basis[place] as Float64Array);
  });
  const { names, link } = { names: placed.part.parameters.map(({ name }) => name), link: placed.part.link };
  const part = logLinearPart({ names, columns: own, link });
  return {
    structure: joinPlaced(
      structure,
      structure.parts.map((one) => (one === placed ? { ...placed, part } : one)),
    ),
    inward: (theta) => inward(theta, free, triangle),
    outward: (theta) => outward(theta, free, triangle),
  };
}

function same(theta: Float64Array): Float64Array {
  return theta;
}

function freeGammas({ parameters }: Structure, { part, at }: PlacedPart): number[] {
  return part.parameters.map((_, i) => at + i).filter((i) => parameters[i]?.fixed === null);
}

/** Gram and Schmidt, each column twice: Q' Q = G I, but that a first column of ones stays what it is; triangle: R, row after row. */
function orthogonal(columns: readonly Float64Array[]): { basis: Float64Array[]; triangle: Float64Array[] } {
  const basis: Float64Array[] = [];
  const triangle = columns.map(() => new Float64Array(columns.length));
  for (const [j, column] of columns.entries()) {
    const left = column.slice();
    for (let pass = 0; pass < 2; pass++)
      for (const [i, q] of basis.entries()) {
        const share = plainDot(q, left) / q.length;
        const row = triangle[i] as Float64Array;
        row[j] = (row[j] as number) + share;
        for (let g = 0; g < left.length; g++) left[g] = (left[g] as number) - share * (q[g] as number);
      }
    const size = Math.sqrt(plainDot(left, left) / left.length);
    (triangle[j] as Float64Array)[j] = size;
    basis.push(left.map((z) => z / size));
  }
  return { basis, triangle };
}

function inward(theta: Float64Array, free: readonly number[], triangle: readonly Float64Array[]): Float64Array {
  const next = theta.slice();
  for (const [a, i] of free.entries())
    next[i] = free.reduce((sum, j, b) => sum + ((triangle[a] as Float64Array)[b] as number) * (theta[j] as number), 0);
  return next;
}

function outward(theta: Float64Array, free: readonly number[], triangle: readonly Float64Array[]): Float64Array {
  const next = theta.slice();
  for (let a = free.length - 1; a >= 0; a--) {
    const row = triangle[a] as Float64Array;
    let value = theta[free[a] as number] as number;
    for (let b = a + 1; b < free.length; b++) value -= (row[b] as number) * (next[free[b] as number] as number);
    next[free[a] as number] = value / (row[a] as number);
  }
  return next;
}
