import { spanOf } from '../algebra/orthonormal';
import { tTwoSided, tUpperQuantile } from '../numbers/distributions';
import { plainDot } from '../numbers/sums';
import { type Frame, kindsOf } from './frame';
import { evidenceOf, LEVEL, notApplicable } from './reading';
import { powerOn, strengthOn } from './squares-on-columns';

/**
 * What the squared residuals say of size, read as variance components.
 *
 *     constant   r^2  = tau^2 + phi / m     (intercept tau^2, slope phi)
 *     per-size   r~^2 = phi + tau^2 m       (intercept phi, slope tau^2; r~ with the free scale left out)
 *
 * Unweighted least squares, t with G - 2. The statistic is the slope's ratio; freedom1 is that of its t.
 * Not applicable under any other structure, without sizes, with equal sizes.
 * detail: on ("1/size" or "size"), intercept, intercept_se, intercept_p, slope, slope_se, slope_p.
 */
export function sizeSlope(frame: Frame) {
  const test = 'size-slope';
  const [kind, ...more] = kindsOf(frame.plan);
  if (more.length > 0 || !(kind === 'constant' || kind === 'per-size')) return notApplicable(test, 'structure');
  if (!frame.sizes) return notApplicable(test, 'no-size');
  if (frame.count < 3) return notApplicable(test, 'too-few-cells');
  const on = kind === 'constant' ? '1/size' : 'size';
  const x = kind === 'constant' ? frame.sizes.map((m) => 1 / m) : frame.sizes;
  const vectors = spanOf([x], spanOf([new Float64Array(frame.count).fill(1)]));
  const [z] = vectors;
  if (!z) return notApplicable(test, 'equal-sizes', { on });

  const freedom = frame.count - 2;
  const line = lineOf({ x, z, y: frame.residuals.map((r) => r * r) });
  if (!(line.slopeSe > 0)) return notApplicable(test, 'no-variation', { on });
  const statistic = line.slope / line.slopeSe;
  const pOf = (ratio: number) => tTwoSided(ratio, freedom);
  const inUnits = (square: number) => square * frame.unit * frame.unit;
  const detail = {
    on,
    intercept: inUnits(line.intercept),
    intercept_se: inUnits(line.interceptSe),
    intercept_p: pOf(line.intercept / line.interceptSe),
    slope: inUnits(line.slope),
    slope_se: inUnits(line.slopeSe),
    slope_p: pOf(statistic),
  };
  const evidence = evidenceOf(test, { statistic, freedom1: freedom, p: detail.slope_p, detail });
  // t^2 = R^2 (G - 2) / (1 - R^2) grows with G R^2, the studentised score statistic on the same column.
  const square = tUpperQuantile(LEVEL / 2, freedom) * tUpperQuantile(LEVEL / 2, freedom);
  const critical = (frame.count * square) / (freedom + square);
  return {
    evidence,
    strength: strengthOn(vectors, true),
    critical,
    largeSamplePower: powerOn({ vectors, studentised: true, critical }),
  };
}

/** y = a + b x by least squares with its errors; z: x cleared of the constant, of unit length. */
function lineOf(data: { readonly x: Float64Array; readonly y: Float64Array; readonly z: Float64Array }) {
  const { x, y, z } = data;
  const count = y.length;
  const meanX = x.reduce((sum, value) => sum + value, 0) / count;
  const meanY = y.reduce((sum, value) => sum + value, 0) / count;
  const length = plainDot(z, x);
  const along = plainDot(z, y);
  const left = y.reduce((sum, value, g) => {
    const residual = value - meanY - along * (z[g] as number);
    return sum + residual * residual;
  }, 0);
  const variance = left / (count - 2);
  const slope = along / length;
  return {
    slope,
    slopeSe: Math.sqrt(variance) / length,
    intercept: meanY - slope * meanX,
    interceptSe: Math.sqrt(variance * (1 / count + (meanX / length) * (meanX / length))),
  };
}
