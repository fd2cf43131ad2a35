import { choleskyOf, solveByFactor } from '../algebra/cholesky';
import { solve } from '../algebra/dense';
import { factorOf } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';
import { dot, lengthOf } from '../numbers/sums';

/**
 * How far every coefficient falls when a block of cells is left out, the weights of the others held.
 *
 *     d = b - b(-b) = C_.b Q_bb^-1 (A^-1 r)_b,  Q = A^-1 - A^-1 X (X'A^-1X)^-1 X'A^-1
 *       = (X~'X~ - X~_b' X~_b)^-1 X~_b' r~_b  where no cell of the block is correlated with one that stays
 *
 * A: the estimator's weighting; a tilde marks whitened quantities, their columns scaled to unit length. k numbers in the coefficients' units. Good to
 * rank blocks by: what is told of one is refitted. Null where the other cells cannot carry the terms.
 *
 * Source: Cook & Weisberg 1982; METHODS of the program, 5.
 */
export function blockShiftsOf(fitted: Fitted): (gone: readonly number[]) => number[] | null {
  const whole = wholeBlocks(fitted);
  const parts = fitted.weighting.blocks ? partialBlocks(fitted) : null;
  const stands = standsAlone(fitted);
  return (gone) => (parts && !stands(gone) ? parts(gone) : whole(gone));
}

/** True where every correlated block that the cells touch lies among them as a whole. */
function standsAlone({ weighting }: Fitted): (gone: readonly number[]) => boolean {
  const blockOf = new Map<number, Int32Array>();
  for (const { cells } of weighting.blocks ?? []) for (const g of cells) blockOf.set(g, cells);
  return (gone) => {
    const among = new Set(gone);
    return gone.every((g) => blockOf.get(g)?.every((other) => among.has(other)) ?? true);
  };
}

function wholeBlocks({ weighting, design, residuals: left }: Fitted): (gone: readonly number[]) => number[] | null {
  const { whitened: whiten } = factorOf(weighting);
  const whitened = design.columns.map(({ high }) => whiten(high));
  const units = whitened.map(lengthOf);
  const columns = whitened.map((column, j) => column.map((x) => x / (units[j] as number)));
  const gram = columns.map((one) => Float64Array.from(columns, (other) => dot(one, other)));
  const residuals = whiten(left);
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

/** By the square Q_bb of the cells that go: they are correlated with cells that stay. */
function partialBlocks({ weighting, basis, residuals, pulls }: Fitted): (gone: readonly number[]) => number[] | null {
  const factor = factorOf(weighting);
  const taken = basis.map(factor.backwards);
  const turned = factor.solve(residuals);
  return (gone) => {
    const n = gone.length;
    const among = factor.inverseAmong(gone);
    for (const q of taken)
      for (const [a, g] of gone.entries())
        for (let b = 0; b <= a; b++)
          among[a * n + b] = (among[a * n + b] as number) - (q[g] as number) * (q[gone[b] as number] as number);
    const left = choleskyOf(among, n);
    const right = Float64Array.from(gone, (g) => turned[g] as number);
    const delta = left && solveByFactor(left, right, n);
    return (
      delta && pulls.map((pull) => gone.reduce((sum, g, a) => sum + (pull[g] as number) * (delta[a] as number), 0))
    );
  };
}
