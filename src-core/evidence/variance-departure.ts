import { leveragesOf } from '../algebra/orthonormal';
import { exp, log } from '../numbers/elementary';
import type { NoDeparture } from '../protocol/evidence';
import type { Evidence, SmallestDeparture } from '../protocol/result';
import { quartersOf } from './brown-forsythe';
import { errorsUnder } from './departure-errors';
import { MOST_SIMULATED, oftenEnough } from './draws';
import type { Frame } from './frame';
import { POWER, withDeparture } from './reading';
import { smallest } from './search';
import type { VarianceTest } from './variance-test';

/** Ratios beyond this are out of reach. */
const LARGEST_RATIO = 1e4;
const NEAR = 1.01;
/** A ratio of about 2: ln 2 / ln 10,000. */
const FIRST_SHARE = 0.075;

/**
 * The smallest departure of the form "the variances are the stated ones times m^-a" that the test would find with power .8.
 *
 *     d_g proportional to m_g^-a;  size: mean of d in the smallest quarter over that in the largest
 *     errors: root of diag C diag(v d) C', d scaled to tr(M D) = G - k: whitened residuals keep the mean square that the structure gives
 *
 * Up to 200 cells by 2,000 draws of whitened residuals, shared by all tests; beyond by the test's large-sample power. Bisection to 1 %
 * of the ratio. detail: departureExponent (a), departureBy ("draws" or "large-sample").
 */
export function withVarianceDeparture(known: {
  readonly frame: Frame;
  readonly test: VarianceTest;
  readonly cancelled: () => boolean;
}): Evidence {
  const { frame, test } = known;
  const { evidence } = test;
  if (evidence.p === null) return evidence;
  if (known.cancelled()) return withDeparture(evidence, 'cancelled');
  const family = familyOf(frame);
  if (typeof family === 'string') return withDeparture(evidence, family);
  const { ratioOf, multipliersAt, limit } = family;
  const first = limit * FIRST_SHARE;
  const near = (low: number, high: number) => ratioOf(high) <= NEAR * ratioOf(low);

  const roughly = smallest({
    found: (a) => test.largeSamplePower(multipliersAt(a)) >= POWER,
    guess: first,
    limit,
    near,
  });
  const simulated = frame.count <= MOST_SIMULATED;
  const found = (a: number) => known.cancelled() || oftenFound({ frame, test }, multipliersAt(a));
  const exponent = simulated ? smallest({ found, guess: roughly ?? 2 * first, limit, near }) : roughly;
  if (known.cancelled()) return withDeparture(evidence, 'cancelled');
  if (exponent === null) return withDeparture(evidence, 'out-of-reach');

  const multipliers = levelled(frame, multipliersAt(exponent));
  const variances = frame.fitted.variances.map((v, g) => v * (multipliers[g] as number));
  const departure: SmallestDeparture = {
    measure: 'variance-ratio',
    size: ratioOf(exponent),
    errors: errorsUnder(frame.fitted, variances),
  };
  const departureBy = simulated ? 'draws' : 'large-sample';
  return withDeparture(evidence, departure, { departureExponent: exponent, departureBy });
}

function oftenFound(known: { frame: Frame; test: VarianceTest }, multipliers: Float64Array): boolean {
  const { frame, test } = known;
  const roots = multipliers.map((d) => Math.sqrt(d));
  const errors = new Float64Array(roots.length);
  const residuals = new Float64Array(roots.length);
  return oftenEnough(frame.draws(), (draw) => {
    for (let g = 0; g < errors.length; g++) errors[g] = (draw[g] as number) * (roots[g] as number);
    return test.strength(frame.leftOver(errors, residuals)) > test.critical;
  });
}

/** Multipliers scaled to tr(M D) = G - k. */
function levelled(frame: Frame, multipliers: Float64Array): Float64Array {
  const leverages = leveragesOf(frame.basis, frame.count);
  const total = multipliers.reduce((sum, d, g) => sum + d * (1 - (leverages[g] as number)), 0);
  return multipliers.map((d) => (d * frame.freedom) / total);
}

/** The multipliers by exponent, and the ratio by which an exponent is told. */
function familyOf(frame: Frame):
  | NoDeparture
  | {
      multipliersAt: (a: number) => Float64Array;
      ratioOf: (a: number) => number;
      /** The exponent at the largest ratio that is tried. */
      limit: number;
    } {
  const { sizes, bySize } = frame;
  if (!sizes || !bySize) return 'no-size';
  const quarters = quartersOf(bySize);
  const logs = sizes.map((m) => log(m));
  const middle = logs.reduce((sum, x) => sum + x, 0) / logs.length;
  const multipliersAt = (a: number) => {
    const powers = logs.map((x) => exp(-a * (x - middle)));
    const mean = powers.reduce((sum, d) => sum + d, 0) / powers.length;
    return powers.map((d) => d / mean);
  };
  const [smallQuarter, largeQuarter] = [quarters[0] as number[], quarters[3] as number[]];
  const ratioOf = (a: number) => {
    const d = multipliersAt(a);
    return meanOver(d, smallQuarter) / meanOver(d, largeQuarter);
  };
  if (smallQuarter.length === 0 || !(ratioOf(1) > 1)) return 'equal-sizes';
  const limit = smallest({
    found: (a) => ratioOf(a) >= LARGEST_RATIO,
    guess: log(LARGEST_RATIO) / log(ratioOf(1)),
    limit: Number.MAX_VALUE,
    near: (low, high) => high - low <= 1e-6 * high,
  });
  return limit === null ? 'equal-sizes' : { multipliersAt, ratioOf, limit };
}

function meanOver(values: Float64Array, rows: readonly number[]): number {
  return rows.reduce((sum, g) => sum + (values[g] as number), 0) / rows.length;
}
