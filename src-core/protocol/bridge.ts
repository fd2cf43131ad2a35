import * as v from 'valibot';
import type { Command } from './commands';
import type { PackedLook } from './data-look';
import type { ReportDocument } from './document';
import { done, type Outcome, refuse } from './outcome';
import type { Encoding, Plan, Read, Status } from './plan';
import type { JsonType, Problem } from './problems';
import type { Result } from './result';

const number = v.pipe(v.number(), v.safeInteger());
const sha256 = v.pipe(v.string(), v.regex(/^[0-9a-f]{64}$/));
const bytes = v.instance(Uint8Array);
const inputs = v.array(v.strictObject({ name: v.string(), sha256 }));
const author = v.pipe(v.string(), v.minLength(1), v.maxLength(200));
/** A plan is judged by `readPlan`'s own validators in main, which tell every fault with its place. */
const plan = v.unknown();
const nothing = v.strictObject({});

/** Everything that a window can ask, one line a question: the payload as a schema. The answer's type stands under the same name in `Answers`. */
const asks = {
  'start.look': nothing,
  'start.forget': nothing,
  'project.demo': nothing,
  'project.create': nothing,
  /** file: one of the recent ones; null asks by a dialog. */
  'project.open': v.strictObject({ file: v.nullable(v.string()) }),
  'project.save-as': nothing,
  'project.close': nothing,
  'project.look': nothing,
  'data.choose': nothing,
  'data.take': v.strictObject({ name: v.pipe(v.string(), v.minLength(1), v.maxLength(255)), bytes }),
  'data.preview': v.strictObject({ name: v.string(), sha256, read: v.unknown() }),
  'data.look': v.strictObject({ plan, inputs }),
  'data.compare': v.strictObject({ planId: number, inputs }),
  'plan.add': v.strictObject({ name: v.string(), plan, inputs }),
  'plan.change': v.strictObject({ planId: number, action: v.string(), plan, inputs: v.nullable(inputs) }),
  'plan.rename': v.strictObject({ planId: number, name: v.string() }),
  'plan.undo': nothing,
  'plan.redo': nothing,
  'draft.keep': v.strictObject({ text: v.nullable(v.string()) }),
  'fit.ask': v.strictObject({ planId: number }),
  'fit.try': v.strictObject({ plan, inputs }),
  'fit.latest': v.strictObject({ planId: number }),
  'job.cancel': v.strictObject({ job: number }),
  'answer.cover': v.strictObject({ author }),
  'answer.uncover': v.strictObject({ author }),
  'report.pages': v.strictObject({ planId: number, edition: v.nullable(number) }),
  'report.note': v.strictObject({ place: v.string(), text: v.nullable(v.string()), author }),
  'report.decide': v.strictObject({ author, text: v.pipe(v.string(), v.minLength(1)) }),
  'report.freeze': v.strictObject({ planId: number, author }),
  'report.sign-off': v.strictObject({ edition: number, role: v.pipe(v.string(), v.minLength(1)), author }),
  'report.check': v.strictObject({ edition: number }),
  'trail.read': nothing,
  'keep.text': v.strictObject({ suggested: v.string(), text: v.string() }),
  'keep.bytes': v.strictObject({ suggested: v.string(), bytes }),
  'keep.copy': v.strictObject({ text: v.string(), html: v.nullable(v.string()) }),
};

export interface NamedInput {
  readonly name: string;
  readonly sha256: string;
}

export interface StartLook {
  readonly version: string;
  readonly recent: readonly { readonly file: string; readonly name: string; readonly opened: string }[];
  readonly project: ProjectLook | null;
}

export interface ProjectPlan {
  readonly planId: number;
  readonly name: string;
  readonly plan: Plan;
  readonly inputs: readonly NamedInput[];
}

