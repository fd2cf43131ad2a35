import { fitStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import { structureOf } from '../model/structure-of';
import { type Decimals, scaledBy, takeRows } from '../numbers/decimals';
import type { SelfCheckCode } from '../protocol/cautions';
import type { Part, Plan } from '../protocol/plan';
import type { SelfCheck } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { take, takeCells, takeDesign } from './subset';

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
  readonly weighting: Float64Array | null;
  readonly timesEstimate: (j: number) => number;
  readonly timesError: (j: number) => number;
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

function judged({ fitted, plan, hooks }: Sources, changed: Changed): SelfCheck {
  const { check, cells, response, design, weighting } = changed;
  const structure = structureOf({ variance: plan.variance, cells });
  const again = structure.ok
    ? fitStructure({
        response,
        design,
        structure: structure.value,
        estimate: plan.estimate,
        weighting,
        ...(hooks && { hooks }),
      })
    : structure;
  if (!again.ok) return { check, passed: false, figure: null };
  const figure = departure(fitted, again.value, changed);
  const searched = fitted.estimatedParameters > 0 && fitted.scale === null;
  const limit = Math.max(searched || fitted.estimatedParameters > 1 ? SEARCHED : 1e-9, fitted.condition * 1e-13);
  return { check, passed: figure <= limit, figure };
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
  const { response, design } = fitted;
  const weighting = fitted.targetIsStructure ? null : fitted.weighting;
  return { check, cells, response, design, weighting, timesEstimate: once, timesError: once };
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
    response: takeRows(fitted.response, rows),
    design: takeDesign(fitted.design, rows),
    weighting: fitted.targetIsStructure ? null : take(fitted.weighting, rows),
  };
}

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
  if (given.scale === 'fixed' && !alone) return [];
  const cells = errorsTimes(sources.cells, TIMES);
  const timesError = given.scale === 'fixed' ? tenfold : once;
  return [{ ...unchanged(sources, 'errors-scaled'), cells, timesError }];
}

/** The outcome, and with it the given errors, in tenths of its unit. */
function outcomeUnit(sources: Sources): Changed[] {
  const { fitted, cells, plan } = sources;
  if (!nothingFixed(plan)) return [];
  return [
    {
      ...unchanged(sources, 'outcome-unit-changed'),
      cells: givenOf(plan) ? errorsTimes(cells, TIMES) : cells,
      response: scaledBy(fitted.response, TIMES),
      timesEstimate: tenfold,
      timesError: tenfold,
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
  const given = givenOf(plan);
  const alone = plan.variance.parts.length === 1;
  if (given?.scale !== 'fixed' || !alone || !fitted.targetIsStructure) return [];
  const taken = takenAt(fitted, cells, [...Array.from({ length: cells.count }, (_, g) => g), 0]);
  const half = taken.cells.error?.map((s, g) => (g === 0 || g === cells.count ? s * Math.SQRT2 : s)) ?? null;
  return [{ ...unchanged(sources, 'cell-split'), ...taken, cells: { ...taken.cells, error: half } }];
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
