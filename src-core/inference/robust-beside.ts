import { independent } from '../algebra/covariance';
import { errorOf } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';
import type { Coefficient, RobustBeside } from '../protocol/result';
import type { Claim } from './claim';
import { clusteredClaim, spreadingOf } from './clustered';
import { clustersOfBlocks } from './clusters';
import { coefficientsOf } from './coefficients';
import { coordinatesOf, unitRow } from './coordinates';
import { numberOrNull } from './reference';
import { robustSpread } from './robust';

/**
 * Robust errors beside the model-based ones, with their ratio: HC3 where cells are independent, CR2 by the blocks of cells that go together where
 * a part of the structure correlates any.
 *
 * Both null where a cell has leverage 1 under HC3, where all cells are one block, or where no residual is free; the ratio alone where the
 * model-based error is 0 or undefined.
 *
 * Example: an error of 9.0 by HC3 where the model says 6.0 gives the ratio 1.5.
 * Source: MacKinnon & White 1985; Long & Ervin 2000; Bell & McCaffrey 2002.
 */
export function robustBeside(fitted: Fitted): RobustBeside[] {
  const errorAt = tiesCells(fitted) ? byBlocks(fitted) : byCells(fitted);
  return fitted.design.names.map((term, j) => {
    const se = errorAt(j);
    if (se === null) return { term, se: null, ratioToModel: null };
    const model = fitted.errors[j] as number;
    return { term, se, ratioToModel: model > 0 ? numberOrNull(se / model) : null };
  });
}

/** By the parts themselves, whatever ties the cells at hand turn out to have. */
export function tiesCells({ structure, weighting }: Fitted): boolean {
  return structure.parts.some(({ part }) => part.link !== null) || weighting.blocks !== null;
}

type ErrorAt = (j: number) => number | null;

function byCells(fitted: Fitted): ErrorAt {
  const squares = robustSpread(fitted, 'HC3');
  const spread = squares && independent(squares);
  return (j) => (spread === null ? null : numberOrNull(errorOf(fitted.pulls[j] as Float64Array, spread)));
}

function byBlocks(fitted: Fitted): ErrorAt {
  const claim = blockClaim(fitted);
  return (j) => claim?.errors[j] ?? null;
}

/** CR2 by the blocks of cells that go together; null where no residual is free or all cells are one block. */
function blockClaim(fitted: Fitted): Claim | null {
  const { omega, weighting, residualFreedom } = fitted;
  if (residualFreedom <= 0) return null;
  const blocks = [...(omega.blocks ?? []), ...(weighting.blocks ?? [])].map(({ cells }) => cells);
  const groupings = [clustersOfBlocks(fitted.residuals.length, blocks)];
  const coordinates = coordinatesOf(fitted);
  const spreading = spreadingOf({ coordinates, groupings, correction: 'CR2' });
  return spreading && clusteredClaim({ coordinates, spreading, estimates: fitted.coefficients });
}

/** The coefficients of a fit with errors by blocks, on Satterthwaite's freedom; null where there are none. */
export function coefficientsByBlocks(fitted: Fitted, level: number): Coefficient[] | null {
  const claim = blockClaim(fitted);
  if (!claim) return null;
  const { names } = fitted.design;
  const references = names.map((_, j) => claim.referenceOf(unitRow(names.length, j)));
  const coefficients = coefficientsOf({
    names,
    estimates: fitted.coefficients,
    errors: claim.errors,
    references,
    level,
  });
  return coefficients.some(({ se }) => se !== null) ? coefficients : null;
}
