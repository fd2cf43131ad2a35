import { type Covariance, takeCovariance } from '../algebra/covariance';
import { symmetricEigenvalues } from '../algebra/dense';
import { factored, factorOf } from '../algebra/factored';
import { chiSquareUpperQuantile, normalUpper } from '../numbers/distributions';
import { log } from '../numbers/elementary';
import { median } from '../numbers/order';
import type { NoDeparture } from '../protocol/evidence';
import type { SmallestDeparture } from '../protocol/result';
import type { AtShape, Rule } from './between-likelihood';
import { errorsThrough } from './departure-errors';
import { MOST_SIMULATED, oftenEnough } from './draws';
import type { Frame } from './frame';
import { LEVEL, POWER } from './reading';
import { smallest } from './search';

/** The fitted structure around one added variance at 0: every other parameter as fitted. */
export interface Boundary {
  readonly measure: 'tau2' | 'omega2';
  readonly rule: Rule;
  /** Omega with the added variance at a value. */
  readonly omegaAt: (added: number) => Covariance;
  readonly likelihoodAt: (omega: Covariance) => AtShape;
}

const NEAR = 1.01;
const LARGEST_MULTIPLE = 1e6;
/** Where the likelihood of a draw is looked at, as multiples of the departure; steps of about root 2 keep the loss in the ratio small. */
const MULTIPLES = [1, 1.4, 0.7, 2, 0.5, 2.8, 0.35, 0.25, 4, 0.18, 0.125, 5.6, 0.09, 0.0625, 8];
/** Correlated cells of one block whose eigenvalues are taken at most. */
const LARGEST_BLOCK = 400;

/**
 * The smallest added variance that the likelihood ratio would find with power .8, all else as fitted.
 *
 * Up to 200 cells by 2,000 draws, the likelihood maximised over multiples of the departure; beyond by the normal form of the root of
 * the ratio. Bisection to 1 %. Errors: root of diag C Omega' C'. Not defined where Omega without that variance has no inverse: another part stands
 * at 0 as well, and the likelihood of any draw is without bound.
 */
export function boundaryDeparture(
  frame: Frame,
  boundary: Boundary,
  cancelled: () => boolean,
): SmallestDeparture | NoDeparture {
  if (cancelled()) return 'cancelled';
  const none = boundary.omegaAt(0);
  if (!factored(none).ok) return 'not-defined';
  const simulated = frame.count <= MOST_SIMULATED;
  if (!simulated && (none.blocks ?? []).some(({ cells }) => cells.length > LARGEST_BLOCK)) return 'too-many-cells';
  const guess = median(none.diagonal);
  const limit = guess * LARGEST_MULTIPLE;
  const near = (low: number, high: number) => high <= NEAR * low;
  const critical = chiSquareUpperQuantile(2 * LEVEL, 1);
  const powerAt = largeSamplePower({ boundary, none, critical, unit: guess });
  const roughly = smallest({ found: (added) => powerAt(added) >= POWER, guess, limit, near });
  const draws = simulated ? frame.draws() : [];
  const found = (added: number) => cancelled() || oftenFound({ boundary, none, critical, draws }, added);
  const size = simulated ? smallest({ found, guess: roughly ?? guess, limit, near }) : roughly;
  if (cancelled()) return 'cancelled';
  if (size === null) return 'out-of-reach';
  return { measure: boundary.measure, size, errors: errorsThrough(frame.fitted, boundary.omegaAt(size)) };
}

interface Known {
  readonly boundary: Boundary;
  /** Omega with the added variance at 0. */
  readonly none: Covariance;
  readonly critical: number;
}

function oftenFound(
  { boundary, none, critical, draws }: Known & { draws: readonly Float64Array[] },
  added: number,
): boolean {
  const { omegaAt, likelihoodAt } = boundary;
  const { unwhiten } = factorOf(omegaAt(added));
  const without = likelihoodAt(none);
  const some = MULTIPLES.map((multiple) => likelihoodAt(omegaAt(multiple * added)));
  return oftenEnough(draws, (draw) => {
    const response = unwhiten(draw);
    const needed = without.twiceLogLikelihood(response) + critical;
    return some.some((at) => at.twiceLogLikelihood(response) > needed);
  });
}

/**
 * The root of the ratio as normal around the root of its expectation at the true variance.
 *
 *     E = sum [ln(1 / d) + d - 1],  V = 2 sum (d - 1)^2;  root ~ N(root E, V / 4 E)
 *
 * d = 1 + added l over their mean where a factor is free: eigenvalues of Omega0^-1 Omega, l those of Omega0^-1 dOmega.
 */
function largeSamplePower({ boundary, none, critical, unit }: Known & { unit: number }): (added: number) => number {
  const values = relativeEigenvalues(none, boundary.omegaAt(unit)).map((d) => (d - 1) / unit);
  return (added) => {
    const ratios = values.map((l) => 1 + added * l);
    const scale = boundary.rule.freeScale ? ratios.reduce((sum, d) => sum + d, 0) / ratios.length : 1;
    let expected = 0;
    let spread = 0;
    for (const d of ratios) {
      const ratio = d / scale;
      expected += ratio - 1 - log(ratio);
      spread += 2 * (ratio - 1) * (ratio - 1);
    }
    if (!(expected > 0)) return 0;
    return normalUpper((Math.sqrt(critical) - Math.sqrt(expected)) / Math.sqrt(spread / (4 * expected)));
  };
}

/** Eigenvalues of Omega0^-1 Omega, which are those of the symmetric P^-1 Omega P^-T, block by block; blocks of Omega hold those of Omega0. */
function relativeEigenvalues(none: Covariance, some: Covariance): Float64Array {
  const values = some.diagonal.map((v, g) => v / (none.diagonal[g] as number));
  for (const { cells, matrix } of some.blocks ?? []) {
    const own = takeCovariance(none, cells);
    const { whitened } = factorOf(own);
    const n = cells.length;
    const half = Array.from({ length: n }, (_, a) => whitened(matrix.slice(a * n, (a + 1) * n)));
    const whole = half.map((_, a) => whitened(Float64Array.from(half, (column) => column[a] as number)));
    for (const [a, value] of symmetricEigenvalues(whole).entries()) values[cells[a] as number] = value;
  }
  return values;
}
