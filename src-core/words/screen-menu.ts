import type { Command } from '../protocol/commands';

/** What each command is called, in the menu and on the page. */
export const commandNames: Readonly<Record<Command, string>> = {
  'project.create': 'New project …',
  'project.open': 'Open a project …',
  'project.demo': 'Open the demo',
  'project.save-as': 'Save a copy as …',
  'project.close': 'Close the project',
  'plan.undo': 'Undo',
  'plan.redo': 'Redo',
  'report.freeze': 'Freeze an edition …',
  'job.cancel': 'Stop fitting',
  'go.data': 'Data',
  'go.variance': 'Variance',
  'go.fit': 'Fit',
  'go.report': 'Report',
  'go.trail': 'Trail',
};

/** Headings of the menu. */
export const menuNames = {
  file: 'File',
  edit: 'Edit',
  places: 'Places',
  view: 'View',
} as const;

export const programName = 'Steelyard';

/** What stands in the window's frame: the project's name, never its folder. */
export function windowTitle(project: string | null): string {
  return project === null ? programName : `${project} – ${programName}`;
}

/** What the choosers for files call the kinds that they list. */
export const fileKinds = {
  project: 'Steelyard project',
  data: 'Table of cells',
  all: 'Any file',
} as const;

/** Said once where the page was lost twice in a row. */
export const pageLost =
  'The window stopped working and could not be brought back. Everything accepted so far is in the project file; start the program again to go on.';
