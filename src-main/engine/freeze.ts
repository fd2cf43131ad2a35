import { basename } from 'node:path';
import type { EditionFacts } from '@core/index';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { Hooks } from '@core/protocol/source';
import { inProject } from '../project/in-project';
import type { Project } from '../project/project';
import { printedReport, textOfResult } from './edition';
import type { Fetch, Input } from './inputs';
import { type Run, runText, unhurried } from './run-plan';

export interface Freezing {
  /** File of the project; made if absent. */
  readonly project: string;
  /** Asked for, never taken from the computer. */
  readonly author: string;
  /** ISO 8601 in UTC: of the edition, and of every entry that goes with it. */
  readonly time: string;
  /** The plan's name in the project, where it has no title. */
  readonly planName: string;
  readonly hooks?: Hooks;
}

export interface Frozen {
  readonly number: number;
  /** Head of the trail after the edition's entry. */
  readonly head: string;
}

/** Fits a plan and freezes the fit: see `freezeRun`. Refusals: those of the fit first. */
export async function freezePlan({
  text,
  fetch,
  ...freezing
}: Freezing & { readonly text: string; readonly fetch: Fetch }): Promise<Outcome<Frozen>> {
  const run = runText({ text, fetch, ...(freezing.hooks ? { hooks: freezing.hooks } : {}) });
  return run.ok ? freezeRun(run.value, freezing) : run;
}

/**
 * Keeps a run's data, plan and result in a project and freezes them with their printed report as its next edition: all of it, or nothing.
 *
 * A plan of the same name in the project is taken to be this one: its change is a step that can be undone.
 * Refusals: those of the project and the machine, and `cancelled`.
 */
export function freezeRun(run: Run, freezing: Freezing): Promise<Outcome<Frozen>> {
  const { author, time, hooks = unhurried } = freezing;
  return inProject(freezing.project, { clock: () => time }, (project) =>
    freezeKept(project, {
      author,
      name: basename(freezing.project, '.steelyard'),
      keep: () => keep(project, run, freezing),
      print: async (facts) => {
        const report = await printedReport(run.result, facts);
        return hooks.cancelled() ? refuse('cancelled', {}) : done(report);
      },
    }),
  );
}

/** Keeps a fit of an open project and freezes it with its printed report as the next edition: all of it, or nothing. */
export function freezeKept(
  project: Project,
  freezing: {
    readonly author: string;
    /** The project's name, as the report prints it. */
    readonly name: string;
    /** Keeps what is to be frozen; answers the fit's number. */
    readonly keep: () => Outcome<number>;
    readonly print: (facts: EditionFacts) => Promise<Outcome<Uint8Array>>;
  },
): Promise<Outcome<Frozen>> {
  return project.together(async () => {
    const fit = freezing.keep();
    if (!fit.ok) return fit;
    const facts = project.nextEdition(freezing.author, freezing.name);
    const report = await freezing.print(facts);
    if (!report.ok) return report;
    const head = project.freezeEdition({ fit: fit.value, facts, report: report.value });
    return head.ok ? done({ number: facts.number, head: head.value }) : head;
  });
}

/** Keeps inputs, plan and result; answers the fit's number. What the project has already is not kept twice. */
function keep(project: Project, run: Run, { author, planName }: Freezing): Outcome<number> {
  for (const { bytes } of run.inputs) {
    const input = project.keepInput(bytes);
    if (!input.ok) return input;
  }
  const planId = keepPlan(project, run, { author, name: run.plan.title.trim() || planName });
  return planId.ok ? project.keepFit({ planId: planId.value, result: textOfResult(run.result), author }) : planId;
}

function keepPlan(
  project: Project,
  { plan, inputs: files }: Run,
  { author, name }: { readonly author: string; readonly name: string },
): Outcome<number> {
  const inputs = files.map(({ name: file, sha256 }) => ({ name: file, sha256 }));
  const known = project.plans().find((one) => one.name === name.toWellFormed().normalize('NFC').trim());
  if (known === undefined) return project.addPlan({ name, plan, inputs, author });
  const { planId } = known;
  if (known.plan === JSON.stringify(plan) && sameFiles(known.inputs, files)) return done(planId);
  const changed = project.changePlan({ planId, action: 'freeze-plan', plan, inputs, author });
  return changed.ok ? done(planId) : changed;
}

function sameFiles(kept: readonly Omit<Input, 'bytes'>[], files: readonly Input[]): boolean {
  const hashes = new Map(kept.map(({ name, sha256 }) => [name, sha256]));
  return hashes.size === files.length && files.every(({ name, sha256 }) => hashes.get(name) === sha256);
}
