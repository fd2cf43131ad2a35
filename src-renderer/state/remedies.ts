import type { PreviewColumn } from '@core/protocol/bridge';
import { holdsNumbers, useOf, withRole, withUse } from '@core/protocol/column-roles';
import type { DraftPlan } from '@core/protocol/draft';
import { placeOf, pointerOf, withFootnote, withOmission, withRead, withToken } from '@core/protocol/edit-data';
import type { Plan } from '@core/protocol/plan';
import type { Problem } from '@core/protocol/problems';
import { remedyTexts as texts } from '@core/words/screen-data';

/** One thing that would mend a problem: the changed plan, and how the change is called. */
export interface Remedy {
  readonly text: string;
  readonly action: string;
  readonly at: string;
  readonly plan: Plan | DraftPlan;
}

/** Problems of one kind in one column about one text, told once: the first of them, and the rows of all. */
export interface ProblemGroup {
  readonly problem: Problem;
  readonly rows: readonly number[];
}

/** Puts together what differs in the row alone. */
export function grouped(problems: readonly Problem[]): readonly ProblemGroup[] {
  const groups = new Map<string, { problem: Problem; rows: number[] }>();
  for (const problem of problems) {
    const { row, ...facts } = problem.facts as { row?: number };
    const key = JSON.stringify([problem.code, facts]);
    const group = groups.get(key) ?? { problem, rows: [] };
    groups.set(key, group);
    if (typeof row === 'number' && !group.rows.includes(row)) group.rows.push(row);
  }
  return [...groups.values()];
}

const usual = ['suppressed-confidential', 'not-collected', 'not-applicable'] as const;

/** What can be done about a problem of the data, as changes of the plan; empty where the file itself has to be mended. */
export function remediesFor(
  problem: Problem,
  plan: Plan | DraftPlan,
  columns: readonly PreviewColumn[],
): readonly Remedy[] {
  const place = placeOf(problem.at, plan);
  if (problem.code === 'not-a-number' && isOfWords(problem.facts.column, columns))
    return takenBack(problem.facts.column, plan);
  if (problem.code === 'not-a-number') {
    const { found, column } = problem.facts;
    const token = found.trim();
    const action = 'change-statuses';
    const at = `${pointerOf(place)}/statuses/${token}`;
    const mark = /^[+\-\u2212]?[\d.,'\s\u00a0\u202f]*\d\s*([^\d\s.,]{1,3})$/u.exec(token)?.[1];
    return [
      ...(mark === undefined
        ? []
        : [{ text: texts.footnote(mark), action, at, plan: withFootnote(plan, place, mark) }]),
      ...usual.map((status) => ({
        text: texts.status(token, status),
        action,
        at,
        plan: withToken(plan, place, token, { status }),
      })),
      { text: texts.missing(token, column), action, at, plan: withToken(plan, place, token, { missingIn: column }) },
      {
        text: texts.omit(column, found),
        action: 'change-omissions',
        at: `/data/omit/${plan.data.omit.length}`,
        plan: withOmission(plan, { column, is: [found], because: texts.omitBecause(column) }),
      },
    ];
  }
  if (problem.code === 'reads-both-ways' && problem.facts.settle === 'decimal')
    return (['.', ','] as const).map((decimal) => ({
      text: texts.decimal(decimal),
      action: 'change-reading',
      at: `${pointerOf(place)}/decimal`,
      plan: withRead(plan, place, { decimal }),
    }));
  if (problem.code === 'reads-both-ways' && problem.facts.settle === 'group')
    return ['none', ',', '.', ' '].map((group) => ({
      text: texts.group(group),
      action: 'change-reading',
      at: `${pointerOf(place)}/group`,
      plan: withRead(plan, place, { group }),
    }));
  return [];
}

function isOfWords(name: string, columns: readonly PreviewColumn[]): boolean {
  const column = columns.find((one) => one.name === name);
  return column !== undefined && !holdsNumbers(column);
}

/** A column of words is not mended text by text: it is no number, whatever its role. */
function takenBack(column: string, plan: Plan | DraftPlan): readonly Remedy[] {
  const roles = withRole(plan.roles, { column, role: 'other', order: [] });
  const asWords = useOf(plan, column) === 'number' ? 'category' : useOf(plan, column);
  return [
    {
      text: texts.noNumber(column),
      action: 'change-roles',
      at: `/roles/${column}`,
      plan: { ...plan, roles, terms: withUse(plan.terms, column, asWords) },
    },
  ];
}