/** A project as the window shows it; asked for again after every change. */
export interface ProjectLook {
  readonly name: string;
  readonly file: string;
  readonly readonly: boolean;
  readonly plans: readonly ProjectPlan[];
  /** What undo and redo would take back or do again, by its name; null where there is nothing. */
  readonly undo: string | null;
  readonly redo: string | null;
  readonly draft: string | null;
  /** The coefficients of interest are not to be shown on any screen: covered, and not uncovered since. */
  readonly covered: boolean;
  readonly uncovered: { readonly author: string; readonly time: string } | null;
  readonly decisions: readonly { readonly author: string; readonly time: string; readonly text: string }[];
  /** author: null where a note was kept before authors were asked for. */
  readonly notes: readonly {
    readonly place: string;
    readonly text: string;
    readonly author: string | null;
    readonly time: string;
  }[];
  readonly editions: readonly {
    readonly number: number;
    readonly time: string;
    readonly author: string;
    readonly title: string;
    readonly signOffs: readonly { readonly role: string; readonly author: string; readonly time: string }[];
  }[];
  readonly structuresTried: { readonly count: number; readonly before: number; readonly after: number };
}

/** A file taken in: how it was read, what its columns look like. */
export interface DataPreview {
  readonly name: string;
  readonly sha256: string;
  readonly size: number;
  readonly read: Read;
  readonly found: { readonly encoding: Encoding; readonly delimiter: string } | null;
  readonly rows: number;
  readonly columns: readonly PreviewColumn[];
  /** Why no table can be made of it, in the order found; empty where one was. */
  readonly problems: readonly Problem[];
}

export interface PreviewColumn {
  readonly name: string;
  readonly type: 'number' | 'category' | 'text';
  readonly reason: string;
  readonly distinct: number;
  readonly decimal: '.' | ',' | null;
  readonly group: string | null;
  readonly readsBothWays: boolean;
  readonly tokens: readonly { readonly token: string; readonly rows: number; readonly status: Status | null }[];
  /** The first texts, at most 100. */
  readonly texts: readonly string[];
}

export interface DataComparison {
  readonly added: readonly string[];
  readonly lost: readonly string[];
  readonly changed: readonly {
    readonly label: string;
    readonly column: string;
    readonly before: string;
    readonly after: string;
  }[];
  readonly used: { readonly before: number; readonly after: number };
}

/** An edition made again from its plan and inputs, and compared. */
export interface EditionCheck {
  readonly number: number;
  /** To the last byte; or, for an edition that another version froze, its numbers alone, and the hash of its stored report. */
  readonly how: 'bytes' | 'numbers';
  /** What differs; empty where it rebuilds. */
  readonly problems: readonly Problem[];
}

export interface TrailLook {
  readonly entries: readonly {
    readonly number: number;
    readonly time: string;
    readonly author: string | null;
    readonly action: string;
    readonly facts: Readonly<Record<string, unknown>>;
    readonly hash: string;
  }[];
  /** Head of the chain where it is whole. */
  readonly whole: { readonly head: string; readonly entries: number } | null;
  readonly problems: readonly Problem[];
}

export interface Answers {
  'start.look': StartLook;
  'start.forget': StartLook;
  'project.demo': ProjectLook;
  'project.create': ProjectLook | null;
  'project.open': ProjectLook | null;
  'project.save-as': ProjectLook | null;
  'project.close': null;
  'project.look': ProjectLook | null;
  'data.choose': DataPreview | null;
  'data.take': DataPreview;
  'data.preview': DataPreview;
  'data.look': PackedLook;
  'data.compare': DataComparison;
  'plan.add': { readonly planId: number; readonly job: number; readonly project: ProjectLook };
  'plan.change': { readonly job: number; readonly project: ProjectLook };
  'plan.rename': ProjectLook;
  'plan.undo': ProjectLook;
  'plan.redo': ProjectLook;
  'draft.keep': ProjectLook;
  'fit.ask': { readonly job: number };
  'fit.try': { readonly job: number };
  /** Results as the text that is kept: of many cells it crosses between processes far sooner than the value. */
  'fit.latest': { readonly result: string | null; readonly before: string | null };
  'job.cancel': null;
  'answer.cover': ProjectLook;
  'answer.uncover': ProjectLook;
  'report.pages': { readonly pdf: Uint8Array; readonly document: ReportDocument };
  'report.note': ProjectLook;
  'report.decide': ProjectLook;
  'report.freeze': { readonly number: number; readonly head: string; readonly project: ProjectLook };
  'report.sign-off': ProjectLook;
  'report.check': EditionCheck;
  'trail.read': TrailLook;
  'keep.text': { readonly file: string } | null;
  'keep.bytes': { readonly file: string } | null;
  'keep.copy': null;
}

