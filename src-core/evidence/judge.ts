import type { Fitted } from '../estimate/fitted';
import { inferenceOf } from '../inference/inferred';
import type { Plan } from '../protocol/plan';
import type { Coefficient } from '../protocol/result';
import type { Cells } from '../table/cells';
import { takeCells } from './subset';

/** What the inference of a plan says of a fit to the cells at `rows` (null: to all of them), p values by bootstrap left out; null where it refuses. */
export type Judge = (fitted: Fitted, rows: readonly number[] | null) => readonly Coefficient[] | null;

export function judgeOf(cells: Cells, plan: Plan): Judge {
  return (fitted, rows) => {
    const inferred = inferenceOf({ fitted, cells: rows ? takeCells(cells, rows) : cells, plan, draws: false });
    return inferred.ok ? inferred.value.coefficients : null;
  };
}
