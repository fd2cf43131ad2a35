import type { NamedInput } from './bridge';
import type { DataPlan, Plan, Read, Roles } from './plan';

/** A plan on its way: like a plan, but its variance may not be stated yet, and the method is left to follow from it. */
export type DraftPlan = Omit<Plan, 'variance' | 'estimate'> & {
  variance: Plan['variance'] | null;
  estimate: Plan['estimate'] | null;
};

/** What a project keeps of a plan that is not complete: its files, and all that was said of them. */
export interface Draft {
  readonly format: 'steelyard-draft/1';
  readonly plan: DraftPlan;
  readonly inputs: readonly NamedInput[];
  /** The data were looked at and accepted: what is left is the variance. */
  readonly accepted: boolean;
}

export const unsaidRead: Read = {
  encoding: null,
  delimiter: null,
  decimal: null,
  group: null,
  statuses: {},
  missing: {},
  footnotes: [],
};

export const noRoles: Roles = {
  label: null,
  outcome: null,
  outcomeUnit: 'number',
  size: null,
  error: null,
  errorKind: 'se',
  errorLevel: null,
  count: null,
  exposure: null,
  per: 1,
  designEffect: null,
  withinSd: null,
};

/** A plan of one file, of which nothing is said yet. */
export function draftOf(file: NamedInput): Draft {
  const data: DataPlan = {
    file: file.name,
    read: unsaidRead,
    join: [],
    derive: [],
    omit: [],
    limits: {},
    sizeWithin: null,
  };
  const plan: DraftPlan = {
    format: 'steelyard-plan/1',
    title: '',
    about: null,
    data,
    roles: noRoles,
    units: {},
    matters: {},
    outcomeScale: 'identity',
    addedHalf: null,
    terms: [],
    intercept: true,
    variance: null,
    estimate: null,
    target: 'structure',
    inference: { kind: 'model', level: 0.95 },
    beside: [],
    questions: [],
    tests: null,
    disclosure: null,
    report: { paper: 'A4', omit: [] },
  };
  return { format: 'steelyard-draft/1', plan, inputs: [file], accepted: false };
}

/** The draft in a text that the project kept; null where the text is none of ours. */
export function readDraft(text: string | null): Draft | null {
  if (text === null) return null;
  try {
    const draft = JSON.parse(text) as Draft;
    return draft.format === 'steelyard-draft/1' ? draft : null;
  } catch {
    return null;
  }
}
