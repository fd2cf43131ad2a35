import type {
  Answers,
  Ask,
  Asked,
  Heard,
  NamedInput,
  ProjectLook,
  ProjectPlan,
  StartLook,
} from '@core/protocol/bridge';
import type { Command } from '@core/protocol/commands';
import {
  type Draft,
  type DraftPlan,
  type DraftSteps,
  draftText,
  noSteps,
  readDraft,
  readSteps,
} from '@core/protocol/draft';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Problem } from '@core/protocol/problems';
import type { CellResult, Result } from '@core/protocol/result';
import { ask, latestFit, listen } from './ask';
import { Jobs } from './jobs.svelte';
import { margin } from './margin.svelte';

/** How long a draft rests before it is kept. */
const REST = 300;
/** So many steps of a draft can be taken back. */
const STEPS = 100;

/** What is kept of the window's work: the open project, the plan looked at, its latest fit. Screens read it and ask it; it alone asks main. */
export class Session {
  version = $state('');
  recent = $state.raw<StartLook['recent']>([]);
  started = $state(false);
  project = $state.raw<ProjectLook | null>(null);
  /** The plan looked at; null while it is the draft. */
  planId = $state<number | null>(null);
  draft = $state.raw<Draft | null>(null);
  result = $state.raw<Result | null>(null);
  /** The fit before the latest, for what moved. */
  before = $state.raw<Result | null>(null);
  /** Label of the cell that is marked on every screen. */
  marked = $state<string | null>(null);
  /** Place in the plan (a pointer) of what was changed last: the one thing set in the accent. */
  changed = $state<string | null>(null);
  /** Trouble of the last thing that was asked, or of the latest fit. */
  problems = $state.raw<readonly Problem[]>([]);
  /** What has become of the project's file while it is open; empty while it stands where it was. */
  lost = $state.raw<readonly Problem[]>([]);
  /** Number of the latest fit asked for. */
  latestJob = $state<number | null>(null);
  readonly jobs = new Jobs();
  #resting: ReturnType<typeof setTimeout> | undefined;
  #steps = $state.raw<DraftSteps>(noSteps);

