import type { Plan } from '../protocol/plan';
import type { CarriedBy } from '../protocol/result';
import { termName } from '../protocol/term-names';
import { groupingsOf } from './carried-by';
import type { CautionSources, Found } from './caution-sources';

/** A term carried by fewer cells or groups is thin evidence, whatever its p value. */
const FEW = 6;

/** What the cells and groups behind each term give cause to say, once a term: levels of one category are one term. */
export function cautionsOfTerms({ plan, cells, fitted, pieces }: CautionSources): Found[] {
  const counts = new Map(groupingsOf(cells, plan).map(({ name, count }) => [name, count]));
  const constant = new Map<string, Found>();
  const few = new Map<string, Found & { code: 'term-carried-by-few' }>();
  for (const [j, carried] of pieces.fit.carriedBy.entries()) {
    const index = fitted.design.termOf[j] as number;
    if (index < 0) continue;
    const term = nameOf(plan, index, carried);
    for (const { column, groups, constantWithin } of carried.by) {
      // A category of the groups themselves is constant within them by design, and takes up what they share.
      if (isCategoryOf(plan, index, column)) continue;
      const key = `${index} ${column}`;
      if (constantWithin && !constant.has(key) && !goesTogether(plan, column))
        constant.set(key, {
          code: 'term-constant-within-groups',
          facts: { term, column, groups: counts.get(column) ?? groups, cells: cells.count },
        });
      if (groups < FEW && (constantWithin || groups < (counts.get(column) ?? groups)))
        keepFewest(few, key, { term: carried.term, column, count: groups });
    }
    if (carried.cells < FEW) keepFewest(few, `${index}`, { term: carried.term, column: null, count: carried.cells });
  }
  return [...constant.values(), ...few.values()];
}

type Few = Found & { code: 'term-carried-by-few' };

function keepFewest(few: Map<string, Few>, key: string, facts: Few['facts']): void {
  const known = few.get(key);
  if (!known || facts.count < known.facts.count) few.set(key, { code: 'term-carried-by-few', facts });
}

/** True where the plan lets the cells of a column's groups go together, in Omega or in the errors of the coefficients. */
function goesTogether({ variance, inference }: Plan, column: string): boolean {
  const ways = variance.parts.map((part) =>
    part.kind === 'shared' ? part.by : 'correlation' in part ? (part.correlation?.by ?? null) : null,
  );
  if (inference.kind === 'clustered' || inference.kind === 'wild') ways.push(inference.by);
  if (inference.kind === 'clustered') ways.push(inference.alsoBy);
  return ways.some((by) => by?.join(' × ') === column);
}

/** The term's name: one for all levels of a category. */
function nameOf(plan: Plan, index: number, carried: CarriedBy): string {
  const term = plan.terms[index];
  return term ? termName(term) : carried.term;
}

function isCategoryOf(plan: Plan, index: number, column: string): boolean {
  const term = plan.terms[index];
  return term !== undefined && 'as' in term && term.column === column;
}
