import type { MeanDependent, Means } from '../model/mean-dependent';
import { log } from '../numbers/elementary';
import { stirlingRest } from '../numbers/stirling';
import { sum } from '../numbers/sums';

const TWO_PI = 6.283185307179586;
/** A count that differs from a whole number by more than this share of it is none. */
const WHOLE = 1e-9;
/** Ratios nearer to 1 than this are taken by their series. */
const NEAR = 0.1;

/**
 * The deviance of counts: twice the log-likelihood that the fitted means fall short of the observed ones.
 *
 *     binomial  2 sum [ c ln(c / m mu) + (m - c) ln((m - c) / (m - m mu)) ]        counts  2 sum [ c ln(c / w mu) - (c - w mu) ]
 *
 * Terms with a count of 0 are their limit. c: observed times amount.
 *
 * Example: 5 of 10 at a mean of .4: 0.4041.
 * Source: McCullagh & Nelder 1989.
 */
export function devianceOf(part: MeanDependent, means: Means): number {
  return 2 * sum(part.amounts.map((_, g) => shortfall(part, means, g)));
}

/**
 * The log-likelihood of the counts, binomial coefficients and factorials included; null where they are not whole numbers, or a design effect stands
 * between them and their amounts: there is no distribution of such counts.
 *
 *     binomial  sum ln [ (n over c) mu^c (1 - mu)^(n - c) ]        counts  sum ln [ lambda^c e^-lambda / c! ],  lambda = w mu
 *
 * By the deviance of each cell and Stirling's rest, so that large counts cost no digits.
 *
 * Example: 2 of 4 at a mean of .5: ln .375.
 * Source: Loader 2000.
 */
export function countedLogLikelihood(part: MeanDependent, means: Means): number | null {
  const { kind, observed, amounts, asCounted } = part;
  if (!asCounted) return null;
  const terms = new Float64Array(amounts.length);
  for (let g = 0; g < terms.length; g++) {
    const n = amounts[g] as number;
    const count = wholeNumber((observed[g] as number) * n);
    const rest = kind === 'binomial' ? wholeNumber(n - (count ?? 0)) : 0;
    if (count === null || rest === null) return null;
    const own = kind === 'binomial' ? logCoefficient(count, rest) : -logFactorial(count);
    terms[g] = own - shortfall(part, means, g);
  }
  return sum(terms);
}

function wholeNumber(value: number): number | null {
  const whole = Math.round(value);
  return Math.abs(value - whole) <= WHOLE * Math.max(1, whole) ? whole : null;
}

/** ln [ (n over c) (c/n)^c ((n - c)/n)^(n - c) ], the likelihood at the observed share. */
function logCoefficient(count: number, rest: number): number {
  if (count === 0 || rest === 0) return 0;
  const size = count + rest;
  const stirling = stirlingRest(size) - stirlingRest(count) - stirlingRest(rest);
  return stirling - log(TWO_PI * count * (rest / size)) / 2;
}

/** - ln [ c^c e^-c / c! ]. */
function logFactorial(count: number): number {
  return count === 0 ? 0 : stirlingRest(count) + log(TWO_PI * count) / 2;
}

/** Half the deviance of one cell. */
function shortfall({ kind, observed, amounts }: MeanDependent, { means, rest }: Means, g: number): number {
  const [y, w] = [observed[g] as number, amounts[g] as number];
  const own = apart(y * w, (means[g] as number) * w);
  return kind === 'counts' ? own : own + apart((1 - y) * w, (rest[g] as number) * w);
}

/** x ln(x / m) - x + m. */
function apart(x: number, m: number): number {
  if (x === 0) return m;
  const v = (x - m) / (x + m);
  if (Math.abs(v) > NEAR) return x * log(x / m) - x + m;
  // ln(x / m) = 2 (v + v^3/3 + v^5/5 ...), and the first order cancels.
  let term = 2 * x * v;
  let total = (x - m) * v;
  for (let n = 3; ; n += 2) {
    term *= v * v;
    const next = total + term / n;
    if (next === total) return total;
    total = next;
  }
}
