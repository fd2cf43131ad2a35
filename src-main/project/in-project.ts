import { existsSync } from 'node:fs';
import { resolve } from 'node:path';
import { type Outcome, refuse } from '@core/protocol/outcome';
import type { Problem } from '@core/protocol/problems';
import { createProject, type Opening, openProject, type Project } from './project';
import { freeOfJournal } from './save-as';
import { guarded } from './store';
import { discard, draftOf, moveIntoPlace } from './write-whole';

/**
 * Works in a project and closes it. One that does not exist is made under another name, and gets its own only after the work was done:
 * refused work leaves no file.
 *
 * Refusals: those of opening and making a project, and of the work.
 */
export async function inProject<T>(
  name: string,
  opening: Opening,
  work: (project: Project) => Promise<Outcome<T>>,
): Promise<Outcome<T>> {
  const file = resolve(name);
  if (existsSync(file)) return closing(openProject(file, opening), work);
  const free = freeOfJournal(file);
  if (!free.ok) return free;
  const draft = draftOf(file);
  try {
    const outcome = await closing(createProject(draft, opening), work);
    const placed = outcome.ok ? place(draft, file, outcome) : outcome;
    return placed.ok ? placed : { ok: false, problems: placed.problems.map((one) => calling(one, draft, file)) };
  } finally {
    discard(draft); // nothing where it got its name
  }
}

async function closing<T>(
  opened: Outcome<Project>,
  work: (project: Project) => Promise<Outcome<T>>,
): Promise<Outcome<T>> {
  if (!opened.ok) return opened;
  try {
    return await work(opened.value);
  } finally {
    opened.value.close();
  }
}

function place<T>(draft: string, file: string, outcome: Outcome<T>): Outcome<T> {
  if (existsSync(file)) return refuse('already-there', { file });
  return guarded(file, () => {
    moveIntoPlace(draft, file);
    return outcome;
  });
}

/** A problem with the draft is one with the file that it was to be. */
function calling(trouble: Problem, draft: string, file: string): Problem {
  const facts = trouble.facts as { readonly file?: string };
  return facts.file === draft ? ({ ...trouble, facts: { ...facts, file } } as Problem) : trouble;
}
