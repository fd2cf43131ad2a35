import { analyse } from '@core/analyse';
import { type Limits, limitsOf } from '@core/evidence/limits';
import { checkModel } from '@core/inference/check-model';
import { fitChosen } from '@core/inference/fits';
import { inferenceOf } from '@core/inference/inferred';
import type { Coefficient, Result } from '@core/protocol/result';
import type { Hooks } from '@core/protocol/source';
import { prepareCells } from '@core/table/prepare-cells';
import { planWith, sourcesOf } from '../table/support';
import { took } from './fitted-case';

const quiet: Hooks = { cancelled: () => false, progress: () => {} };

/** The whole path from a written plan and its table, without intake's files. */
export function ran(parts: object, csv: string): Result {
  const plan = planWith(parts);
  const cells = prepareCells({ plan, sources: sourcesOf(plan, { 'cells.csv': csv }) });
  if (!cells.ok) throw new Error(JSON.stringify(cells.problems));
  const result = analyse({ plan, cells: cells.value, hooks: quiet });
  if (!result.ok) throw new Error(JSON.stringify(result.problems));
  return result.value;
}

/** The coefficients alone of a written plan on its table: model stage, fit and inference. */
export function coefficientsIn(parts: object, csv: string): readonly Coefficient[] {
  const plan = planWith(parts);
  const cells = took(prepareCells({ plan, sources: sourcesOf(plan, { 'cells.csv': csv }) }));
  const model = took(checkModel({ plan, cells }));
  const fitted = took(fitChosen({ plan, model, hooks: quiet }));
  return took(inferenceOf({ fitted, cells: model.cells, plan })).coefficients;
}

/** The bounds alone. */
export function boundsIn(parts: object, csv: string): Limits {
  const plan = planWith(parts);
  const cells = took(prepareCells({ plan, sources: sourcesOf(plan, { 'cells.csv': csv }) }));
  const model = took(checkModel({ plan, cells }));
  const fitted = took(fitChosen({ plan, model, hooks: quiet }));
  const { coefficients } = took(inferenceOf({ fitted, cells: model.cells, plan }));
  return limitsOf({ fitted, cells, plan, model, coefficients, hooks: quiet });
}

export function coefficient(result: Result, term: string): Coefficient {
  const found = result.fit.coefficients.find((one) => one.term === term);
  if (!found) throw new Error(`no ${term}`);
  return found;
}

/** A comma-separated table from rows of texts. */
export function table(head: string, rows: readonly (readonly (string | number)[])[]): string {
  return [head, ...rows.map((row) => row.join(','))].join('\n');
}

/** Every way to take one of each pair. */
export function choices(pairs: readonly (readonly [number, number])[]): number[][] {
  return pairs.reduce<number[][]>(
    (all, pair) => all.flatMap((before) => [...new Set(pair)].map((end) => [...before, end])),
    [[]],
  );
}
