import { exp, log } from './elementary';
import { noncentralChiSquareUpper, noncentralFUpper, noncentralTUpper } from './noncentral';
import { normalUpperQuantile } from './normal';
import { checkProbability } from './quantile-search';
import { findRoot } from './roots';
import { FREEDOM_WITHOUT_END } from './tolerances';

/**
 * The point with probability p above it of the noncentral chi-square distribution.
 *
 * p: strictly between 0 and 1; freedom, noncentrality: as for `noncentralChiSquareUpper`. Relative error about 1e-14 where p is not above a half.
 *
 * Example: noncentralChiSquareUpperQuantile(0.8853791407623516, 1, 10) = 3.841458820694128.
 */
export function noncentralChiSquareUpperQuantile(p: number, freedom: number, noncentrality: number): number {
  return pointAbove0(p, freedom + noncentrality, (x) => noncentralChiSquareUpper(x, freedom, noncentrality));
}

/**
 * The point with probability p above it of the noncentral F distribution; arguments as for `noncentralFUpper`.
 *
 * Example: noncentralFUpperQuantile(0.05, 1, 20, 0) = 4.35124350332929, Fisher's own.
 */
export function noncentralFUpperQuantile(p: number, freedom1: number, freedom2: number, noncentrality: number): number {
  return pointAbove0(p, 1 + noncentrality / freedom1, (x) => noncentralFUpper(x, freedom1, freedom2, noncentrality));
}

/**
 * The point with probability p above it of the noncentral t distribution; arguments as for `noncentralTUpper`. Points below 0 are those above it
 * of the mirrored distribution.
 *
 * Example: noncentralTUpperQuantile(0.025, 10, 0) = 2.228138851986275, Student's own.
 */
export function noncentralTUpperQuantile(p: number, freedom: number, noncentrality: number): number {
  checkProbability(p);
  if (freedom >= FREEDOM_WITHOUT_END) return normalUpperQuantile(p) + noncentrality;
  const above = noncentralTUpper(0, freedom, noncentrality);
  if (p === above) return 0;
  const middle = Math.max(1, Math.abs(noncentrality));
  if (p < above) return pointAbove0(p, middle, (x) => noncentralTUpper(x, freedom, noncentrality));
  return -pointAbove0(1 - p, middle, (x) => noncentralTUpper(x, freedom, -noncentrality));
}

/** Ends of the search, ln x. */
const LOWEST = -690;
const HIGHEST = 690;
/** How near the search on ln x comes, and the step by which the slope is then taken. */
const NEAR = 1e-7;
const SIDESTEP = 1e-4;

/** Searched on ln x outwards from a start, then brought to the last digits on x itself: e^u would lose them where u is large. */
function pointAbove0(p: number, start: number, tail: (x: number) => number): number {
  checkProbability(p);
  const gap = (x: number) => log(Math.max(tail(x), Number.MIN_VALUE) / p);
  const from = log(start);
  const way = gap(start) > 0 ? 1 : -1;
  let reach = 1;
  while (way * gap(exp(bounded(from + way * reach))) > 0 && Math.abs(from + way * reach) < HIGHEST) reach *= 2;
  const other = bounded(from + way * reach);
  const near = findRoot({ of: (u) => gap(exp(u)), low: from, high: other, tolerance: NEAR });
  if (near === null) return exp(other);
  let x = exp(near);
  for (let step = 0; step < 3; step++) {
    const slope = (gap(x * (1 + SIDESTEP)) - gap(x * (1 - SIDESTEP))) / (2 * SIDESTEP);
    if (!(slope < 0)) break;
    x -= (x * gap(x)) / slope;
  }
  return x;
}

function bounded(u: number): number {
  return Math.max(LOWEST, Math.min(HIGHEST, u));
}
