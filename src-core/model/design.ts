import { dependenceAmong } from '../algebra/dependence';
import { type Decimals, fromDoubles, productOf } from '../numbers/decimals';
import { done, type Outcome, refuse } from '../protocol/outcome';
import type { Cells } from '../table/cells';
import { canTake, formed, formName, type KnownFactor, type KnownTerm } from './known-terms';

/** Named columns of the model matrix, one a coefficient, in coefficient order. */
export interface Design {
  readonly names: readonly string[];
  /** Formed in double-double from the decimal data. */
  readonly columns: readonly Decimals[];
  /** Index of each column's term in plan.terms; -1 for the intercept. */
  readonly termOf: readonly number[];
  readonly intercept: boolean;
}

/**
 * The model matrix of the used cells. Powers and products of columns are formed in double-double.
 *
 * known: learned terms; cells: the used cells, in which nothing is missing.
 * Refuses fewer cells than coefficients (`fewer-cells-than-terms`), columns that depend on each other (`dependent-columns`, naming all that
 * take part and no other) and a power that is undefined or overflows on a cell (`transform-undefined`).
 *
 * Example: an intercept and `age^2` on ages 20 and 30 give the columns [1, 1] and [400, 900].
 */
export function designOf(known: readonly KnownTerm[], cells: Cells, at = '/terms'): Outcome<Design> {
  const names = known.flatMap((term) => term.names);
  const termOf = known.flatMap((term) => term.names.map(() => term.term));
  if (cells.count < names.length)
    return refuse('fewer-cells-than-terms', { cells: cells.count, coefficients: names.length }, at);
  const columns: Decimals[] = [];
  for (const term of known) {
    const own = columnsOf(term, cells, at);
    if (!own.ok) return own;
    columns.push(...own.value);
  }
  const dependent = dependenceAmong(columns);
  if (dependent) return refuse('dependent-columns', { coefficients: dependent.map((j) => names[j] as string) }, at);
  return done({ names, columns, termOf, intercept: known.some((term) => term.factors.length === 0) });
}

function columnsOf(term: KnownTerm, cells: Cells, at: string): Outcome<Decimals[]> {
  let columns: Decimals[] = [fromDoubles(new Float64Array(cells.count).fill(1))];
  for (const [i, factor] of term.factors.entries()) {
    const place = `${at}/${term.term}${term.factors.length > 1 ? `/product/${i}` : ''}`;
    const own = factorColumns(factor, cells, place);
    if (!own.ok) return own;
    columns = i === 0 ? own.value : columns.flatMap((first) => own.value.map((second) => productOf(first, second)));
  }
  return done(columns);
}

function factorColumns(factor: KnownFactor, cells: Cells, at: string): Outcome<Decimals[]> {
  const { column } = factor;
  if (factor.kind === 'category') {
    const texts = cells.texts(column);
    return done(factor.shown.map((level) => fromDoubles(Float64Array.from(texts, (text) => (text === level ? 1 : 0)))));
  }
  const { values, texts } = cells.numbers(column);
  const { form } = factor;
  const made = formed(values, form);
  const wrong = values.high.findIndex((value, g) => !canTake(value, form) || !Number.isFinite(made.high[g]));
  if (wrong < 0) return done([made]);
  return refuse(
    'transform-undefined',
    {
      file: cells.plan.data.file,
      row: cells.rows[wrong] as number,
      column,
      found: texts[wrong] as string,
      transform: formName(form),
    },
    form.as === 'itself' ? at : `${at}/${form.as === 'power' ? 'power' : 'transform'}`,
  );
}
