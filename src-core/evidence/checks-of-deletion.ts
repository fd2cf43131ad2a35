import type { Fitted } from '../estimate/fitted';
import type { SelfCheck } from '../protocol/result';
import { concentrationOf } from './cell-results';
import { heldFit } from './held';
import { deletionShifts } from './influence';
import { placesWithout } from './subset';

/**
 * Two deletions done again by refitting: of the cell whose loss moves a coefficient most (its figure is that move, in standard errors), and of the
 * heaviest cell (its figure is how far the refit is from the formula, in standard errors). Both pass where refit and formula agree.
 */
export function deletionChecks({ fitted }: { readonly fitted: Fitted }): SelfCheck[] {
  if (fitted.residualFreedom <= 0) return [];
  const shifts = deletionShifts(fitted);
  const units = Array.from(fitted.errors);
  if (!units.every((unit) => unit > 0)) return [];
  const extreme = extremeOf(fitted, shifts, units);
  const { shares } = concentrationOf(fitted.targetIsStructure ? fitted.shape : fitted.weighting);
  const heaviest = shares.reduce((most, share, g) => (share > (shares[most] as number) ? g : most), 0);
  // Coefficients are told to a rounding that may be large beside errors near 0.
  const rounding = fitted.coefficients.map((b, j) => (Math.abs(b) / (units[j] as number)) * 8 * Number.EPSILON);
  const limit = Math.max(1e-8, fitted.condition * 1e-13, ...rounding);
  const found: SelfCheck[] = [];
  if (extreme) {
    const apart = apartFrom(fitted, shifts, units, extreme.cell);
    if (apart !== null) found.push({ check: 'leave-one-out-extreme', passed: apart <= limit, figure: extreme.shift });
  }
  const apart = apartFrom(fitted, shifts, units, heaviest);
  if (apart !== null) found.push({ check: 'heaviest-deleted', passed: apart <= limit, figure: apart });
  return found;
}

/** The cell and the size of the largest shift, the intercept's left out unless it stands alone. */
function extremeOf(
  { design }: Fitted,
  shifts: readonly Float64Array[],
  units: readonly number[],
): { cell: number; shift: number } | null {
  let most: { cell: number; shift: number } | null = null;
  for (const [j, row] of shifts.entries()) {
    if (design.termOf[j] === -1 && shifts.length > 1) continue;
    for (const [cell, d] of row.entries()) {
      const shift = Math.abs(d) / (units[j] as number);
      if (shift > (most?.shift ?? -1)) most = { cell, shift };
    }
  }
  return most;
}

/** How far the refit without a cell is from the formula, in errors; null where there is neither. */
function apartFrom(
  fitted: Fitted,
  shifts: readonly Float64Array[],
  units: readonly number[],
  cell: number,
): number | null {
  const left = heldFit(fitted, placesWithout(fitted.whitened.length, new Set([cell])));
  if (!left) return null;
  let worst = 0;
  for (const [j, b] of fitted.coefficients.entries()) {
    const byFormula = shifts[j]?.[cell] as number;
    if (Number.isNaN(byFormula)) return null;
    worst = Math.max(worst, Math.abs(b - byFormula - (left.coefficients[j] as number)) / (units[j] as number));
  }
  return worst;
}
