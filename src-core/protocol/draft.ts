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

/** A draft as it stood before (or after) what was done. */
export interface DraftStep {
  readonly action: string;
  readonly draft: Draft;
}

/** What of a draft can be taken back, and what was; the newest last. */
export interface DraftSteps {
  readonly done: readonly DraftStep[];
  readonly undone: readonly DraftStep[];
}

export const noSteps: DraftSteps = { done: [], undone: [] };

/** A draft with its steps is kept up to this length; the oldest steps go first. */
const LONGEST = 200_000;

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

/** A draft as the text that a project keeps, its steps with it, so that they can be taken back after reopening, too. */
export function draftText(draft: Draft, { done, undone }: DraftSteps = noSteps): string {
  const parts = [...done, ...undone].map((step) => JSON.stringify(step).length);
  let length = parts.reduce((sum, one) => sum + one, JSON.stringify(draft).length);
  let first = 0;
  while (first < done.length && length > LONGEST) length -= parts[first++] as number;
  const steps = { done: done.slice(first), undone: length > LONGEST ? [] : undone };
  const any = steps.done.length + steps.undone.length > 0;
  return JSON.stringify(any ? { ...draft, steps } : draft);
}

type Kept = Draft & { readonly steps?: DraftSteps };

/** The draft in a text that the project kept; null where the text is none of ours. */
export function readDraft(text: string | null): Draft | null {
  const kept = keptIn(text);
  if (kept === null) return null;
  const { steps: _steps, ...draft } = kept;
  return draft;
}

/** Its steps; none where it was kept without. */
export function readSteps(text: string | null): DraftSteps {
  const { done, undone } = keptIn(text)?.steps ?? noSteps;
  return Array.isArray(done) && Array.isArray(undone) ? { done, undone } : noSteps;
}

function keptIn(text: string | null): Kept | null {
  if (text === null) return null;
  try {
    const kept = JSON.parse(text) as Kept;
    return kept.format === 'steelyard-draft/1' ? kept : null;
  } catch {
    return null;
  }
}
