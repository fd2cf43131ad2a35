import { solve } from '../algebra/dense';
import type { Fitted } from '../estimate/fitted';
import { dot, lengthOf } from '../numbers/sums';

/**
 * How far every coefficient falls when a block of cells is left out, the weights of the others held.
 *
 *     d = b - b(-b) = (X'WX - X_b' W_b X_b)^-1 X_b' W_b r_b
 *
 * Whitened columns are scaled to unit length; k numbers in the coefficients' units. Good to rank blocks by: what is told of one is refitted.
 * Null where the other cells cannot carry the terms.
 *
 * Source: Cook & Weisberg 1982.
 */
export function blockShiftsOf(fitted: Fitted): (gone: readonly number[]) => number[] | null {
  const roots = fitted.weighting.map(Math.sqrt);
  const whitened = fitted.design.columns.map(({ high }) => high.map((x, g) => x / (roots[g] as number)));
  const units = whitened.map(lengthOf);
  const columns = whitened.map((column, j) => column.map((x) => x / (units[j] as number)));
  const gram = columns.map((left) => Float64Array.from(columns, (right) => dot(left, right)));
  const residuals = fitted.residuals.map((r, g) => r / (roots[g] as number));
  return (gone) => {
    const shifts = blockShifts({ columns, gram, residuals }, gone);
    return shifts && Array.from(shifts, (value, j) => value / (units[j] as number));
  };
}

/** In units of the columns: whitened, of unit length. */
function blockShifts(
  of: {
    readonly columns: readonly Float64Array[];
    readonly gram: readonly Float64Array[];
    readonly residuals: Float64Array;
  },
  gone: readonly number[],
): Float64Array | null {
  const right = new Float64Array(of.columns.length);
  const left = of.gram.map((row) => row.slice());
  for (const g of gone) {
    const x = of.columns.map((column) => column[g] as number);
    for (const [i, row] of left.entries()) {
      right[i] = (right[i] as number) + (x[i] as number) * (of.residuals[g] as number);
      for (let j = 0; j < row.length; j++) row[j] = (row[j] as number) - (x[i] as number) * (x[j] as number);
    }
  }
  return solve(left, right);
}
