import { isLinked } from '../protocol/linked';
import type { Plan } from '../protocol/plan';
import type { Omitted } from '../protocol/result';
import { factorsOf, interceptName } from '../protocol/term-names';
import type { Cells } from '../table/cells';
import { sizesWithin } from '../table/moved-sizes';
import { type CautionPieces, type CautionSources, type Found, largestShift } from './caution-sources';

const marks = ['rounds-to-zero', 'provisional', 'estimated', 'low-reliability'] as const;

/** What the table itself gives cause to say: cells that are not there, values that their source marks, keys that met nothing. */
export function cautionsOfData({ plan, cells, pieces, limits }: CautionSources): Found[] {
  const { omitted, rows, used, unmatched } = pieces.data;
  const found: Found[] = [];
  const suppressed = omitted.filter(({ reason }) => reason.code.startsWith('suppressed'));
  if (suppressed.length > 0)
    found.push({
      code: 'cells-suppressed',
      facts: {
        cells: suppressed.length,
        labels: suppressed.map(({ label }) => label),
        bounded: boundedOf(cells, suppressed),
      },
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
  const within = sizesWithin(plan);
  if (within !== null) {
    const moves = (limits?.sizes ?? []).map(({ one }) => ({ term: one.term, to: one.estimate }));
    found.push({ code: 'sizes-within', facts: { within, shift: largestShift(pieces.fit, moves) } });
  }
  found.push(...notFollowed(plan, limits?.failed ?? false), ...undone(pieces));
  // Under maximum likelihood the mean is on the log scale, and no logarithm is taken of any.
  if (plan.outcomeScale === 'log' && !isLinked(plan)) found.push({ code: 'log-of-means', facts: {} });
  return [...found, ...variationAboveOne(plan, cells), ...marked(plan, cells)];
}

/** How many of the rows left out for a suppressed value the bounds take in. */
function boundedOf({ limited }: Cells, suppressed: readonly Omitted[]): number {
  const brought = new Set(limited?.cells.rows.filter((_, g) => (limited.usedAt[g] as number) < 0));
  return suppressed.filter(({ row }) => brought.has(row)).length;
}

/** Columns with limits that the plan takes for something other than the outcome or a term as it stands; rounded sizes are followed apart. */
function notFollowed(plan: Plan, failed: boolean): Found[] {
  const { roles, data, variance } = plan;
  const elsewhere = new Set<string>();
  for (const column of [roles.error, roles.exposure, roles.designEffect, roles.withinSd])
    if (column !== null) elsewhere.add(column);
  for (const part of variance.parts) {
    if (part.kind === 'proxy') elsewhere.add(part.column);
    if (part.kind === 'log-linear') for (const term of part.terms) elsewhere.add(term.column);
    if ('freedom' in part && part.freedom !== null && typeof part.freedom !== 'number')
      elsewhere.add(part.freedom.column);
  }
  for (const derive of data.derive) {
    elsewhere.add(derive.of);
    if (derive.as === 'ratio') elsewhere.add(derive.over);
    if (derive.as === 'difference') elsewhere.add(derive.minus);
  }
  const columns = Object.entries(data.limits).flatMap(([name, limit]) =>
    elsewhere.has(name) || (name === roles.size && 'suppressed' in limit) ? [name] : [],
  );
  if (columns.length === 0 && !failed) return [];
  return [{ code: 'limits-not-followed', facts: { columns, failed } }];
}

/** Coefficients that were told from zero and are not over all admissible values. */
function undone({ bounds = [], fit }: CautionPieces): Found[] {
  const alone = fit.coefficients.length === 1;
  const told = bounds.filter(({ term, survives }) => {
    const own = fit.coefficients.find((one) => one.term === term);
    const clear = own !== undefined && own.low !== null && own.high !== null && (own.low > 0 || own.high < 0);
    return clear && (alone || term !== interceptName) && !(survives.sign && survives.significance);
  });
  const [first] = told;
  if (!first) return [];
  const terms = told.map(({ term, low, high, survives }) => ({ term, low, high, sign: survives.sign }));
  const moves = told.flatMap(({ term, low, high }) => [low, high].flatMap((to) => (to === null ? [] : [{ term, to }])));
  return [{ code: 'bounds-undo', facts: { terms, cells: first.over.cells, shift: largestShift(fit, moves) } }];
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