/** What main tells unasked: of a job, by its number. A newer job of the same plan cancels the older one. */
export type Told =
  | { readonly kind: 'progress'; readonly job: number; readonly step: string; readonly share: number }
  | {
      readonly kind: 'done';
      readonly job: number;
      /** null for a plan that was tried and not kept. */
      readonly planId: number | null;
      /** The result as the text that is kept. */
      readonly outcome: Outcome<string>;
      /** Why the result, which is shown all the same, could not be kept in the project; absent where it was kept or need not be. */
      readonly unkept?: readonly Problem[];
    }
  /** A question that may take long is being answered: it can be stopped by the job's number, as a fit can. */
  | { readonly kind: 'begun'; readonly job: number; readonly question: Asked }
  /** Its answer is on its way. */
  | { readonly kind: 'ended'; readonly job: number }
  /** What has become of the open project's file (`project-gone`, `project-replaced`, `project-overwritten`); empty once it is back. */
  | { readonly kind: 'file'; readonly problems: readonly Problem[] }
  /** The menu was used: the page does what its own control for it does. */
  | { readonly kind: 'command'; readonly command: Command }
  /** A project named on the command line or opened from the desktop: the page may ask for it by 'project.open'. */
  | { readonly kind: 'offered'; readonly file: string }
  /** The window is about to close: what is not yet kept (a draft) is sent now. */
  | { readonly kind: 'leaving' };

type ToldDone = Extract<Told, { kind: 'done' }>;

/** What a job ended with, its result read. */
export type HeardDone = Omit<ToldDone, 'outcome'> & { readonly outcome: Outcome<Result> };

/** What main told, as the page takes it in. */
export type Heard = Exclude<Told, ToldDone> | HeardDone;

export function heardOf(told: Told): Heard {
  return told.kind === 'done' ? { ...told, outcome: readResult(told.outcome) } : told;
}

/** The latest fit and the one before it, read. */
export interface LatestFit {
  readonly result: Result | null;
  readonly before: Result | null;
}

export function readLatest({ result, before }: Answers['fit.latest']): LatestFit {
  const read = (text: string | null) => (text === null ? null : (JSON.parse(text) as Result));
  return { result: read(result), before: read(before) };
}

function readResult(outcome: Outcome<string>): Outcome<Result> {
  return outcome.ok ? done(JSON.parse(outcome.value) as Result) : outcome;
}

export type Asked = keyof typeof asks & keyof Answers;
export type Ask<Q extends Asked> = v.InferOutput<(typeof asks)[Q]>;

/** A question and its payload, as they come from a page that is not trusted. */
export function readAsk(question: string, payload: unknown): Outcome<{ question: Asked; payload: Ask<Asked> }> {
  if (!Object.hasOwn(asks, question)) return refuse('unknown-kind', { found: question, nearest: null });
  const known = question as Asked;
  const parsed = v.safeParse(asks[known], payload);
  if (parsed.success) return done({ question: known, payload: parsed.output });
  const [issue] = parsed.issues;
  return refuse(
    'wrong-type',
    { found: issue.received as JsonType, expected: issue.expected ?? 'something else' },
    v.getDotPath(issue),
  );
}
