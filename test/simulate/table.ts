import { fromDoubles } from '@core/numbers/decimals';
import type { Plan } from '@core/protocol/plan';
import { normalPlan } from '@core/protocol/read';
import type { Cells } from '@core/table/cells';

export type Columns = Readonly<Record<string, readonly (number | string)[] | Float64Array>>;

/** Used cells of a table in memory: no gaps, nothing left out; size `n` and error `s` where it has such columns. */
export function cellsOfTable(columns: Columns, plan: Plan): Cells {
  const names = Object.keys(columns);
  const count = columns[names[0] as string]?.length ?? 0;
  const of = (name: string) => columns[name] as readonly (number | string)[];
  const highs = (name: string | null) => (name === null ? null : Float64Array.from(of(name) as readonly number[]));
  const labels = Array.from({ length: count }, (_, g) => String(g + 1));
  return {
    plan,
    count,
    rows: labels.map((_, g) => g + 1),
    labels,
    outcome: fromDoubles(new Float64Array(count)),
    size: highs(plan.roles.size),
    effectiveSize: highs(plan.roles.size),
    error: highs(plan.roles.error),
    counts: null,
    exposure: null,
    numbers: (name) => ({
      name,
      values: fromDoubles(Float64Array.from(of(name) as readonly number[])),
      texts: Array.from(of(name), String),
      status: Array.from(of(name), () => 'value'),
    }),
    texts: (name) => Array.from(of(name), String),
    columns: names,
    labelColumns: plan.roles.label ?? [],
    matrices: new Map(),
    neighbours: null,
    data: { rows: count, used: count, omitted: [], files: [], unmatched: [] },
  };
}

/** A plan on the columns y, x, z, n, s and any label columns. */
export function planOn(said: {
  readonly parts: Plan['variance']['parts'];
  readonly fixed?: Record<string, number>;
  readonly estimate: Plan['estimate'];
  readonly inference: Plan['inference'];
  readonly label?: string[];
}): Plan {
  const { parts, fixed = {}, estimate, inference, label = null } = said;
  const plan = normalPlan({
    format: 'steelyard-plan/1',
    data: { file: 'drawn.csv' },
    roles: { label, outcome: 'y', size: 'n', error: 's' },
    terms: [{ column: 'x' }, { column: 'z' }],
    variance: { parts, fixed },
    estimate,
    inference,
  });
  if (!plan.ok) throw new Error(JSON.stringify(plan.problems));
  return plan.value;
}
