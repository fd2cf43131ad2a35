import type { DataComparison, DataPreview, NamedInput } from '@core/protocol/bridge';
import { proposeRoles, type RoleProposal, withRole, withUse } from '@core/protocol/column-roles';
import { type DataLook, unpackLook } from '@core/protocol/data-look';
import { type Draft, type DraftPlan, draftOf } from '@core/protocol/draft';
import { filePlaces } from '@core/protocol/edit-data';
import { LARGEST_SENT } from '@core/protocol/limits';
import { done, type Outcome, problem } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Problem } from '@core/protocol/problems';
import { HEAD_BYTES, isProject } from '@core/protocol/project-mark';
import { ask } from './ask';
import { session } from './session.svelte';

/** So many previews are kept. */
const KNOWN = 12;

function wayOf({ name, sha256, read }: Pick<DataPreview, 'name' | 'sha256' | 'read'>): string {
  return JSON.stringify([name, sha256, read]);
}

/** What a file that was brought in is compared with, before it takes the place of the plan's own. */
interface Replacement {
  readonly preview: DataPreview;
  readonly inputs: readonly NamedInput[];
  readonly comparison: DataComparison;
}

/** The data as they are looked at before any fit: how each file reads, which rows become cells, what stands in the way. */
class DataDesk {
  /** Of each file of the plan, by its name. */
  previews = $state.raw<Readonly<Record<string, DataPreview>>>({});
  look = $state.raw<DataLook | null>(null);
  problems = $state.raw<readonly Problem[]>([]);
  busy = $state<string | null>(null);
  looking = $state(false);
  /** Looking was stopped by hand. */
  stopped = $state(false);
  /** A file that was brought in while there is a plan: its purpose is to be said. */
  arrived = $state.raw<DataPreview | null>(null);
  replacement = $state.raw<Replacement | null>(null);
  /** What was proposed for the main file's columns. */
  proposals = $state.raw<readonly RoleProposal[]>([]);
  #turn = 0;
  /** The previews of late, by file and way of reading: one that is known is not asked for again. */
  readonly #known = new Map<string, DataPreview>();

  #keep(preview: DataPreview): void {
    if (preview.problems.length > 0) return; // they may be gone by the next time
    const way = wayOf(preview);
    this.#known.delete(way);
    this.#known.set(way, preview);
    for (const oldest of [...this.#known.keys()].slice(0, -KNOWN)) this.#known.delete(oldest);
  }

  /** Looks at the plan's files anew; what comes of an older look is dropped. */
  async follow(plan: Plan | DraftPlan | null, inputs: readonly NamedInput[]): Promise<void> {
    const turn = ++this.#turn;
    this.looking = this.stopped = false;
    for (const question of ['data.preview', 'data.look'] as const) void session.jobs.cancelAsked(question);
    if (plan === null) {
      this.previews = {};
      this.look = null;
      this.problems = this.proposals = [];
      return;
    }
    const previews: Record<string, DataPreview> = {};
    const problems: Problem[] = [];
    for (const { file, read } of filePlaces(plan)) {
      const sha256 = inputs.find(({ name }) => name === file)?.sha256;
      if (sha256 === undefined) continue;
      const known = this.#known.get(wayOf({ name: file, sha256, read }));
      const outcome = known ? done(known) : await ask('data.preview', $state.snapshot({ name: file, sha256, read }));
      if (turn !== this.#turn) return;
      if (outcome.ok) {
        previews[file] = outcome.value;
        this.#keep(outcome.value);
      } else if (isCancelled(outcome)) return this.#stop();
      else problems.push(...outcome.problems);
      if (outcome.ok) problems.push(...outcome.value.problems);
    }
    this.previews = previews;
    this.proposals = proposeRoles(previews[plan.data.file]?.columns ?? []);
    await this.#lookAt(plan, inputs, { turn, problems });
  }

  async #lookAt(
    plan: Plan | DraftPlan,
    inputs: readonly NamedInput[],
    { turn, problems }: { turn: number; problems: readonly Problem[] },
  ): Promise<void> {
    if (problems.length > 0 || (plan.roles.outcome === null && plan.roles.count === null)) {
      this.look = null;
      this.problems = problems;
      return;
    }
    this.looking = true;
    const outcome = await ask('data.look', $state.snapshot({ plan: lookable(plan), inputs: [...inputs] }) as never);
    if (turn !== this.#turn) return;
    this.looking = false;
    if (isCancelled(outcome)) return this.#stop();
    this.look = outcome.ok ? unpackLook(outcome.value) : null;
    this.problems = outcome.ok ? [] : outcome.problems;
  }

  #stop(): void {
    this.look = null;
    this.problems = [];
    this.stopped = true;
  }

  /** A file as it was dropped, or a text as it was pasted. */
  async takeFile(file: File): Promise<void> {
    const head = new Uint8Array(await file.slice(0, HEAD_BYTES).arrayBuffer());
    if (isProject(head)) session.problems = [problem('is-a-project', { file: file.name, offered: false })];
    else if (file.size > LARGEST_SENT)
      session.problems = [problem('file-too-large', { file: file.name, size: file.size, limit: LARGEST_SENT })];
    else await this.#take(file.name, new Uint8Array(await file.arrayBuffer()));
  }

  async takeText(name: string, text: string): Promise<void> {
    await this.#take(name, new TextEncoder().encode(text));
  }

  async #take(name: string, bytes: Uint8Array<ArrayBuffer>): Promise<void> {
    if (session.project === null && !(await session.create())) return;
    this.busy = name;
    const preview = await session.ask('data.take', { name, bytes });
    this.busy = null;
    this.#arrive(preview);
  }

