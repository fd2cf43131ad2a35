import { existsSync, mkdirSync } from 'node:fs';
import { join, resolve } from 'node:path';
import type { ProjectLook } from '@core/protocol/bridge';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { fileNames } from '@core/words/screen-files';
import { createProject } from '../project/project';
import { troubleOf } from '../project/write-whole';
import type { HandlersOf } from './answer';
import { makeDemo } from './demo';
import { lostBy } from './open-project';
import { projectName } from './recent';
import type { WindowState } from './window-state';

const ENDING = '.steelyard';

type Questions =
  | 'project.demo'
  | 'project.create'
  | 'project.open'
  | 'project.save-as'
  | 'project.close'
  | 'project.look';

export function projectHandlers(state: WindowState): HandlersOf<Questions> {
  return {
    'project.demo': () => openDemo(state),
    'project.create': () => create(state),
    'project.open': ({ file }) => open(state, file),
    'project.save-as': () => saveAs(state),
    'project.close': async () => {
      await state.close();
      return done(null);
    },
    'project.look': async () => (state.open.ok ? state.look() : done(null)),
  };
}

/** A fresh copy of the demo in the profile folder, under a name that is free: an earlier one may hold somebody's work. */
async function openDemo(state: WindowState): Promise<Outcome<ProjectLook>> {
  const folder = join(state.desk.profile, 'demo');
  try {
    mkdirSync(folder, { recursive: true });
  } catch (error) {
    return { ok: false, problems: [troubleOf(error, folder)] };
  }
  const file = freeFile(folder, fileNames.demo);
  const made = await makeDemo(file, join(state.desk.resources, 'demo'));
  return made.ok ? state.switchTo(file) : made;
}

function freeFile(folder: string, name: string): string {
  for (let attempt = 1; ; attempt++) {
    const file = join(folder, `${name}${attempt === 1 ? '' : ` ${attempt}`}${ENDING}`);
    if (!existsSync(file)) return file;
  }
}

async function create(state: WindowState): Promise<Outcome<ProjectLook | null>> {
  const chosen = await state.desk.choosePlace('project', `${fileNames.newProject}${ENDING}`);
  if (chosen === null) return done(null);
  const file = withEnding(chosen);
  const made = createProject(file);
  if (!made.ok) return made;
  made.value.close();
  return state.switchTo(file);
}

async function open(state: WindowState, file: string | null): Promise<Outcome<ProjectLook | null>> {
  if (file === null) {
    const chosen = await state.desk.chooseFile('project');
    return chosen === null ? done(null) : state.switchTo(chosen);
  }
  // A path from the page is not taken on trust: it opens what was opened before or named on the command line.
  const known = state.recent.has(file) || state.offered.has(resolve(file));
  return known ? state.switchTo(file) : refuse('no-project', { file });
}

/** Writes the project as it stands to another file, and goes on there. It works where the file of the open one is gone, too. */
async function saveAs(state: WindowState): Promise<Outcome<ProjectLook | null>> {
  const { open: now } = state;
  if (!now.ok) return now;
  const chosen = await state.desk.choosePlace('project', `${projectName(now.value.file)}${ENDING}`);
  if (chosen === null) return done(null);
  const file = withEnding(chosen);
  if (file !== resolve(chosen) && existsSync(file)) return refuse('already-there', { file });
  const saved = await state.reading((open) => {
    const lost = lostBy(open);
    // What others wrote into the file is not the project that stands on the screen.
    return lost?.code === 'project-overwritten' ? { ok: false, problems: [lost] } : open.project.saveAs(file);
  });
  return saved.ok ? state.switchTo(file) : saved;
}

function withEnding(file: string): string {
  return resolve(file.endsWith(ENDING) ? file : `${file}${ENDING}`);
}
