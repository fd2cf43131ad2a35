import { isLinked } from '../protocol/linked';
import type { Result } from '../protocol/result';
import { usedText } from './data';
import { count, list, plural, quoted } from './numbers';
import { structureName } from './structures';

/** Under the title: what this is, of how many cells, from which version. */
export function subtitle({ data, made }: Pick<Result, 'data' | 'made'>): string {
  return `Regression of cell means · ${usedText(data)} · Steelyard ${made.version}`;
}

/** Which edition a report is. */
export function editionLine(of: {
  readonly number: number;
  readonly time: string;
  readonly author: string;
  readonly project?: string | null;
}): string {
  const project = of.project == null || of.project === '' ? '' : ` of the project ${quoted(of.project)}`;
  return `Edition ${count(of.number)}${project}, frozen ${timeText(of.time)} by ${of.author}.`;
}

/** Where a report belongs to no edition. */
export const noEdition =
  'This report belongs to no frozen edition: it was printed from a plan, and no trail stands behind it. Its figures can be had again from the plan and the files named in the data section.';

/** "2026-03-01T09:30:00Z" as "2026-03-01 09:30 UTC"; anything else as it stands. */
export function timeText(time: string): string {
  const parts = /^(\d{4}-\d{2}-\d{2})T(\d{2}:\d{2})(?::\d{2}(?:\.\d+)?)?Z$/.exec(time);
  return parts === null ? time : `${parts[1]} ${parts[2]} UTC`;
}

/** The head of the trail, and what it is good for. */
export function headText(head: string): string {
  return `Head of the trail: ${head}. The chain of entries shows an alteration only against a head that is kept elsewhere, such as on this page.`;
}

/** The foot of the page. */
export function footLeft(title: string): string {
  return title === '' ? 'Steelyard report' : title;
}

export const pagePattern = 'page {n} of {m}';

export function footRight(edition: { readonly number: number } | null, version: string): string {
  return edition === null ? `Steelyard ${version}` : `edition ${count(edition.number)} · Steelyard ${version}`;
}

export const questionLead = (question: string): string => `Question. ${question}`;

/** Opens the section on rivals. */
export function besideLead({ plan, beside }: Pick<Result, 'plan' | 'beside'>): string {
  const names = beside.map(({ variance }) => quoted(structureName(variance)));
  return `The same terms were fitted to the same cells under ${plural(beside.length, 'other structure')}: ${list(names)}. Each has its own weights, and variance parameters of its own where it has any.${isLinked(plan) ? ' They weight the working response of the stated fit, on which no other likelihood can be compared with that of the counts.' : ''}`;
}

export const noRivals =
  'The plan names no structure beside the stated one, so that what another weighting would have concluded, and at what price, is not told.';

export const noOrder =
  'Likelihoods are compared at each structure’s own estimates; restricted ones can be compared since terms and units are the same.';

export const evidenceLead =
  'Tests can contradict a structure; none can prove it. What each would have noticed stands beside it.';

export const influenceLead = 'Leaving out a cell holds the variance parameters; only a free scale is estimated again.';

export function cellsNote(shown: number, all: number): string {
  const meant = 'error dev.: root of the stated error variance; stud. residual: studentised without the cell itself.';
  return `${meant} ${shown === all ? 'Every quantity of the cells is in cells.csv.' : `All ${count(all)} cells, with every quantity, are in cells.csv.`}`;
}

export function omittedMore(left: number): string {
  return `and ${plural(left, 'further row')}; result.json lists them all.`;
}

export function leftOutByPlan(keys: readonly string[]): string {
  return `The plan leaves out of this report what the result holds under ${list(keys.map(quoted))}.`;
}

export const noDecisions = 'No decision was recorded.';

export const signRoles: readonly string[] = ['\nAnalyst', '\nReviewer', '\nCustodian of the data'];
export const signBlank = '\n. . . . . . . . . . . . . . . .';

export function overturnMore(left: number): string {
  return `and ${plural(left, 'smaller shift')}; result.json lists them all.`;
}

export function testsCounted(of: { readonly passed: number; readonly all: number }): string {
  return of.passed === of.all
    ? `The program ran ${plural(of.all, 'check')} on these data after the fit; all passed.`
    : `The program ran ${plural(of.all, 'check')} on these data after the fit; ${count(of.all - of.passed)} failed.`;
}

export const logScaleRemark =
  'Coefficients are differences of natural logarithms: a difference of 0.1 is about 10.5 % more, one of −0.1 about 9.5 % less.';

export const logitScaleRemark =
  'Coefficients are differences of logits, the logarithms of odds: a difference of 0.1 makes odds about 10.5 % larger; a share near one half moves by about a quarter of the difference.';

export const productRemark =
  'Terms that share a column are to be read together: one cannot move while the others are held.';

export const squareNote =
  'Rows: the structure taken as true, with its parameters as fitted. Columns: whose weights are used. In each row the smallest error stands where the weights are those of the truth.';

export const withheldNote =
  'A p value on fewer than 4 degrees of freedom cannot be relied on and is withheld; result.json holds it.';

export const sharedTests = (by: readonly string[]): string =>
  `What was not tested: dependence other than ${list(by)}, and bias of the outcome itself.`;

export const untestedDependence = 'What was not tested: whether cells move together, and bias of the outcome itself.';

export const untestedBeyondStated =
  'What was not tested: whether cells go together in other ways than the structure states, and bias of the outcome itself.';
