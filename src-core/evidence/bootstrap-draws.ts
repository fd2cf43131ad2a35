import { factorOf } from '../algebra/factored';
import type { LikelihoodRows } from '../estimate/likelihood-rows';
import { omegaAt, type Structure } from '../model/structure';
import { log } from '../numbers/elementary';
import type { Random } from '../numbers/random';

/** Up to this freedom a chi-square draw is a sum of squares of normal draws; beyond, by rejection. */
const BY_SUM = 16;

/**
 * Gives rows of a likelihood whose responses are drawn anew from normal errors with the covariance at theta; the coefficients are 0, which no
 * likelihood here depends on.
 *
 * Cells pooled into the k + 1 rows of their triangle are drawn as those: k normals, and the root of a chi-square on the cells left over.
 */
export function responsesFrom(of: {
  readonly rows: LikelihoodRows;
  readonly structure: Structure;
  readonly theta: Float64Array;
  readonly random: Random;
}): () => LikelihoodRows {
  const { rows, structure, theta, random } = of;
  const omega = omegaAt(rows.structureOf(structure), theta);
  const factor = omega.blocks ? factorOf(omega) : null;
  const spread = Float64Array.from(rows.cellOf, (cell, i) =>
    Math.sqrt((omega.diagonal[cell] as number) / (rows.middle[i] as number)),
  );
  const roots = rows.middle.map(Math.sqrt);
  const left = leftOver(rows);
  return () => {
    const drawn = Float64Array.from(left, (freedom) =>
      freedom === 0 ? random.normal() : Math.sqrt(chiSquareFrom(random, freedom)),
    );
    const response = factor
      ? factor.unwhiten(drawn).map((value, g) => value / (roots[g] as number))
      : drawn.map((value, i) => value * (spread[i] as number));
    return { ...rows, response, perfect: false };
  };
}

/** By row: how many cells beyond the terms the last row of a pool stands for; 0 for every other row. */
function leftOver({ cellOf, count, terms }: LikelihoodRows): Float64Array {
  const left = new Float64Array(cellOf.length);
  for (let i = 0; i < left.length; i++) {
    const cells = count[i] as number;
    if (cells > terms + 1) left[i + terms] = cells - terms;
  }
  return left;
}

/**
 * A draw of chi-square on a whole freedom of 1 or more.
 *
 * Source: Marsaglia & Tsang 2000 beyond 16 degrees of freedom.
 */
function chiSquareFrom(random: Random, freedom: number): number {
  if (freedom <= BY_SUM) {
    let sum = 0;
    for (let i = 0; i < freedom; i++) {
      const x = random.normal();
      sum += x * x;
    }
    return sum;
  }
  const d = freedom / 2 - 1 / 3;
  const c = 1 / Math.sqrt(9 * d);
  for (;;) {
    const x = random.normal();
    const root = 1 + c * x;
    const cube = root * root * root;
    if (!(cube > 0)) continue;
    const u = random.uniform();
    if (u < 1 - 0.0331 * x * x * x * x || log(u) < (x * x) / 2 + d * (1 - cube + log(cube))) return 2 * d * cube;
  }
}
