import type { Fitted } from '../estimate/fitted';
import type { RivalFit } from '../inference/fits';
import { sum } from '../numbers/sums';
import type { Plan } from '../protocol/plan';
import type { SelfCheck } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { deletionChecks } from './checks-of-deletion';
import { identityChecks } from './checks-of-identities';
import { invarianceChecks } from './checks-of-invariance';
import { priceCheck } from './checks-of-price';
import { byNormalEquations } from './other-route';

/** Fewer certified digits fail their check. */
const DIGITS = 6;

export interface CheckSources {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly rivals: readonly RivalFit[];
  readonly hooks?: Hooks;
}

/**
 * The laws of least squares, run on the user's own cells after the fit: what must not change is changed, and the fit done again.
 *
 * Each check has its figure, the worst relative departure from its law unless said otherwise in `selfCheckCodes`, and passes within rounding
 * at the condition of the design (with likelihood parameters, within the search's own stopping rule). A law that does not hold for the structure used
 * is not among the checks, nor is one that the cells cannot carry (no residuals).
 *
 * Source: PRACTICE of the program, 35.
 */
export function selfChecksOf(sources: CheckSources): SelfCheck[] {
  const { fitted } = sources;
  return [
    ...invarianceChecks(sources),
    ...identityChecks(fitted),
    ...otherRoute(fitted),
    ...priceCheck(sources),
    ...deletionChecks(sources),
    { check: 'digits', passed: fitted.digits >= DIGITS, figure: fitted.digits },
  ];
}

/** The coefficients by normal equations in double-double: another way from the same data to the same numbers. */
function otherRoute(fitted: Fitted): SelfCheck[] {
  const other = byNormalEquations(fitted);
  if (!other) return [];
  let worst = 0;
  for (const [j, b] of fitted.coefficients.entries()) {
    const moved = Math.abs((other[j] as number) - b);
    if (moved > 0) worst = Math.max(worst, moved / Math.max(Math.abs(b), fitted.errors[j] || 0, roundingOf(fitted, j)));
  }
  const limit = Math.max(1e-9, fitted.condition * fitted.condition * 1e-28);
  return [{ check: 'other-route', passed: worst <= limit, figure: worst }];
}

/** What rounding leaves of a coefficient that its own products cancel to 0. */
function roundingOf({ pulls, response }: Fitted, j: number): number {
  return Number.EPSILON * sum((pulls[j] as Float64Array).map((c, g) => Math.abs(c * (response.high[g] as number))));
}
