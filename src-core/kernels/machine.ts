import type { Range } from './chunks';
import { factorLower, type Square } from './twin-cholesky';
import { joinSums, type Product, timesChunks } from './twin-products';
import { type Grouping, joinTriangles, type Reduction, reduceChunks, reduceGroups } from './twin-reduce';
import { joinPairs, type Residuals, residualChunks } from './twin-refine';
import { type Settling, settleChunks, weightChunks } from './twin-settle';

/** Where `weightChunks` reads v and writes 1 / root v, and 1 / v in double-double. */
export interface Weights {
  readonly v: number;
  readonly roots: number;
  readonly high: number;
  readonly low: number;
}

/** The kernels on one memory of doubles. Places are indices into it; 0 stands for none. */
export interface Machine {
  /** The memory, grown to hold that many doubles; what was read from it before may be gone elsewhere. Null where it cannot grow so far. */
  readonly memory: (doubles: number) => Float64Array | null;
  readonly weights: (of: Weights, range: Range) => void;
  readonly reduce: (of: Reduction, range: Range) => void;
  readonly groups: (of: Grouping, groups: { readonly from: number; readonly to: number }) => void;
  readonly joinTriangles: (of: Reduction, count: number) => void;
  readonly residuals: (of: Residuals, range: Range) => void;
  readonly joinPairs: (pairs: number, count: number, each: number) => void;
  readonly settle: (of: Settling, range: Range) => void;
  readonly times: (of: Product, range: Range) => void;
  /** -1, or the row whose pivot counts as nothing. */
  readonly factor: (of: Square) => number;
  readonly joinSums: (sums: number, count: number, each: number) => void;
}

/** The kernels in TypeScript. */
export function twinMachine(): Machine {
  let m = new Float64Array(0);
  return {
    memory: (doubles) => {
      if (m.length < doubles) m = new Float64Array(doubles);
      return m;
    },
    weights: (of, range) => weightChunks(m, of, range),
    reduce: (of, range) => reduceChunks(m, of, range),
    groups: (of, groups) => reduceGroups(m, of, groups),
    joinTriangles: (of, count) => joinTriangles(m, of, count),
    residuals: (of, range) => residualChunks(m, of, range),
    joinPairs: (pairs, count, each) => joinPairs(m, pairs, count, each),
    settle: (of, range) => settleChunks(m, of, range),
    times: (of, range) => timesChunks(m, of, range),
    factor: (of) => factorLower(m, of),
    joinSums: (sums, count, each) => joinSums(m, sums, count, each),
  };
}
