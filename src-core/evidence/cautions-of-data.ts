import type { Plan } from '../protocol/plan';
import { factorsOf } from '../protocol/term-names';
import type { Cells } from '../table/cells';
import type { CautionSources, Found } from './caution-sources';

const marks = ['rounds-to-zero', 'provisional', 'estimated', 'low-reliability'] as const;

/** What the table itself gives cause to say: cells that are not there, values that their source marks, keys that met nothing. */
export function cautionsOfData({ plan, cells, pieces }: CautionSources): Found[] {
  const { omitted, rows, used, unmatched } = pieces.data;
  const found: Found[] = [];
  const suppressed = omitted.filter(({ reason }) => reason.code.startsWith('suppressed'));
  if (suppressed.length > 0)
    found.push({
      code: 'cells-suppressed',
      facts: { cells: suppressed.length, labels: suppressed.map(({ label }) => label) },
    });
  if (omitted.length > 0) {
    const reasons: Record<string, number> = {};
    for (const { reason } of omitted) reasons[reason.code] = (reasons[reason.code] ?? 0) + 1;
    found.push({ code: 'cells-omitted', facts: { rows, used, omitted: omitted.length, reasons } });
  }
  for (const file of new Set(unmatched.map((one) => one.file))) {
    const count = (side: 'ours' | 'theirs'): number =>
      unmatched.filter((one) => one.file === file && one.side === side).length;
    found.push({ code: 'join-unmatched', facts: { file, ours: count('ours'), theirs: count('theirs') } });
  }
  if (plan.data.sizeWithin !== null) found.push({ code: 'sizes-within', facts: { within: plan.data.sizeWithin } });
  if (plan.outcomeScale === 'log') found.push({ code: 'log-of-means', facts: {} });
  return [...found, ...variationAboveOne(plan, cells), ...marked(plan, cells)];
}

/** A cv is error over outcome as a ratio: above 1 it is mostly a percentage. */
function variationAboveOne({ roles }: Plan, cells: Cells): Found[] {
  if (roles.errorKind !== 'cv' || roles.error === null) return [];
  const above = cells.numbers(roles.error).values.high.filter((cv) => cv > 1);
  if (above.length === 0) return [];
  const facts = { column: roles.error, cells: above.length, largest: Math.max(...above) };
  return [{ code: 'variation-above-one', facts }];
}

/** Used values that stand as numbers but are marked. */
function marked(plan: Plan, cells: Cells): Found[] {
  return numberColumns(plan).flatMap((column): Found[] => {
    const { status } = cells.numbers(column);
    return marks.flatMap((mark): Found[] => {
      const count = status.filter((one) => one === mark).length;
      return count === 0 ? [] : [{ code: 'values-marked', facts: { column, status: mark, cells: count } }];
    });
  });
}

/** Columns that the fit reads as numbers, each once, roles first. */
function numberColumns(plan: Plan): string[] {
  const { outcome, size, error, count, exposure, designEffect } = plan.roles;
  const roles = [outcome, size, error, count, exposure, designEffect].filter((column) => column !== null);
  const factors = plan.terms.flatMap(factorsOf);
  return [...new Set([...roles, ...factors.filter((term) => !('as' in term)).map(({ column }) => column)])];
}
