import { fromDoubles } from '../numbers/decimals';
import { nearestName } from '../protocol/nearest';
import { done, type Outcome, problem, refuseAll } from '../protocol/outcome';
import type { Where } from '../protocol/plan';
import { below } from '../protocol/pointer';
import type { Problem } from '../protocol/problems';
import { canTake, formed, type KnownFactor, type KnownTerm } from './known-terms';

/**
 * The row of the model matrix that a cell with stated covariates would have.
 *
 * known: learned terms; where: a value for every data column that they use. Returns one number a coefficient.
 * Refuses a level that no used cell has (`unknown-kind`: found, nearest), a text where a number stands (`wrong-type`) and a value that a
 * transform cannot take (`out-of-range`); all together, at the column's place below `at`.
 *
 * Example: `{ income: 30, region: 'South' }` under an intercept, income and region gives [1, 30, 1, 0] when South is the first level shown.
 */
export function rowOf(known: readonly KnownTerm[], where: Where, at = ''): Outcome<Float64Array> {
  const problems: Problem[] = [];
  const row: number[] = [];
  for (const term of known) {
    let values = [1];
    for (const factor of term.factors) {
      const own = factorValues(factor, where, at, problems);
      values = values.flatMap((first) => own.map((second) => first * second));
    }
    row.push(...values);
  }
  const once = problems.filter((p, i) => problems.findIndex((q) => q.at === p.at && q.code === p.code) === i);
  return once.length > 0 ? refuseAll(once) : done(Float64Array.from(row));
}

function factorValues(factor: KnownFactor, where: Where, at: string, problems: Problem[]): number[] {
  const { column } = factor;
  if (!Object.hasOwn(where, column))
    throw new RangeError(`no value for ${column}: the form of the plan was not checked`);
  const place = below(at, column);
  const value = where[column] as number | string;
  if (factor.kind === 'category') {
    const level = String(value);
    if (!factor.levels.includes(level))
      problems.push(problem('unknown-kind', { found: value, nearest: nearestName(level, factor.levels) }, place));
    return factor.shown.map((shown) => (shown === level ? 1 : 0));
  }
  if (typeof value !== 'number') {
    problems.push(problem('wrong-type', { found: 'string', expected: 'number' }, place));
    return [0];
  }
  const { form } = factor;
  const made = formed(fromDoubles([value]), form).high[0] as number;
  if (canTake(value, form) && Number.isFinite(made)) return [made];
  problems.push(
    problem(
      'out-of-range',
      { found: value, low: form.as === 'log' || form.as === 'sqrt' ? 0 : null, high: null },
      place,
    ),
  );
  return [0];
}
