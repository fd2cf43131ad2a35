import { analyse } from '@core/analyse';
import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import { type CaseFit, cellsFrom, cellsOf, loadCase, planOf } from '../support/case';

const hooks = { cancelled: () => false, progress: () => {} };

/** The result of a reference case's fit, the plan changed where a test asks for it. */
export function resultOfCase(id: string, fit: string, change: Partial<Plan> = {}): Result {
  const of = loadCase(id);
  const plan = { ...planOf(of, of.fits.find((one) => one.fit === fit) as CaseFit), ...change };
  const outcome = analyse({ plan, cells: cellsOf(id, plan), hooks });
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

/** A hand-made table with the plan of a reference case made its own: sizes n, outcome y, label a. */
export function resultOfTable(csv: string, change: Partial<Plan> = {}): Result {
  const of = loadCase('hand-per-size');
  const base = planOf(of, of.fits[0] as CaseFit);
  const plan: Plan = {
    ...base,
    title: 'A small table',
    roles: { ...base.roles, label: ['a'], outcome: 'y', size: 'n', error: null },
    terms: [],
    beside: ['constant'],
    questions: [],
    ...change,
  };
  const outcome = analyse({ plan, cells: cellsFrom(csv, plan), hooks });
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}
