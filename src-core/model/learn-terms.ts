import { nearestName } from '../protocol/nearest';
import { done, type Outcome, problem, refuseAll } from '../protocol/outcome';
import type { SimpleTerm, Term } from '../protocol/plan';
import type { Problem } from '../protocol/problems';
import { factorsOf, interceptName, levelName, termName } from '../protocol/term-names';
import type { Cells } from '../table/cells';
import { formOf, type KnownFactor, type KnownTerm } from './known-terms';

/**
 * What the terms of a plan mean on the used cells: every category learns its levels, every column its name.
 *
 * A category has one column a level but its baseline (the first level unless stated). Without an intercept the first category that stands
 * alone keeps all its levels; inside a product a category always loses its baseline. Levels stand in code-point order.
 * terms: as the plan writes them; cells: the used cells, in which nothing is missing.
 * Refuses a category with one level among the used cells (`one-level`), a baseline that is no level (`unknown-kind`: found, nearest level)
 * and a plan without any column (`empty-list`); all of them together.
 *
 * Example: `{ column: 'region', as: 'category', baseline: 'North' }` on North, South, West learns the names `region: South`, `region: West`.
 */
export function learnTerms(model: {
  readonly terms: readonly Term[];
  readonly intercept: boolean;
  readonly cells: Pick<Cells, 'texts'>;
  readonly at?: string;
}): Outcome<KnownTerm[]> {
  const { terms, intercept, cells, at = '/terms' } = model;
  const problems: Problem[] = [];
  if (terms.length === 0 && !intercept) problems.push(problem('empty-list', { key: 'terms' }, at));
  const whole = intercept ? -1 : terms.findIndex((term) => 'as' in term);
  const known: KnownTerm[] = intercept ? [{ term: -1, factors: [], names: [interceptName] }] : [];
  for (const [index, term] of terms.entries()) {
    const factors = factorsOf(term).map((factor, i) => {
      const place = 'product' in term ? `${at}/${index}/product/${i}` : `${at}/${index}`;
      return learnFactor({ factor, cells, keepsAll: index === whole, place }, problems);
    });
    known.push({ term: index, factors, names: namesOf(factors) });
  }
  return problems.length > 0 ? refuseAll(problems) : done(known);
}

function learnFactor(
  model: { factor: SimpleTerm; cells: Pick<Cells, 'texts'>; keepsAll: boolean; place: string },
  problems: Problem[],
): KnownFactor {
  const { factor, cells, keepsAll, place } = model;
  const { column } = factor;
  if (!('as' in factor)) {
    return { kind: 'number', column, form: formOf(factor), name: termName(factor) };
  }
  const levels = [...new Set(cells.texts(column))].sort(byCodePoint);
  const { baseline } = factor;
  if (levels.length < 2) problems.push(problem('one-level', { column, level: levels[0] ?? '' }, place));
  else if (baseline !== null && !levels.includes(baseline))
    problems.push(
      problem('unknown-kind', { found: baseline, nearest: nearestName(baseline, levels) }, `${place}/baseline`),
    );
  const left = baseline ?? levels[0];
  return { kind: 'category', column, levels, shown: keepsAll ? levels : levels.filter((level) => level !== left) };
}

function namesOf(factors: readonly KnownFactor[]): string[] {
  return factors
    .map((factor) =>
      factor.kind === 'number' ? [factor.name] : factor.shown.map((level) => levelName(factor.column, level)),
    )
    .reduce((before, own) => before.flatMap((first) => own.map((second) => `${first} × ${second}`)));
}

/** Order by Unicode code points, which is not that of UTF-16 units beyond the basic plane. */
export function byCodePoint(a: string, b: string): number {
  const left = [...a];
  const right = [...b];
  for (let i = 0; i < Math.min(left.length, right.length); i++) {
    const difference = (left[i]?.codePointAt(0) as number) - (right[i]?.codePointAt(0) as number);
    if (difference !== 0) return difference;
  }
  return left.length - right.length;
}