  /** What is looked at is a plan on its way, not yet one of the project. */
  readonly inDraft = $derived(this.planId === null && this.draft !== null);
  /** What undo and redo would do, by the action's name; null where there is nothing. */
  readonly undoAction: string | null = $derived(
    this.inDraft ? (this.#steps.done.at(-1)?.action ?? null) : (this.project?.undo ?? null),
  );
  readonly redoAction: string | null = $derived(
    this.inDraft ? (this.#steps.undone.at(-1)?.action ?? null) : (this.project?.redo ?? null),
  );

  readonly kept: ProjectPlan | null = $derived(this.project?.plans.find((one) => one.planId === this.planId) ?? null);
  /** The plan as it stands, complete or not. */
  readonly plan: Plan | DraftPlan | null = $derived(
    this.planId === null ? (this.draft?.plan ?? null) : (this.kept?.plan ?? null),
  );
  readonly inputs: readonly NamedInput[] = $derived(
    this.planId === null ? (this.draft?.inputs ?? []) : (this.kept?.inputs ?? []),
  );
  readonly fitting = $derived(this.latestJob === null ? null : (this.jobs.running.get(this.latestJob) ?? null));
  readonly markedCell: CellResult | null = $derived(
    this.result?.cells.find((cell) => cell.label === this.marked) ?? null,
  );

  /** Hears main from now on. onCommand: what a use of the menu does. */
  listen(onCommand: (command: Command) => void): () => void {
    return listen((told) => {
      switch (told.kind) {
        case 'command':
          return onCommand(told.command);
        case 'offered':
          return void this.open(told.file);
        case 'leaving':
          return void this.keepDraftNow();
        case 'file':
          return this.#hearOfFile(told.problems);
        case 'progress':
        case 'begun':
        case 'ended':
          return this.jobs.hear(told);
        case 'done':
          this.jobs.hear(told);
          return this.#done(told);
      }
    });
  }

  /** What is told of the file takes the place of what was told of it before. */
  #hearOfFile(problems: readonly Problem[]): void {
    const before = new Set(this.lost.map(({ code }) => code));
    this.problems = this.problems.filter(({ code }) => !before.has(code));
    this.lost = problems;
  }

  async start(): Promise<void> {
    const look = await this.ask('start.look', {});
    if (look !== null) this.#look(look);
    this.started = true;
  }

  /** Asks main; trouble is shown at the head of the page and gives null. */
  async ask<Q extends Asked>(question: Q, payload: Ask<Q>): Promise<Answers[Q] | null> {
    const outcome = await ask(question, $state.snapshot(payload) as Ask<Q>);
    if (outcome.ok) return outcome.value;
    this.problems = outcome.problems.filter(({ code }) => code !== 'cancelled');
    return null;
  }

  /** Asks for a file by a dialog and takes its bytes in; null where none was chosen, or it was refused. */
  async chooseFile(): Promise<NamedInput | null> {
    const preview = await this.ask('data.choose', {});
    return preview === null ? null : { name: preview.name, sha256: preview.sha256 };
  }

  /** Puts a text on the clipboard; false where it was refused. */
  async copy(text: string, html: string | null): Promise<boolean> {
    const outcome = await ask('keep.copy', { text, html });
    if (!outcome.ok) this.problems = outcome.problems;
    return outcome.ok;
  }

  async openDemo(): Promise<void> {
    await this.keepDraftNow();
    this.#enter(await this.ask('project.demo', {}));
  }

  /** True where a new project was made. */
  async create(): Promise<boolean> {
    await this.keepDraftNow();
    const made = await this.ask('project.create', {});
    this.#enter(made);
    return made !== null;
  }

  async open(file: string | null): Promise<void> {
    await this.keepDraftNow();
    this.#enter(await this.ask('project.open', { file }));
  }

  async saveAs(): Promise<void> {
    const saved = await this.ask('project.save-as', {});
    if (saved === null) return;
    this.lost = [];
    this.#take(saved);
  }

  async close(): Promise<void> {
    await this.keepDraftNow();
    await this.ask('project.close', {});
    this.#leave();
    await this.start();
  }

  async forgetRecent(): Promise<void> {
    const look = await this.ask('start.forget', {});
    if (look !== null) this.recent = look.recent;
  }

  async undo(): Promise<void> {
    await this.#goBack('plan.undo');
  }

  async redo(): Promise<void> {
    await this.#goBack('plan.redo');
  }

  /**
   * Puts a changed plan in the place of the one looked at: the draft, which is only kept, or a plan of the project, which is fitted.
   *
   * action: what was done, as a code of words/screen-actions. at: pointer to what was changed, for the accent.
   */
  async change(
    plan: Plan | DraftPlan,
    { action, at, inputs = null }: { action: string; at: string; inputs?: readonly NamedInput[] | null },
  ): Promise<boolean> {
    if (this.planId === null) {
      if (this.draft === null) return false;
      this.changed = at;
      this.setDraft({ ...this.draft, plan, inputs: inputs ?? this.draft.inputs }, action);
      return true;
    }
    const answer = await this.ask('plan.change', { planId: this.planId, action, plan, inputs: inputs && [...inputs] });
    if (answer === null) return false;
    this.changed = at;
    this.#take(answer.project);
    this.#follow(answer.job);
    return true;
  }

  /** Makes a plan of the draft once its variance is stated, and fits it. */
  async addPlan(plan: Plan | DraftPlan): Promise<boolean> {
    const inputs = [...(this.draft?.inputs ?? this.inputs)];
    const name = freeName(plan.title, this.project?.plans.map((one) => one.name) ?? []);
    const answer = await this.ask('plan.add', { name, plan, inputs });
    if (answer === null) return false;
    this.#take(answer.project);
    this.changed = '/variance';
    this.planId = answer.planId;
    this.result = this.before = null;
    this.#follow(answer.job);
    await this.dropDraft();
    return true;
  }

  async renamePlan(planId: number, name: string): Promise<void> {
    this.#take(await this.ask('plan.rename', { planId, name }));
  }

  /** Looks at another plan of the project; null: the draft. */
  async choosePlan(planId: number | null): Promise<void> {
    this.planId = planId;
    this.result = this.before = this.latestJob = null;
    this.changed = null;
    this.problems = [];
    await this.settle();
  }

  /** Puts a draft in the place of the one before; action: what was done, where it is to be a step that can be taken back. */
  setDraft(draft: Draft | null, action: string | null = null): void {
    if (action === null || this.draft === null || draft === null) this.#steps = noSteps;
    else this.#steps = { done: [...this.#steps.done, { action, draft: this.draft }].slice(-STEPS), undone: [] };
    this.#putDraft(draft);
  }

  #putDraft(draft: Draft | null): void {
    this.draft = draft;
    clearTimeout(this.#resting);
    this.#resting = setTimeout(() => void this.keepDraftNow(), REST);
  }

  async keepDraftNow(): Promise<void> {
    clearTimeout(this.#resting);
    if (this.project === null || this.project.readonly) return;
    const text = this.draft === null ? null : draftText(this.draft, this.#steps);
    if (text !== this.project.draft) this.#take(await this.ask('draft.keep', { text }));
  }

  async dropDraft(): Promise<void> {
    this.draft = null;
    await this.keepDraftNow();
  }

  /** Fits a plan that is not kept; its outcome comes back alone. */
  async tryFit(plan: unknown, inputs: readonly NamedInput[] = this.inputs): Promise<Outcome<Result>> {
    const started = await ask('fit.try', $state.snapshot({ plan, inputs: [...inputs] }) as Ask<'fit.try'>);
    return started.ok ? this.jobs.outcomeOf(started.value.job) : started;
  }

  async cancelFit(): Promise<void> {
    if (this.latestJob !== null) await this.jobs.cancel(this.latestJob);
  }

  /** Takes in an answer that carries the project anew. */
  refresh(look: ProjectLook | null): void {
    this.#take(look);
  }

  mark(label: string | null): void {
    this.marked = label;
  }

  isChanged(at: string): boolean {
    return this.changed !== null && (this.changed === at || this.changed.startsWith(`${at}/`));
  }

  /** Brings the fit on the screen in line with the plan: the latest one if it is of this very plan, else a new one. */
  async settle(): Promise<void> {
    const kept = this.kept;
    if (kept === null) return;
    const { planId } = kept;
    const latest = await latestFit(planId);
    if (this.planId !== planId) return;
    if (!latest.ok) {
      this.problems = latest.problems;
      return;
    }
    const { result, before } = latest.value;
    this.before = before;
    this.result = result;
    if (result !== null && isOf(result, kept)) {
      this.problems = []; // trouble of another plan, or of this one as it stood
      return;
    }
    const begun = await this.ask('fit.ask', { planId });
    if (begun !== null) this.#follow(begun.job);
  }

  /** Steps of a draft are the window's own: nothing of it is in the record yet. */
  #goBackInDraft(way: 'done' | 'undone'): void {
    const { draft } = this;
    const step = this.#steps[way].at(-1);
    if (step === undefined || draft === null) return;
    const other = way === 'done' ? 'undone' : 'done';
    const back = { action: step.action, draft };
    this.#steps = { ...this.#steps, [way]: this.#steps[way].slice(0, -1), [other]: [...this.#steps[other], back] };
    this.changed = null;
    this.#putDraft(step.draft);
  }

  async #goBack(question: 'plan.undo' | 'plan.redo'): Promise<void> {
    if (this.inDraft) return this.#goBackInDraft(question === 'plan.undo' ? 'done' : 'undone');
    const look = await this.ask(question, {});
    if (look === null) return;
    this.#take(look);
    this.changed = null;
    if (this.kept === null) {
      this.planId = look.plans.at(-1)?.planId ?? null;
      this.result = this.before = this.latestJob = null;
    }
    await this.settle();
  }

  #follow(job: number): void {
    this.latestJob = job;
    this.problems = [];
    const early = this.jobs.early(job);
    if (early === null) this.jobs.begun(job);
    else this.#done(early);
  }