  async choose(): Promise<void> {
    this.#arrive(await session.ask('data.choose', {}));
  }

  #arrive(preview: DataPreview | null): void {
    if (preview === null) return;
    this.#keep(preview);
    if (session.plan === null) this.begin(preview);
    else this.arrived = preview;
  }

  /** A new plan from a file, with what its columns seem to be. */
  begin(preview: DataPreview): void {
    this.arrived = null;
    void session.choosePlan(null);
    session.setDraft(proposed(preview));
  }

  /** Compares a file with the plan's own data, under the plan's own name for it. */
  async compare(preview: DataPreview): Promise<void> {
    this.arrived = null;
    const { kept } = session;
    if (kept === null) {
      this.#replaceInDraft(preview);
      return;
    }
    const inputs = [{ name: kept.plan.data.file, sha256: preview.sha256 }];
    const comparison = await session.ask('data.compare', { planId: kept.planId, inputs });
    if (comparison !== null) this.replacement = { preview, inputs, comparison };
  }

  #replaceInDraft({ name, sha256 }: DataPreview): void {
    const { draft } = session;
    if (draft === null) return;
    const old = draft.plan.data.file;
    const inputs = [{ name, sha256 }, ...draft.inputs.filter((one) => one.name !== old && one.name !== name)];
    const plan = { ...draft.plan, data: { ...draft.plan.data, file: name } };
    session.setDraft({ ...draft, plan, inputs }, 'replace-data');
  }

  async acceptReplacement(): Promise<void> {
    const { replacement } = this;
    const { plan, inputs } = session;
    if (replacement === null || plan === null) return;
    const { name, sha256 } = replacement.preview;
    const old = plan.data.file;
    const others = inputs.filter((one) => one.name !== old);
    // The new file keeps its own name, unless another file of the plan has it.
    const called = others.some((one) => one.name === name) ? old : name;
    const changed = await session.change(
      { ...plan, data: { ...plan.data, file: called } },
      { action: 'replace-data', at: '/data/file', inputs: [...others, { name: called, sha256 }] },
    );
    if (changed) this.replacement = null;
  }

  accept(): void {
    if (session.draft !== null) session.setDraft({ ...session.draft, accepted: true }, 'accept-data');
  }

  /** Every column at hand: the files', then the derived ones. */
  get columns(): readonly string[] {
    if (this.look !== null) return this.look.columns;
    const own = Object.values(this.previews).flatMap(({ columns }) => columns.map(({ name }) => name));
    return [...new Set([...own, ...(session.plan?.data.derive.map(({ name }) => name) ?? [])])];
  }
}

function isCancelled(outcome: Outcome<unknown>): boolean {
  return !outcome.ok && outcome.problems.some(({ code }) => code === 'cancelled');
}

/** A plan whose data can be looked at: before its variance is stated any structure will do, since none is fitted. */
function lookable(plan: Plan | DraftPlan): unknown {
  if (plan.variance !== null) return plan;
  return { ...plan, variance: { parts: [{ kind: 'constant' }] }, estimate: null, beside: [], questions: [] };
}

function proposed(preview: DataPreview): Draft {
  const draft = draftOf({ name: preview.name, sha256: preview.sha256 });
  const order = preview.columns.map(({ name }) => name);
  let { roles, terms } = draft.plan;
  for (const { column, role, use } of proposeRoles(preview.columns)) {
    if (role !== 'survey-weight') roles = withRole(roles, { column, role, order });
    terms = withUse(terms, column, use);
  }
  return { ...draft, plan: { ...draft.plan, roles, terms, title: titleOf(preview.name) } };
}

function titleOf(file: string): string {
  return file.replace(/\.[^.]*$/, '').replace(/[_-]+/g, ' ');
}

export const desk = new DataDesk();
