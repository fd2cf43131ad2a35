import { log } from './elementary';

type Ratio = { readonly above: readonly number[]; readonly below: readonly number[] };

// Coefficients of AS 241 (PPND16), from the constant upwards.
const CENTRE: Ratio = {
  above: [
    3.3871328727963665, 133.14166789178438, 1971.5909503065513, 13731.693765509461, 45921.95393154987, 67265.7709270087,
    33430.57558358813, 2509.0809287301227,
  ],
  below: [
    1, 42.31333070160091, 687.1870074920579, 5394.196021424751, 21213.794301586597, 39307.89580009271,
    28729.085735721943, 5226.495278852546,
  ],
};
const SHOULDER: Ratio = {
  above: [
    1.4234371107496835, 4.630337846156546, 5.769497221460691, 3.6478483247632045, 1.2704582524523684,
    0.2417807251774506, 0.022723844989269184, 7.745450142783414e-4,
  ],
  below: [
    1, 2.053191626637759, 1.6763848301838038, 0.6897673349851, 0.14810397642748008, 0.015198666563616457,
    5.475938084995345e-4, 1.0507500716444169e-9,
  ],
};
const TAIL: Ratio = {
  above: [
    6.657904643501103, 5.463784911164114, 1.7848265399172913, 0.29656057182850487, 0.026532189526576124,
    0.0012426609473880784, 2.7115555687434876e-5, 2.0103343992922881e-7,
  ],
  below: [
    1, 0.599832206555888, 0.1369298809227358, 0.014875361290850615, 7.868691311456133e-4, 1.8463183175100548e-5,
    1.421511758316446e-7, 2.0442631033899397e-15,
  ],
};

/**
 * The point with probability p above it, to about 1e-15: good enough near a half, a start elsewhere.
 *
 * p: strictly between 0 and 1.
 *
 * Example: normalStart(0.5) = 0.
 * Source: Wichura 1988, AS 241.
 */
export function normalStart(p: number): number {
  const fromHalf = 0.5 - p;
  if (Math.abs(fromHalf) <= 0.425) return fromHalf * ratioAt(CENTRE, 0.180625 - fromHalf * fromHalf);
  const root = Math.sqrt(-log(Math.min(p, 1 - p)));
  const size = root <= 5 ? ratioAt(SHOULDER, root - 1.6) : ratioAt(TAIL, root - 5);
  return fromHalf < 0 ? -size : size;
}

function ratioAt({ above, below }: Ratio, x: number): number {
  return polynomial(above, x) / polynomial(below, x);
}

function polynomial(coefficients: readonly number[], x: number): number {
  return coefficients.reduceRight((value, coefficient) => value * x + coefficient, 0);
}