  #done({ job, planId, outcome, unkept = [] }: Extract<Heard, { kind: 'done' }>): void {
    if (planId === null || planId !== this.planId) return;
    if (this.latestJob !== null && job < this.latestJob) return;
    if (job === this.latestJob) this.jobs.early(job); // heard, and not to be kept for anybody
    if (outcome.ok) {
      if (this.result !== null && this.result !== outcome.value) this.before = this.result;
      this.result = outcome.value;
      this.problems = unkept;
    } else this.problems = outcome.problems.filter(({ code }) => code !== 'cancelled');
  }

  #look(look: StartLook): void {
    this.version = look.version;
    this.recent = look.recent;
    this.#enter(look.project);
  }

  #enter(look: ProjectLook | null): void {
    if (look === null) return;
    this.#leave();
    this.problems = [];
    this.#take(look);
    this.draft = readDraft(look.draft);
    this.#steps = readSteps(look.draft);
    this.planId = this.draft === null ? (look.plans.at(-1)?.planId ?? null) : null;
    void this.settle();
  }

  #leave(): void {
    void margin.close({ focus: false });
    this.project = this.planId = this.draft = this.result = this.before = this.marked = this.changed = null;
    this.latestJob = null;
    this.#steps = noSteps;
    this.lost = [];
  }

  #take(look: ProjectLook | null): void {
    if (look !== null) this.project = look;
  }
}

function isOf(result: Result, { plan, inputs }: ProjectPlan): boolean {
  if (JSON.stringify(result.plan) !== JSON.stringify(plan)) return false;
  return result.data.files.every(({ name, sha256 }) =>
    inputs.some((one) => one.name === name && one.sha256 === sha256),
  );
}

function freeName(title: string, taken: readonly string[]): string {
  const wanted = title.trim() === '' ? 'Plan' : title.trim();
  let name = wanted;
  for (let n = 2; taken.includes(name); n++) name = `${wanted} (${n})`;
  return name;
}

export const session = new Session();
