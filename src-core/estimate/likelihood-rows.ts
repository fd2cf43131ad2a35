import { reflectAll } from '../algebra/householder';
import { leastSquares } from '../algebra/least-squares';
import { powerOfFourBelow } from '../algebra/powers-of-two';
import type { Design } from '../model/design';
import { interiorPoint, type Structure } from '../model/structure';
import type { Decimals } from '../numbers/decimals';
import { log } from '../numbers/elementary';
import { sumOfSquares } from '../numbers/sums';

/**
 * What a likelihood needs of the data, prepared once: the design whitened at a middle variance and made orthonormal, so that the small matrices
 * met on the way are well conditioned, and the response less what the design explains of it.
 */
export interface LikelihoodRows {
  /** G and k. */
  readonly cells: number;
  readonly terms: number;
  /** One row a cell, k numbers each, row after row. */
  readonly basis: Float64Array;
  readonly response: Float64Array;
  /** The variance by which the row was whitened. */
  readonly middle: Float64Array;
  /** The cell whose variance the row has. */
  readonly cellOf: Int32Array;
  /** How many cells' log variance the row stands for. */
  readonly count: Float64Array;
  /** ln det(X' M^-1 X), M the middle variances. */
  readonly logDeterminant: number;
  /** True where the design leaves no more than rounding. */
  readonly perfect: boolean;
}

/**
 * Rows for the full and the restricted likelihood.
 *
 * Cells of the same sampling variance share their variance whatever the parameters: where there are many of them, they are pooled into the k + 1
 * rows of their own triangle, which say the same.
 */
export function likelihoodRows(model: {
  readonly response: Decimals;
  readonly design: Pick<Design, 'columns'>;
  readonly structure: Structure;
}): LikelihoodRows {
  const { response, design, structure } = model;
  const middle = structure.variancesAt(interiorPoint(structure));
  const solved = leastSquares({ columns: design.columns, y: response, variances: middle });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  const cells = middle.length;
  const terms = design.columns.length;
  const basis = new Float64Array(cells * terms);
  for (const [j, vector] of solved.basis.entries())
    for (let g = 0; g < cells; g++) basis[g * terms + j] = vector[g] as number;
  // The middle variance taken to the size of what is left over, so that weights and squares stay near 1 around the maximum.
  const { power, root } = powerOfFourBelow(sumOfSquares(solved.whitened) / cells);
  const logDeterminant = solved.triangle.reduce(
    (sum, column, j) => sum + 2 * log(Math.abs(column[j] as number) / root),
    0,
  );
  const rows = {
    ...oneToOne(cells),
    terms,
    basis,
    response: solved.whitened.map((r) => r / root),
    middle: middle.map((v) => v * power),
    logDeterminant,
    perfect: solved.perfect,
  };
  return pooled(rows, structure.sampling);
}

/** Rows for the pseudo-likelihood of residuals that are held. */
export function heldRows(residuals: Float64Array): LikelihoodRows {
  const cells = residuals.length;
  const perfect = residuals.every((r) => r === 0);
  return {
    ...oneToOne(cells),
    terms: 0,
    basis: new Float64Array(0),
    response: residuals,
    middle: new Float64Array(cells).fill(1),
    logDeterminant: 0,
    perfect,
  };
}

function oneToOne(cells: number): Pick<LikelihoodRows, 'cells' | 'cellOf' | 'count'> {
  return { cells, cellOf: Int32Array.from({ length: cells }, (_, g) => g), count: new Float64Array(cells).fill(1) };
}

/** Pools the rows of cells whose variances are equal at every theta, where that leaves half as many or fewer. */
function pooled(rows: LikelihoodRows, sampling: Float64Array): LikelihoodRows {
  const width = rows.terms + 1;
  const groups = new Map<number, number[]>();
  for (let g = 0; g < rows.cells; g++) {
    const a = sampling[g] as number;
    const group = groups.get(a);
    if (group) group.push(g);
    else groups.set(a, [g]);
  }
  let left = 0;
  for (const group of groups.values()) left += Math.min(group.length, width);
  if (left > rows.cells / 2) return rows;
  return joinPools(rows, [...groups.values()], left);
}

function joinPools(rows: LikelihoodRows, groups: readonly (readonly number[])[], length: number): LikelihoodRows {
  const k = rows.terms;
  const basis = new Float64Array(length * k);
  const response = new Float64Array(length);
  const middle = new Float64Array(length);
  const cellOf = new Int32Array(length);
  const count = new Float64Array(length);
  let at = 0;
  for (const group of groups) {
    const columns = columnsOf(rows, group);
    const small = group.length > k + 1 ? reflectAll(columns).triangle : columns;
    const height = Math.min(group.length, k + 1);
    for (let i = 0; i < height; i++, at++) {
      for (let j = 0; j < k; j++) basis[at * k + j] = (small[j] as Float64Array)[i] as number;
      response[at] = (small[k] as Float64Array)[i] as number;
      middle[at] = rows.middle[group[0] as number] as number;
      cellOf[at] = group[0] as number;
      count[at] = i === 0 ? group.length : 0;
    }
  }
  return { ...rows, basis, response, middle, cellOf, count };
}

/** The rows of some cells as k + 1 columns, the response last. */
function columnsOf(rows: LikelihoodRows, group: readonly number[]): Float64Array[] {
  const columns = Array.from({ length: rows.terms }, (_, j) =>
    Float64Array.from(group, (g) => rows.basis[g * rows.terms + j] as number),
  );
  return [...columns, Float64Array.from(group, (g) => rows.response[g] as number)];
}
