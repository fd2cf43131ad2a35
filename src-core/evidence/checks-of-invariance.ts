import { type Covariance, takeCovariance } from '../algebra/covariance';
import { fitStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import type { Near } from '../estimate/near';
import type { Structure } from '../model/structure';
import { structureOf } from '../model/structure-of';
import { type Decimals, scaledBy, takeRows } from '../numbers/decimals';
import type { SelfCheckCode } from '../protocol/cautions';
import type { Part, Plan } from '../protocol/plan';
import type { SelfCheck } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { takeCells, takeDesign } from './subset';

const TIMES = 10;
const COLUMN_TIMES = 1000;
/** Work G k^2 beyond which only the rows are reversed: the others are the same kind of refit again. */
const WORK = 2e7;
/** Where variance parameters are searched for, two searches stop within this of each other. */
const SEARCHED = 1e-6;

interface Sources {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly hooks?: Hooks;
}

/** What a refit starts from, and by what each coefficient and its error are then expected to be multiplied. */
interface Changed {
  readonly check: SelfCheckCode;
  readonly cells: Cells;
  readonly response: Decimals;
  readonly design: Fitted['design'];
  readonly weighting: Covariance | null;
  readonly timesEstimate: (j: number) => number;
  readonly timesError: (j: number) => number;
  /** What all variances are expected to be multiplied by. */
  readonly timesVariance: number;
}

/** Changes that must leave the coefficients and their errors as they were, or multiply them by a known factor. */
export function invarianceChecks(sources: Sources): SelfCheck[] {
  const { fitted, cells, hooks } = sources;
  if (!fitted.errors.every((error) => error > 0)) return [];
  const k = fitted.coefficients.length;
  const changes = [rowsReversed(sources)];
  if (cells.count * k * k <= WORK)
    changes.push(
      ...sizesScaled(sources),
      ...errorsScaled(sources),
      ...outcomeUnit(sources),
      ...columnUnit(sources),
      ...cellSplit(sources),
    );
  return changes.flatMap((changed, i) => {
    if (hooks?.cancelled()) return [];
    hooks?.progress('sensitivity', i / changes.length);
    return [judged(sources, changed)];
  });
}

function judged(sources: Sources, changed: Changed): SelfCheck {
  const { fitted, cells, plan } = sources;
  const { check } = changed;
  const structure = structureOf({ variance: plan.variance, cells: changed.cells });
  const searched = fitted.estimatedParameters > 0 && fitted.scale === null;
  const limit = Math.max(searched || fitted.estimatedParameters > 1 ? SEARCHED : 1e-9, fitted.condition * 1e-13);
  if (!structure.ok) return { check, passed: false, figure: null };
  // From where the fit ended; what is not found again from there is searched for from every start.
  const near = { structure: fitted.structure, theta: fitted.theta, times: changed.timesVariance };
  const atOnce =
    cells.count === changed.cells.count ? refitted(sources, changed, { structure: structure.value, near }) : null;
  const figure =
    atOnce !== null && atOnce <= limit ? atOnce : refitted(sources, changed, { structure: structure.value });
  return { check, passed: figure !== null && figure <= limit, figure };
}

/** By how much a refit departs from the law; null where it cannot be had. */
function refitted(
  { fitted, plan, hooks }: Sources,
  changed: Changed,
  of: { readonly structure: Structure; readonly near?: Near },
): number | null {
  const { response, design, weighting } = changed;
  const { estimate } = plan;
  const again = fitStructure({ response, design, estimate, weighting, ...of, ...(hooks && { hooks }) });
  return again.ok ? departure(fitted, again.value, changed) : null;
}

/** The worst relative departure of estimates and errors from what the law says. */
function departure(fitted: Fitted, again: Fitted, { timesEstimate, timesError }: Changed): number {
  let worst = 0;
  for (const [j, b] of fitted.coefficients.entries()) {
    const se = fitted.errors[j] as number;
    const moved = (again.coefficients[j] as number) / timesEstimate(j) - b;
    const ratio = (again.errors[j] as number) / timesError(j) / se;
    const found = Math.max(Math.abs(moved) / Math.max(Math.abs(b), se), Math.abs(ratio - 1));
    worst = Number.isFinite(found) ? Math.max(worst, found) : Number.MAX_VALUE;
  }
  return worst;
}

const once = (): number => 1;
const tenfold = (): number => TIMES;

function unchanged({ fitted, cells }: Sources, check: SelfCheckCode): Changed {
  const { design } = fitted;
  const response = responseOf(fitted);
  const weighting = fitted.targetIsStructure ? null : fitted.weighting;
  return { check, cells, response, design, weighting, timesEstimate: once, timesError: once, timesVariance: 1 };
}

/** What the fit was made from: under a link not the working response. */
function responseOf({ response, fixedPoint }: Fitted): Decimals {
  return fixedPoint?.link?.observed ?? response;
}

function rowsReversed(sources: Sources): Changed {
  const { fitted, cells } = sources;
  const rows = Array.from({ length: cells.count }, (_, g) => cells.count - 1 - g);
  return { ...unchanged(sources, 'rows-reversed'), ...takenAt(fitted, cells, rows) };
}

function takenAt(
  fitted: Fitted,
  cells: Cells,
  rows: readonly number[],
): Pick<Changed, 'cells' | 'response' | 'design' | 'weighting'> {
  return {
    cells: takeCells(cells, rows),
    response: takeRows(responseOf(fitted), rows),
    design: takeDesign(fitted.design, rows),
    weighting: fitted.targetIsStructure ? null : takeCovariance(fitted.weighting, rows),
  };
}

/** Parts whose variances have the outcome's unit and cannot be given another. */
const boundToUnit: ReadonlySet<Part['kind']> = new Set(['matrix', 'binomial', 'counts']);

/** All sizes times ten: a free scale takes it up. */
function sizesScaled(sources: Sources): Changed[] {
  const { cells, plan } = sources;
  const scaled = plan.variance.parts.some(({ kind }) => kind === 'per-size' || kind === 'size-power');
  if (!scaled || !nothingFixed(plan)) return [];
  const times = (values: Float64Array | null): Float64Array | null => values?.map((n) => n * TIMES) ?? null;
  const changed = { ...cells, size: times(cells.size), effectiveSize: times(cells.effectiveSize) };
  return [{ ...unchanged(sources, 'sizes-scaled'), cells: changed }];
}

/** All given errors times ten: a free scale takes it up, a fixed one hands it on to the coefficients' errors. */
function errorsScaled(sources: Sources): Changed[] {
  const given = givenOf(sources.plan);
  if (!given || !nothingFixed(sources.plan)) return [];
  const alone = sources.plan.variance.parts.length === 1;
  // A correlation that is estimated beside a scale that is set answers to the size of the errors.
  const unknown = sources.fitted.estimatedParameters > 0;
  if (given.scale === 'fixed' && (!alone || unknown)) return [];
  const cells = errorsTimes(sources.cells, TIMES);
  const timesError = given.scale === 'fixed' ? tenfold : once;
  return [{ ...unchanged(sources, 'errors-scaled'), cells, timesError }];
}

/** The outcome, and with it the given errors, in tenths of its unit: counts have none. */
function outcomeUnit(sources: Sources): Changed[] {
  const { fitted, cells, plan } = sources;
  if (!nothingFixed(plan) || plan.variance.parts.some(({ kind }) => boundToUnit.has(kind))) return [];
  return [
    {
      ...unchanged(sources, 'outcome-unit-changed'),
      cells: givenOf(plan) ? errorsTimes(cells, TIMES) : cells,
      response: scaledBy(fitted.response, TIMES),
      timesEstimate: tenfold,
      timesError: tenfold,
      timesVariance: TIMES * TIMES,
    },
  ];
}

/** The first column but the intercept in thousandths of its unit. */
function columnUnit(sources: Sources): Changed[] {
  const { design } = sources.fitted;
  const at = design.termOf.findIndex((term) => term !== -1);
  if (at < 0) return [];
  const columns = design.columns.map((column, j) => (j === at ? scaledBy(column, COLUMN_TIMES) : column));
  const times = (j: number): number => (j === at ? 1 / COLUMN_TIMES : 1);
  return [
    {
      ...unchanged(sources, 'column-unit-changed'),
      design: { ...design, columns },
      timesEstimate: times,
      timesError: times,
    },
  ];
}

/** The first cell as two of half the information each: nothing changes where variances are known and only sampling makes them. */
function cellSplit(sources: Sources): Changed[] {
  const { fitted, cells, plan } = sources;
  const [only, ...more] = plan.variance.parts;
  const halves = cells.addedHalves?.some((half) => half > 0) ?? false;
  const sampling =
    only !== undefined && (only.kind === 'given' || isCounted(only.kind)) && 'scale' in only && !fitted.correlated;
  // Means of unweighted least squares know nothing of sizes.
  const held = plan.estimate.method === 'two-step' && fitted.fixedPoint;
  if (!sampling || only.scale !== 'fixed' || more.length > 0 || halves || held || !fitted.targetIsStructure) return [];
  const taken = takenAt(fitted, cells, [...Array.from({ length: cells.count }, (_, g) => g), 0]);
  const times = (values: Float64Array | null, factor: number) =>
    values?.map((value, g) => (g === 0 || g === cells.count ? value * factor : value)) ?? null;
  const { error, size, effectiveSize, counts, exposure } = taken.cells;
  const split = {
    ...taken.cells,
    error: times(error, Math.SQRT2),
    size: times(size, 0.5),
    effectiveSize: times(effectiveSize, 0.5),
    counts: times(counts, 0.5),
    exposure: times(exposure, 0.5),
  };
  return [{ ...unchanged(sources, 'cell-split'), ...taken, cells: split }];
}

function isCounted(kind: Part['kind']): boolean {
  return kind === 'binomial' || kind === 'counts';
}

function givenOf(plan: Plan): (Part & { kind: 'given' }) | null {
  return plan.variance.parts.find((part) => part.kind === 'given') ?? null;
}

function nothingFixed(plan: Plan): boolean {
  return Object.keys(plan.variance.fixed).length === 0;
}

function errorsTimes(cells: Cells, factor: number): Cells {
  return { ...cells, error: cells.error?.map((s) => s * factor) ?? null };
}
