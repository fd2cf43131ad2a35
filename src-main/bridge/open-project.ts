import { accessSync, closeSync, constants, openSync, readSync, statSync } from 'node:fs';
import { dirname } from 'node:path';
import { done, type Outcome, problem, refuse } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';
import type { KeptPlan } from '../project/plans';
import { openProject, type Project } from '../project/project';
import { troubleOf } from '../project/write-whole';

/** How long to wait for another program that has the file, in milliseconds. */
const PATIENCE = 400;

/** A result as one text, and the state of the plan that it is the fit of. */
export interface Shown {
  readonly stateId: number;
  readonly text: string;
}

/** The project that a window has open. */
export interface OpenProject {
  readonly project: Project;
  readonly file: string;
  /** Opened for reading alone: every change is refused. */
  readonly readonly: boolean;
  /** Which file of the disk it is. */
  readonly place: string | null;
  /** The file's head as this window wrote it last. */
  readonly head: Head;
  /** Of each plan the fit that the screen shows, and the one shown before it. */
  readonly shown: Map<number, { readonly now: Shown; readonly before: Shown | null }>;
}

/**
 * Opens a project for this window alone; where it may not be written, for reading alone.
 *
 * Refusals: those of `openProject`; `file-in-use` where another window or program has it open.
 */
export function openAt(file: string): Outcome<OpenProject> {
  const readonly = !mayWrite(file);
  const opened = openProject(file, readonly ? { readonly, patience: PATIENCE } : { alone: true, patience: PATIENCE });
  if (!opened.ok) return opened;
  const project = opened.value;
  try {
    const place = placeOf(file);
    return done({ project, file: project.file, readonly, place, head: new Head(file), shown: new Map() });
  } catch (error) {
    project.close();
    return { ok: false, problems: [troubleOf(error, file)] };
  }
}

/** Closes a project; everything accepted is in its file. */
export function closeOpen({ project, head }: OpenProject): void {
  project.close();
  head.close();
}

/**
 * The first bytes of a project file, which hold SQLite's counters of changes and pages.
 *
 * SQLite does not look whether others write to a file that it holds alone: what was copied over it would pass unseen. The file is held open,
 * since closing it anywhere in this process would give up SQLite's lock.
 */
class Head {
  readonly #descriptor: number;
  #seen: string;

  constructor(file: string) {
    this.#descriptor = openSync(file, 'r');
    this.#seen = this.#read();
  }

  /** True while nobody else has written to it. */
  get isOurs(): boolean {
    return this.#read() === this.#seen;
  }

  /** To be called after every change of our own. */
  note(): void {
    this.#seen = this.#read();
  }

  close(): void {
    closeSync(this.#descriptor);
  }

  #read(): string {
    const bytes = Buffer.alloc(100);
    readSync(this.#descriptor, bytes, 0, 100, 0);
    return bytes.toString('hex');
  }
}

/** SQLite writes its journal beside the file: the folder counts too. */
function mayWrite(file: string): boolean {
  try {
    accessSync(file, constants.W_OK);
    accessSync(dirname(file), constants.W_OK);
    return true;
  } catch (error) {
    return (error as { code?: string }).code === 'ENOENT'; // told by the opening itself
  }
}

/** Which file stands under a name; null where none does. */
export function placeOf(file: string): string | null {
  try {
    const { dev, ino } = statSync(file, { bigint: true });
    return `${dev}:${ino}`;
  } catch {
    return null;
  }
}

/** Refuses a change of a project that may not be written, or no longer stands where it was opened. */
export function mayChange(open: OpenProject): Outcome<null> {
  if (open.readonly) return refuse('read-only', { file: open.file });
  const lost = lostBy(open);
  return lost === null ? done(null) : { ok: false, problems: [lost] };
}

/** What has become of the file of an open project: removed, replaced, or written by others; null where it stands as it was left. */
export function lostBy({ file, readonly, place, head }: OpenProject): Problem | null {
  const now = placeOf(file);
  if (now === null) return problem('project-gone', { file });
  if (now !== place) return problem('project-replaced', { file });
  // Who reads alone keeps nobody from writing: SQLite itself sees what others wrote.
  return readonly || head.isOurs ? null : problem('project-overwritten', { file });
}

/** A plan as it stands in the project. Refusal: no such plan. */
export function planOf({ project }: OpenProject, planId: number): Outcome<KeptPlan> {
  const plan = project.plans().find((one) => one.planId === planId);
  return plan === undefined ? refuse('unknown-plan', { found: planId }) : done(plan);
}
