import type { Part, Plan, SimpleTerm, Transform } from '../protocol/plan';
import { below } from '../protocol/pointer';
import { structuresOf } from './plan-files';

/** A place of the plan that names a column, and what it takes the column for. */
export interface Place {
  readonly at: string;
  readonly column: string;
  readonly need: 'number' | 'category' | 'label' | 'name';
}

/**
 * Every place after the derived columns that names a column, in the order of the plan: there all columns can be named.
 *
 * number: its texts must be numbers; category: any text will do; both leave a cell out where the value is not there. label: texts as they stand.
 * name: the column need only exist.
 */
export function placesOf(plan: Plan): readonly Place[] {
  const names = (of: object, at: string) => Object.keys(of).map((column) => named(column, below(at, column)));
  return [
    ...plan.data.omit.map(({ column }, i) => named(column, `/data/omit/${i}/column`)),
    ...names(plan.data.limits, '/data/limits'),
    ...rolePlaces(plan),
    ...names(plan.units, '/units'),
    ...plan.terms.flatMap((term, i) =>
      'product' in term
        ? term.product.map((factor, j) => termPlace(factor, `/terms/${i}/product/${j}`))
        : [termPlace(term, `/terms/${i}`)],
    ),
    ...structuresOf(plan).flatMap(({ variance, at }) =>
      variance.parts.flatMap((part, i) => partPlaces(part, below(at, 'parts', i))),
    ),
    ...groupingPlaces(plan),
    ...questionPlaces(plan),
    ...(plan.tests?.columns ?? []).map((column, i) => number(column, `/tests/columns/${i}`)),
    ...(plan.tests?.whiteColumns ?? []).map((column, i) => number(column, `/tests/whiteColumns/${i}`)),
  ];
}

function named(column: string, at: string): Place {
  return { at, column, need: 'name' };
}

function number(column: string, at: string): Place {
  return { at, column, need: 'number' };
}

function categories(columns: readonly string[], at: string): Place[] {
  return columns.map((column, i) => ({ at: `${at}/${i}`, column, need: 'category' }));
}

const numericRoles = ['outcome', 'size', 'error', 'count', 'exposure', 'designEffect', 'withinSd'] as const;

function rolePlaces({ roles }: Plan): Place[] {
  const labels = (roles.label ?? []).map((column, i): Place => ({ at: `/roles/label/${i}`, column, need: 'label' }));
  const numbers = numericRoles.flatMap((role) => {
    const column = roles[role];
    return column === null ? [] : [number(column, `/roles/${role}`)];
  });
  return [...labels, ...numbers];
}

function termPlace(term: SimpleTerm, at: string): Place {
  return { at: `${at}/column`, column: term.column, need: 'as' in term ? 'category' : 'number' };
}

function partPlaces(part: Part, at: string): Place[] {
  const places: Place[] = [];
  if ('freedom' in part && part.freedom !== null && typeof part.freedom !== 'number')
    places.push(number(part.freedom.column, `${at}/freedom/column`));
  if (part.kind === 'proxy') places.push(number(part.column, `${at}/column`));
  if (part.kind === 'per-class') places.push({ at: `${at}/column`, column: part.column, need: 'category' });
  if (part.kind === 'log-linear') places.push(...part.terms.map((term, i) => termPlace(term, `${at}/terms/${i}`)));
  if (part.kind === 'shared') places.push(...categories(part.by, `${at}/by`));
  if ('correlation' in part && part.correlation !== null) {
    places.push(...categories(part.correlation.by, `${at}/correlation/by`));
    if (part.correlation.kind === 'serial') places.push(number(part.correlation.order, `${at}/correlation/order`));
  }
  return places;
}

function groupingPlaces({ inference }: Plan): Place[] {
  const by = 'by' in inference ? categories(inference.by, '/inference/by') : [];
  return 'alsoBy' in inference ? [...by, ...categories(inference.alsoBy ?? [], '/inference/alsoBy')] : by;
}

function questionPlaces({ questions }: Plan): Place[] {
  return questions.flatMap((question, i) => {
    const at = `/questions/${i}`;
    const where = (of: object, whereAt: string) =>
      Object.keys(of).map((column) => named(column, below(whereAt, 'where', column)));
    if (question.kind === 'expect') return where(question.where, at);
    if (question.kind !== 'average') return [];
    return (['of', 'minus'] as const).flatMap((side) =>
      (question[side] ?? []).flatMap((share, j) => where(share.where, `${at}/${side}/${j}`)),
    );
  });
}

/** A transform that the plan applies to a column. at: pointer to it. Powers are whole and above 0: they are always defined. */
export interface Transformed {
  readonly at: string;
  readonly column: string;
  readonly transform: Transform;
}

/** Every transform of terms and of log-linear parts, in the order of the plan. */
export function transformsOf(plan: Plan): readonly Transformed[] {
  const terms = plan.terms.flatMap((term, i) =>
    'product' in term
      ? term.product.flatMap((factor, j) => transformOf(factor, `/terms/${i}/product/${j}`))
      : transformOf(term, `/terms/${i}`),
  );
  const parts = structuresOf(plan).flatMap(({ variance, at }) =>
    variance.parts.flatMap((part, i) =>
      part.kind === 'log-linear'
        ? part.terms.flatMap((term, j) => transformOf(term, below(at, 'parts', i, 'terms', j)))
        : [],
    ),
  );
  return [...terms, ...parts];
}

function transformOf(term: SimpleTerm, at: string): Transformed[] {
  return 'transform' in term ? [{ at: `${at}/transform`, column: term.column, transform: term.transform }] : [];
}
