import type { CellLook, DataLook } from '../protocol/data-look';
import { done, type Outcome } from '../protocol/outcome';
import type { Plan } from '../protocol/plan';
import type { Omitted } from '../protocol/result';
import type { PlanWithSources } from './assemble';
import type { Frame } from './frame';
import { labelsOf } from './labels';
import { prepareRows } from './prepare-cells';
import { doublesOf, type RoleValues } from './roles';

/**
 * Every data row of a plan before any fit: its label, what its roles say, and why it is left out if it is.
 *
 * Of a row left out those values stand that it has; null for the others. Refuses what `prepareCells` refuses.
 *
 * Example: a row of size 0 stands in its place with the reason `not-above-zero`.
 */
export function lookAtCells(of: PlanWithSources): Outcome<DataLook> {
  const prepared = prepareRows(of);
  if (!prepared.ok) return prepared;
  const { frame, values } = prepared.value;
  const { columns, data } = prepared.value.cells;
  return done({
    columns,
    rows: rowsOf(of.plan, { frame, values, omitted: data.omitted }),
    used: data.used,
    files: data.files,
    unmatched: data.unmatched,
  });
}

function rowsOf(
  { roles }: Plan,
  {
    frame,
    values,
    omitted,
  }: { readonly frame: Frame; readonly values: RoleValues; readonly omitted: readonly Omitted[] },
): readonly CellLook[] {
  const keys = (roles.label ?? []).flatMap((name) => frame.holder(name) ?? []);
  const labels = labelsOf(frame.rows, keys);
  const all = Array.from({ length: frame.rows }, (_, row) => row);
  const [outcome, size, error] = [values.outcome, values.size, values.error].map((column) => doublesOf(column, all));
  const reasons = new Map(omitted.map(({ row, reason }) => [row, reason]));
  return all.map((row) => ({
    row: row + 1,
    label: labels[row] as string,
    key: keys.map(({ texts }) => texts[row] as string),
    outcome: finite(outcome?.[row]),
    size: finite(size?.[row]),
    error: finite(error?.[row]),
    reason: reasons.get(row + 1) ?? null,
  }));
}

function finite(value: number | undefined): number | null {
  return value !== undefined && Number.isFinite(value) ? value : null;
}
