import { number } from './numbers';

/** The five places, in the order of the work. */
export const placeTexts = {
  data: 'Data',
  variance: 'Variance',
  fit: 'Fit',
  report: 'Report',
  trail: 'Trail',
} as const;

export const shellTexts = {
  program: 'Steelyard',
  places: 'Places',
  statement: 'Statement of the variance',
  skip: 'Skip to the page',
  close: 'Close',
  stop: 'Stop',
  dismiss: 'Put away',
  undoNothing: 'Nothing to undo',
  redoNothing: 'Nothing to redo',
  readonly: 'This file cannot be written: what you change is not kept. Save a copy to go on.',
  draft: 'Unfinished plan',
  projectTitle: 'This project',
  planTitle: 'Plans of the project',
  planName: 'Name of this plan',
  rename: 'Rename',
  saveCopy: 'Save a copy as …',
  closeProject: 'Close the project',
  kept: 'Every accepted change is in the file already; there is nothing to save.',
  openThat: 'Open it as a project',
  openOther: 'Open a project …',
  trouble: 'This needs your attention',
  emptyPlace: 'Nothing to show here yet.',
  needsData: 'There are no data yet. Bring a table in under Data first.',
} as const;

/** What undo or redo would do. */
export function undoText(action: string | null): string {
  return action === null ? shellTexts.undoNothing : `Undo: ${actionText(action)}`;
}

export function redoText(action: string | null): string {
  return action === null ? shellTexts.redoNothing : `Redo: ${actionText(action)}`;
}

const actions: ReadonlyMap<string, string> = new Map([
  ['add-plan', 'a new plan'],
  ['rename-plan', 'the plan’s name'],
  ['freeze-plan', 'the plan of an edition'],
  ['set-note', 'a note'],
  ['change-note', 'a note'],
  ['change-roles', 'what the columns are'],
  ['change-reading', 'how the file is read'],
  ['change-statuses', 'what a token means'],
  ['change-units', 'a unit'],
  ['change-joins', 'the joined files'],
  ['change-derived', 'a derived column'],
  ['change-omissions', 'a rule of omission'],
  ['change-title', 'the title'],
  ['change-plan', 'the plan'],
  ['replace-data', 'the data replaced'],
  ['accept-data', 'the data accepted'],
  ['change-variance', 'the variance'],
  ['change-terms', 'the terms'],
  ['change-questions', 'a question'],
  ['change-beside', 'the structures beside'],
  ['change-inference', 'the kind of error'],
  ['change-estimate', 'the method'],
  ['change-report', 'the report’s settings'],
  ['change-matters', 'the smallest difference that matters'],
  ['change-target', 'what the weights aim at'],
  ['change-scale', 'the scale of the outcome'],
  ['change-tests', 'what the tests look at'],
  ['change-limits', 'what is known of rounded or suppressed values'],
]);

/** An action by its code; one that this version does not know is told as it stands. */
export function actionText(action: string): string {
  return actions.get(action) ?? action.replaceAll('-', ' ');
}

const steps: ReadonlyMap<string, string> = new Map([
  ['read', 'Reading the files'],
  ['fit', 'Fitting'],
  ['evidence', 'Testing the structure'],
  ['sensitivity', 'Trying what could overturn it'],
  ['report', 'Setting the pages'],
  ['look', 'Looking at the rows'],
  ['compare', 'Comparing the cells'],
  ['data.choose', 'Reading the file'],
  ['data.take', 'Reading the file'],
  ['data.preview', 'Reading the file'],
  ['data.look', 'Looking at the rows'],
  ['data.compare', 'Comparing the cells'],
  ['report.pages', 'Setting the pages'],
  ['report.freeze', 'Freezing the edition'],
  ['report.check', 'Making the edition again'],
]);

/** What a job is doing, with how far it has come: "Fitting, 40 %". */
export function progressText(step: string | null, share: number): string {
  const what = step === null ? 'Fitting' : (steps.get(step) ?? `Fitting: ${step.replaceAll('-', ' ')}`);
  return share > 0 ? `${what}, ${number(100 * share, { decimals: 0 })} %` : `${what} …`;
}
