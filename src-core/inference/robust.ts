import type { Fitted } from '../estimate/fitted';
import { pow } from '../numbers/elementary';
import { LEVERAGE_OF_ONE } from '../numbers/tolerances';
import { problem } from '../protocol/outcome';
import type { Plan, RobustCorrection } from '../protocol/plan';
import type { Problem } from '../protocol/problems';

/** Cells, by index, that alone determine a coefficient: their residual is 0 whatever they hold. */
export function cellsOfLeverageOne(leverages: Float64Array): number[] {
  const found: number[] = [];
  for (let g = 0; g < leverages.length; g++) if ((leverages[g] as number) > 1 - LEVERAGE_OF_ONE) found.push(g);
  return found;
}

/**
 * Refuses a correction that divides by 1 - h where a cell has h = 1, and names the cells.
 *
 * leverages: of any diagonal weighting, since a leverage of exactly 1 does not depend on positive weights. With as many cells as
 * coefficients every leverage is 1 and robust errors are null instead.
 *
 * Example: a category level that one cell alone carries, under HC3.
 */
export function checkLeverage(known: {
  readonly plan: Pick<Plan, 'inference'>;
  readonly leverages: Float64Array;
  readonly labels: readonly string[];
  readonly residualFreedom: number;
}): Problem[] {
  const { inference } = known.plan;
  if (inference.kind !== 'robust' || known.residualFreedom === 0) return [];
  if (inference.correction === 'HC0' || inference.correction === 'HC1') return [];
  const labels = cellsOfLeverageOne(known.leverages).map((g) => known.labels[g] as string);
  if (labels.length === 0) return [];
  return [problem('leverage-one', { labels, correction: inference.correction }, '/inference/correction')];
}

/**
 * What each cell contributes to robust errors: V = C diag(spread) C' with the pulls C.
 *
 *     spread = r^2 f(h),  f = 1 | G/(G-k) | 1/(1-h) | 1/(1-h)^2 | 1/(1-h)^min(4, G h / k)   for HC0 | HC1 | HC2 | HC3 | HC4
 *
 * Length G, squared units of the outcome; in whitened coordinates this is the usual form, a_g x_g x_g' between two (X'X)^-1. Holds whatever
 * the variances of independent cells are. Null where no residual is free, or a leverage of 1 leaves it undefined.
 *
 * Example: five cells of equal variance about their mean: HC1 gives the square of sd / sqrt 5.
 * Source: White 1980; MacKinnon & White 1985; Cribari-Neto 2004.
 */
export function robustSpread(fitted: Fitted, correction: RobustCorrection): Float64Array | null {
  const { pulls, residuals, leverages, residualFreedom } = fitted;
  if (residualFreedom <= 0) return null;
  const divides = correction !== 'HC0' && correction !== 'HC1';
  if (divides && cellsOfLeverageOne(leverages).length > 0) return null;
  const counts = { cells: residuals.length, coefficients: pulls.length };
  const spread = new Float64Array(residuals.length);
  for (let g = 0; g < spread.length; g++) {
    const r = residuals[g] as number;
    spread[g] = r * r * correctionOf(correction, leverages[g] as number, counts);
  }
  return spread;
}

function correctionOf(
  correction: RobustCorrection,
  leverage: number,
  { cells, coefficients }: { readonly cells: number; readonly coefficients: number },
): number {
  const left = 1 - leverage;
  switch (correction) {
    case 'HC0':
      return 1;
    case 'HC1':
      return cells / (cells - coefficients);
    case 'HC2':
      return 1 / left;
    case 'HC3':
      return 1 / (left * left);
    case 'HC4':
      return pow(left, -Math.min(4, (cells * leverage) / coefficients));
  }
}
