import type { DataComparison } from '../protocol/bridge';
import { done, type Outcome } from '../protocol/outcome';
import type { Plan } from '../protocol/plan';
import type { SourceTable } from '../protocol/source';
import { assemble } from './assemble';
import type { Cells } from './cells';
import { labelKey, labelsOf } from './labels';
import { prepareCells } from './prepare-cells';

/** What other data under the same plan change. Labels and columns as they stand in the new data, lost labels as in the old. */
export interface Replaced extends Pick<DataComparison, 'added' | 'lost' | 'changed'> {
  /** The used cells of the new data. */
  readonly cells: Cells;
}

type Sources = ReadonlyMap<string, Outcome<SourceTable>>;

/**
 * Puts other files in the place of a plan's own: roles, joins, statuses and rules are applied anew.
 *
 * Rows are matched by label (by data row number without one), the first of a label; texts of read and joined columns are compared as they stand,
 * derived columns follow from them. A column that one side lacks is no change of a value: if the plan needs it, it is refused.
 * Refuses what the data stage refuses of the new files.
 *
 * Example: next year's file with one parish more and one revised mean gives one added label and one changed text.
 */
export function replaceData({
  plan,
  before,
  after,
}: {
  readonly plan: Plan;
  readonly before: Sources;
  readonly after: Sources;
}): Outcome<Replaced> {
  const cells = prepareCells({ plan, sources: after });
  if (!cells.ok) return cells;
  const old = rowsByLabel(plan, before);
  if (!old.ok) return old;
  const now = rowsByLabel(plan, after);
  if (!now.ok) return now;
  const added = [...now.value].filter(([key]) => !old.value.has(key)).map(([, { label }]) => label);
  const lost = [...old.value].filter(([key]) => !now.value.has(key)).map(([, { label }]) => label);
  const changed = [...now.value].flatMap(([key, { label, texts }]) => {
    const was = old.value.get(key)?.texts;
    return [...texts].flatMap(([column, text]) => {
      const earlier = was?.get(column);
      return earlier === undefined || earlier === text ? [] : [{ label, column, before: earlier, after: text }];
    });
  });
  return done({ added, lost, changed, cells: cells.value });
}

interface Row {
  readonly label: string;
  readonly texts: ReadonlyMap<string, string>;
}

function rowsByLabel(plan: Plan, sources: Sources): Outcome<Map<string, Row>> {
  const assembled = assemble({ plan, sources });
  if (!assembled.ok) return assembled;
  const { frame } = assembled.value;
  const named = plan.roles.label?.map((name) => frame.holder(name)) ?? null;
  const labels = labelsOf(frame.rows, named?.filter((column) => column !== null) ?? null);
  const compared = frame.columns.filter(({ derived }) => !derived);
  const rows = new Map<string, Row>();
  for (const [row, label] of labels.entries()) {
    const key = labelKey(label);
    if (rows.has(key)) continue;
    rows.set(key, { label, texts: new Map(compared.map(({ name, texts }) => [name, texts[row] as string])) });
  }
  return done(rows);
}
