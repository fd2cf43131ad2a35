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
  const { shares } = concentrationOf(fitted.weighting);
  const heaviest = shares.reduce((most, share, g) => (share > (shares[most] as number) ? g : most), 0);
  const found: SelfCheck[] = [];
  if (extreme) {
    const refit = refitWithout(fitted, shifts, extreme.cell);
    if (refit) found.push({ check: 'leave-one-out-extreme', passed: refit.agrees, figure: extreme.shift });
  }
  const refit = refitWithout(fitted, shifts, heaviest);
  if (refit) found.push({ check: 'heaviest-deleted', passed: refit.agrees, figure: refit.apart });
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

/**
 * How far the refit without a cell is from the formula, in errors, and whether that is rounding; null where there is neither. Rounding is that of the
 * design, of the coefficients told (large beside errors near 0), and of 1 - h (large beside a leverage near 1).
 */
function refitWithout(
  fitted: Fitted,
  shifts: readonly Float64Array[],
  cell: number,
): { readonly apart: number; readonly agrees: boolean } | null {
  const left = heldFit(fitted, placesWithout(fitted.whitened.length, new Set([cell])));
  if (!left) return null;
  const open = 1 - (fitted.leverages[cell] as number);
  let apart = 0;
  let agrees = true;
  for (const [j, b] of fitted.coefficients.entries()) {
    const byFormula = shifts[j]?.[cell] as number;
    if (Number.isNaN(byFormula)) return null;
    const error = fitted.errors[j] as number;
    const own = Math.abs(b - byFormula - (left.coefficients[j] as number)) / error;
    const rounding = (8 * Number.EPSILON * (Math.abs(b) + Math.abs(byFormula) / open)) / error;
    apart = Math.max(apart, own);
    agrees &&= own <= Math.max(1e-8, fitted.condition * 1e-13) + rounding;
  }
  return { apart, agrees };
}
