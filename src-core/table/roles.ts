import {
  type Decimals,
  fromPairs,
  pairAt,
  productOf,
  quotientOf,
  rootOf,
  scaledBy,
  takeRows,
} from '../numbers/decimals';
import { normalQuantile } from '../numbers/normal';
import type { Plan, Roles } from '../protocol/plan';
import type { RoleColumns } from './checks';
import type { Column } from './column';
import type { Frame } from './frame';
import type { Positive } from './inclusion';

const roleNames = ['outcome', 'size', 'error', 'count', 'exposure', 'designEffect', 'withinSd'] as const;

/** The columns behind the numeric roles. */
export function roleColumns(frame: Frame, roles: Roles): RoleColumns {
  const found = roleNames.map((role) => {
    const name = roles[role];
    return [role, name === null ? null : frame.holder(name)] as const;
  });
  return Object.fromEntries(found) as unknown as RoleColumns;
}

/** What the roles say, row by row of the file; null without the role. */
export interface RoleValues {
  /** In the outcome's own unit: the outcome itself, count over size, or per times count over exposure. */
  readonly outcome: Decimals;
  readonly size: Decimals | null;
  readonly effectiveSize: Decimals | null;
  /** Standard errors, whatever kind is stated. */
  readonly error: Decimals | null;
  readonly counts: Decimals | null;
  readonly exposure: Decimals | null;
}

/**
 * Makes outcome, sizes and standard errors of the roles' columns, in double-double.
 *
 *     y = outcome, c / n, or per c / e · m = n / deff · s = se, sqrt(variance), half-width / z, or cv |y|
 *
 * z: the normal point that leaves (1 - level) / 2 above it. What cannot be formed is missing.
 *
 * Example: a half-width of 1.96 at level 0.95 is a standard error of 1.00002.
 */
export function roleValues(
  { roles }: Plan,
  { columns, rows }: { readonly columns: RoleColumns; readonly rows: number },
): RoleValues {
  const values = (column: Column | null) => column?.numbers().values ?? null;
  const [size, counts, exposure, given] = [columns.size, columns.count, columns.exposure, columns.error].map(values);
  const deff = values(columns.designEffect);
  const rate = counts && exposure ? scaledBy(quotientOf(counts, exposure), roles.per) : null;
  const share = counts && size && !exposure ? quotientOf(counts, size) : null;
  const outcome = values(columns.outcome) ?? rate ?? share ?? fromPairs(new Array(rows).fill(null));
  return {
    outcome,
    size: size ?? null,
    effectiveSize: size && deff ? quotientOf(size, deff) : (size ?? null),
    error: given ? standardErrors(given, { roles, outcome }) : null,
    counts: counts ?? null,
    exposure: exposure ?? null,
  };
}

function standardErrors(
  given: Decimals,
  { roles, outcome }: { readonly roles: Roles; readonly outcome: Decimals },
): Decimals {
  switch (roles.errorKind) {
    case 'se':
      return given;
    case 'variance':
      return rootOf(given);
    case 'half-width': {
      const point = normalQuantile((1 + (roles.errorLevel as number)) / 2);
      return quotientOf(given, fromPairs(Array.from(given.high, () => [point, 0])));
    }
    case 'cv':
      return productOf(given, absolute(outcome));
  }
}

function absolute(column: Decimals): Decimals {
  return fromPairs(
    Array.from(column.high, (high, g) => {
      const [, low] = pairAt(column, g);
      return high < 0 ? [-high, -low] : [high, low];
    }),
  );
}

/** Columns that must be above 0 for a cell to be used: size and design effect, error and its freedom, exposure. */
export function positivesOf(columns: RoleColumns, values: RoleValues, freedoms: readonly Column[]): Positive[] {
  const above = (of: Decimals | null) => (row: number) =>
    of === null || ((of.high[row] as number) > 0 && Number.isFinite(of.high[row]));
  const asked: readonly [Column | null, Positive['count'], Decimals | null][] = [
    [columns.size, 'size-not-positive', values.size],
    [columns.designEffect, 'size-not-positive', columns.designEffect?.numbers().values ?? null],
    [columns.error, 'error-not-positive', columns.error?.numbers().values ?? null],
    [columns.error, 'error-not-positive', values.error],
    ...freedoms.map(
      (column) => [column, 'error-not-positive', column.numbers().values] as [Column, 'error-not-positive', Decimals],
    ),
    [columns.exposure, 'exposure-not-positive', values.exposure],
  ];
  return asked.flatMap(([column, count, of]) => (column === null ? [] : [{ column, count, holds: above(of) }]));
}

/** The high halves of some rows as plain doubles. */
export function doublesOf(column: Decimals | null, rows: readonly number[]): Float64Array | null {
  return column === null ? null : takeRows(column, rows).high;
}
