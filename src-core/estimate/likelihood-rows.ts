import { leastSquares } from '../algebra/least-squares';
import { powerOfFourBelow } from '../algebra/powers-of-two';
import { trianglesOfGroups } from '../algebra/tall-products';
import { type Alike, alikeCells } from '../model/alike';
import type { Design } from '../model/design';
import { interiorPoint, type Structure } from '../model/structure';
import { joinPlaced, takeStructure } from '../model/structure-join';
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
  /** The cell whose variance the row has, as a place among those that `structureOf` keeps. */
  readonly cellOf: Int32Array;
  /** A structure on the cells that stand for all: itself where rows are one to one with cells. */
  readonly structureOf: (structure: Structure) => Structure;
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
 * Cells that are alike to the structure share their variance whatever the parameters: where there are many of them, they are pooled into the k + 1
 * rows of their own triangle, which say the same. Not where cells go together: the rows are then one to one with them.
 */
export function likelihoodRows(model: RowsModel): LikelihoodRows {
  const rows = triedRows(model);
  if ('dependent' in rows) throw new RangeError('columns depend on each other under the weights alone');
  return rows;
}

interface RowsModel {
  readonly response: Decimals;
  readonly design: Pick<Design, 'columns'>;
  readonly structure: Structure;
}

/** The same, or the columns that the middle variances make depend on each other: asked before any fit. */
export function triedRows(model: RowsModel): LikelihoodRows | { readonly dependent: readonly number[] } {
  const { response, design, structure } = model;
  const middle = structure.variancesAt(interiorPoint(structure));
  const solved = leastSquares({ columns: design.columns, y: response, variances: middle });
  if ('dependent' in solved) return solved;
  const cells = middle.length;
  // The middle variance taken to the size of what is left over, so that weights and squares stay near 1 around the maximum.
  const { power, root } = powerOfFourBelow(sumOfSquares(solved.whitened) / cells);
  const logDeterminant = solved.triangle.reduce(
    (sum, column, j) => sum + 2 * log(Math.abs(column[j] as number) / root),
    0,
  );
  const common = { cells, terms: design.columns.length, logDeterminant, perfect: solved.perfect };
  const columns = [...solved.basis, solved.whitened.map((r) => r / root)];
  for (let g = 0; g < cells; g++) middle[g] = (middle[g] as number) * power;
  const alike = structure.links ? null : pooling(alikeCells(structure), columns.length);
  return { ...common, ...(alike ? pooledRows(columns, middle, alike) : oneToOne(columns, middle)) };
}

type Rows = Omit<LikelihoodRows, 'cells' | 'terms' | 'logDeterminant' | 'perfect'>;

/** Rows for the pseudo-likelihood of residuals that are held. */
export function heldRows(residuals: Float64Array): LikelihoodRows {
  const cells = residuals.length;
  const perfect = residuals.every((r) => r === 0);
  const rows = oneToOne([residuals], new Float64Array(cells).fill(1));
  return { cells, terms: 0, logDeterminant: 0, perfect, ...rows };
}

/** columns: the basis and the response. */
function oneToOne(columns: readonly Float64Array[], middle: Float64Array): Rows {
  const cells = middle.length;
  const terms = columns.length - 1;
  const basis = new Float64Array(cells * terms);
  for (let j = 0; j < terms; j++) {
    const vector = columns[j] as Float64Array;
    for (let g = 0; g < cells; g++) basis[g * terms + j] = vector[g] as number;
  }
  const cellOf = new Int32Array(cells);
  for (let g = 0; g < cells; g++) cellOf[g] = g;
  const response = columns[terms] as Float64Array;
  return { basis, response, middle, cellOf, count: new Float64Array(cells).fill(1), structureOf: (own) => own };
}

/** The cells group by group. */
interface Pooling extends Alike {
  readonly starts: Int32Array;
  readonly order: Int32Array;
}

/** Cells in the order of their groups, where pooling leaves half as many rows or fewer; else null. width: rows that a group leaves at most. */
function pooling(alike: Alike, width: number): Pooling | null {
  const { groupOf, groups } = alike;
  const starts = new Int32Array(groups + 1);
  for (let g = 0; g < groupOf.length; g++)
    starts[(groupOf[g] as number) + 1] = (starts[(groupOf[g] as number) + 1] as number) + 1;
  let left = 0;
  for (let group = 1; group <= groups; group++) {
    left += Math.min(starts[group] as number, width);
    starts[group] = (starts[group] as number) + (starts[group - 1] as number);
  }
  if (left > groupOf.length / 2) return null;
  const next = starts.slice();
  const order = new Int32Array(groupOf.length);
  for (let g = 0; g < groupOf.length; g++) {
    const group = groupOf[g] as number;
    order[next[group] as number] = g;
    next[group] = (next[group] as number) + 1;
  }
  return { groupOf, groups, starts, order };
}

function pooledRows(columns: readonly Float64Array[], middle: Float64Array, pools: Pooling): Rows {
  const { groups, starts, order } = pools;
  const width = columns.length;
  const k = width - 1;
  const triangles = trianglesOfGroups(columns, order, starts);
  const heights = Int32Array.from({ length: groups }, (_, i) =>
    Math.min((starts[i + 1] as number) - (starts[i] as number), width),
  );
  const length = heights.reduce((sum, height) => sum + height, 0);
  const rows = {
    basis: new Float64Array(length * k),
    response: new Float64Array(length),
    middle: new Float64Array(length),
    cellOf: new Int32Array(length),
    count: new Float64Array(length),
  };
  let at = 0;
  for (const [group, triangle] of triangles.entries()) {
    const first = order[starts[group] as number] as number;
    rows.count[at] = (starts[group + 1] as number) - (starts[group] as number);
    for (let i = 0; i < (heights[group] as number); i++, at++) {
      rows.basis.set(triangle.subarray(i * width, i * width + k), at * k);
      rows.response[at] = triangle[i * width + k] as number;
      rows.middle[at] = middle[first] as number;
      rows.cellOf[at] = group;
    }
  }
  const firsts = Int32Array.from({ length: groups }, (_, group) => order[starts[group] as number] as number);
  return { ...rows, structureOf: onCells(firsts, order.length) };
}

/**
 * Structures of so many cells on some of them; one on these already is itself.
 *
 * What is kept goes by the parts: structures that differ in what is fixed alone have the same ones.
 */
function onCells(cells: Int32Array, count: number): (structure: Structure) => Structure {
  const known = new WeakMap<Structure['parts'], Structure['parts']>();
  return (structure) => {
    if (structure.count !== count) return structure;
    const parts = known.get(structure.parts) ?? takeStructure(structure, cells).parts;
    known.set(structure.parts, parts);
    return joinPlaced(structure, parts);
  };
}
