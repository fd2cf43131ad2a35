import { factorOf } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';
import { type Decimals, pairAt } from '../numbers/decimals';
import {
  add,
  divide,
  fromNumber,
  multiply,
  type Pair,
  squareRoot,
  subtract,
  toNumber,
  ZERO,
} from '../numbers/double-double';

/** Work G k^2 beyond which this route is not taken: it is a check, and must not outlast what it checks. */
const WORK = 2e6;
const ONE: Pair = [1, 0];

/**
 * The coefficients of a fit by another route than the one that made them: normal equations summed in double-double, solved by Cholesky.
 *
 *     X' A^-1 X b = X' A^-1 y
 *
 * Twice the digits make up for the squared condition. Null beyond a stated size, and where a pivot is not above 0.
 *
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.3.2.
 */
export function byNormalEquations(fitted: Fitted): Float64Array | null {
  const { design, response } = fitted;
  const k = design.columns.length;
  if (response.high.length * k * k > WORK) return null;
  const { weighting } = fitted;
  // Cells that go together are whitened first; what is solved afterwards has the same weights.
  const whiten = weighting.blocks ? factorOf(weighting).whiten : (column: Decimals): Decimals => column;
  const columns = [...design.columns, response].map(whiten);
  const weights = Array.from(weighting.diagonal, (a) => (weighting.blocks ? ONE : divide(ONE, fromNumber(a))));
  const products = columns.map(() => columns.map((): Pair => ZERO));
  for (const [g, weight] of weights.entries()) {
    const row = columns.map((column) => pairAt(column, g));
    const weighed = row.map((x) => multiply(x, weight));
    for (const [i, left] of weighed.entries())
      for (let j = i; j < row.length; j++) {
        const sums = products[i] as Pair[];
        sums[j] = add(sums[j] as Pair, multiply(left, row[j] as Pair));
      }
  }
  return solved(products, k);
}

/** Solves the upper triangle of bordered sums: the last column is the right-hand side. */
function solved(products: readonly Pair[][], k: number): Float64Array | null {
  const factor: Pair[][] = [];
  for (let i = 0; i < k; i++) {
    const row = (products[i] as Pair[]).slice();
    for (const above of factor) {
      const share = above[i] as Pair;
      for (let j = i; j <= k; j++) row[j] = subtract(row[j] as Pair, multiply(share, above[j] as Pair));
    }
    const pivot = row[i] as Pair;
    if (!(pivot[0] > 0)) return null;
    const root = squareRoot(pivot);
    factor.push(row.map((value, j) => (j < i ? ZERO : divide(value, root))));
  }
  const b: Pair[] = Array.from({ length: k }, () => ZERO);
  for (let i = k - 1; i >= 0; i--) {
    const row = factor[i] as Pair[];
    let left = row[k] as Pair;
    for (let j = i + 1; j < k; j++) left = subtract(left, multiply(row[j] as Pair, b[j] as Pair));
    b[i] = divide(left, row[i] as Pair);
  }
  return Float64Array.from(b, toNumber);
}
