import type { CellResult, Result } from '@core/protocol/result';
import Papa from 'papaparse';

type Column = readonly [string, (cell: CellResult) => string | number | null];

/** The quantities of a cell that stand in cells.csv, in the order of the result. */
const columns: readonly Column[] = [
  ['size', (cell) => cell.size],
  ['effective_size', (cell) => cell.effectiveSize],
  ['variance', (cell) => cell.variance],
  ['observed', (cell) => cell.observed],
  ['fitted', (cell) => cell.fitted],
  ['residual', (cell) => cell.residual],
  ['whitened', (cell) => cell.whitened],
  ['leverage', (cell) => cell.leverage],
  ['studentised', (cell) => cell.studentised],
  ['studentised_without', (cell) => cell.studentisedWithout],
  ['cook_distance', (cell) => cell.cookDistance],
  ['fit_shift', (cell) => cell.fitShift],
  ['covariance_ratio', (cell) => cell.covarianceRatio],
  ['weight', (cell) => cell.weight],
  ['weight_share', (cell) => cell.weightShare],
  ['shrunken', (cell) => cell.shrunken],
  ['own_share', (cell) => cell.ownShare],
  ['mse', (cell) => cell.mse],
];

/** A text that a spreadsheet would take for a formula gets an apostrophe before it; numbers are never touched. */
function guarded(text: string): string {
  return /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
}

/**
 * Every used cell with what the fit says of it, as comma-separated text in UTF-8: label first, then the quantities, then the shift of every
 * coefficient without the cell ("shift: TERM"). Undefined values are empty. Numbers are the shortest text that reads back to the same double.
 */
export function cellsFile({ cells, fit }: Pick<Result, 'cells' | 'fit'>): string {
  const terms = fit.coefficients.map(({ term }) => term);
  const head = ['label', ...columns.map(([name]) => name), ...terms.map((term) => `shift: ${term}`)].map(guarded);
  const rows = cells.map((cell) => [
    guarded(cell.label),
    ...columns.map(([, value]) => value(cell)),
    ...cell.coefficientShifts,
  ]);
  return `${Papa.unparse({ fields: head, data: rows }, { newline: '\n' })}\n`;
}
