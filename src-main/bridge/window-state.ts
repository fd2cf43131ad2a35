import type { Worker } from 'node:worker_threads';
import type { ProjectLook } from '@core/protocol/bridge';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { type Engine, openEngine } from '../engine/engine';
import { troubleOf } from '../project/write-whole';
import type { Desk } from './desk';
import { Jobs } from './jobs';
import { closeOpen, lostBy, mayChange, type OpenProject, openAt, placeOf } from './open-project';
import { projectLook } from './project-look';
import { projectName, RecentList } from './recent';
import { TakenFiles } from './taken-files';

/** How often the open project's file is looked after, in milliseconds. */
const ROUND = 1500;

/** What one window has open and under way; the handlers of its questions share it. */
export class WindowState {
  readonly desk: Desk;
  readonly recent: RecentList;
  readonly taken = new TakenFiles();
  readonly jobs: Jobs;
  /** Projects named on the command line, which may be opened by name. */
  readonly offered = new Set<string>();
  readonly #start: (() => Worker) | undefined;
  #open: OpenProject | null = null;
  #engine: Engine | null = null;
  #turn: Promise<unknown> = Promise.resolve();
  #rounds: NodeJS.Timeout | undefined;
  #isChanging = false;

  constructor(desk: Desk, start?: () => Worker) {
    this.desk = desk;
    this.recent = new RecentList(desk.profile);
    this.jobs = new Jobs((told) => desk.tell(told));
    this.#start = start;
  }

  /** The engine of the open project; one of its own where none is open. */
  get engine(): Engine {
    const bytesOf = (sha256: string) => this.bytesOf(sha256);
    this.#engine ??= openEngine(this.#start ? { bytesOf, start: this.#start } : { bytesOf });
    return this.#engine;
  }

  /** Bytes of a file that the project keeps, or that was taken in; null where there are none. */
  bytesOf(sha256: string): Uint8Array | null {
    const project = this.#open?.project;
    return this.taken.bytesOf(sha256) ?? project?.inputBytes(sha256) ?? project?.draftBytes(sha256) ?? null;
  }

  /** Whether a file is at hand, without reading it. */
  has(sha256: string): boolean {
    const project = this.#open?.project;
    return (
      this.taken.bytesOf(sha256) !== null ||
      (project !== undefined && (project.hasInput(sha256) || project.hasDraftInput(sha256)))
    );
  }

  get open(): Outcome<OpenProject> {
    return this.#open === null ? refuse('nothing-open', {}) : done(this.#open);
  }

  /** Reads of the open project; what the disk or SQLite refuses comes back as a refusal. */
  async reading<T>(work: (open: OpenProject) => Outcome<T> | Promise<Outcome<T>>): Promise<Outcome<T>> {
    const { open } = this;
    if (!open.ok) return open;
    try {
      return await work(open.value);
    } catch (error) {
      return { ok: false, problems: [troubleOf(error, open.value.file)] };
    }
  }

  /** Changes the open project, one change after the other. Refusals: `read-only`, `project-gone`, and those of the work. */
  changing<T>(work: (open: OpenProject) => Outcome<T> | Promise<Outcome<T>>): Promise<Outcome<T>> {
    return this.#alone(() =>
      this.reading(async (open) => {
        const may = mayChange(open);
        if (!may.ok) return may;
        this.#isChanging = true;
        try {
          return await work(open);
        } finally {
          this.#isChanging = false;
          open.head.note();
        }
      }),
    );
  }

  /** Changes the open project, and looks at it afterwards. */
  async changed(
    work: (open: OpenProject) => Outcome<unknown> | Promise<Outcome<unknown>>,
  ): Promise<Outcome<ProjectLook>> {
    const outcome = await this.changing(work);
    return outcome.ok ? this.look() : outcome;
  }

  /** The open project as it stands; window frame and menu follow. */
  look(): Promise<Outcome<ProjectLook>> {
    return this.reading((open) => {
      const look = projectLook(open);
      this.#show(look);
      return done(look);
    });
  }

  /** Opens a project in the place of the one that is open, which stays where the new one is refused. */
  switchTo(file: string): Promise<Outcome<ProjectLook>> {
    return this.#alone(async () => {
      const isOpen = this.#open !== null && this.#open.place !== null && this.#open.place === placeOf(file);
      if (!isOpen) {
        const next = openAt(file);
        if (!next.ok) return next;
        await this.#leave();
        this.#open = next.value;
        this.#lookAfter(next.value);
        this.recent.add(next.value.file, new Date().toISOString());
      }
      return this.look();
    });
  }

  /** Cancels what is under way and closes the project. */
  async close(): Promise<void> {
    this.jobs.cancelAll();
    await this.#engine?.close(); // what waits for it, such as a freeze, is refused and keeps nothing
    await this.#alone(() => this.#leave());
    await this.jobs.end();
  }

  async #leave(): Promise<void> {
    const engine = this.#engine;
    this.#engine = null;
    this.jobs.cancelAll(); // not waited for: one that is about to keep its fit waits for this turn to end
    await engine?.close();
    clearInterval(this.#rounds);
    if (this.#open !== null) closeOpen(this.#open);
    this.#open = null;
    this.#show(null);
  }

  /** Tells, while a project is open, when its file is taken away or written by others, and when it is back. */
  #lookAfter(open: OpenProject): void {
    let told: string | null = null;
    this.#rounds = setInterval(() => {
      if (this.#isChanging) return;
      const lost = lostBy(open);
      if ((lost?.code ?? null) === told) return;
      told = lost?.code ?? null;
      this.desk.tell({ kind: 'file', problems: lost === null ? [] : [lost] });
    }, ROUND).unref();
  }

  #show(look: ProjectLook | null): void {
    this.desk.show({
      project: look === null ? null : projectName(look.file),
      undo: look?.undo ?? null,
      redo: look?.redo ?? null,
    });
  }

  /** One after the other: a change that waits for something keeps the others waiting. */
  #alone<T>(work: () => Promise<T>): Promise<T> {
    const turn = this.#turn.then(work);
    this.#turn = turn.catch(() => {});
    return turn;
  }
}
