import { takeRows } from '../numbers/decimals';
import { done, type Outcome, problem, refuseAll } from '../protocol/outcome';
import type { Plan } from '../protocol/plan';
import { type Assembled, assemble, type PlanWithSources } from './assemble';
import type { Cells, LimitedCells, NumberColumn } from './cells';
import { noteImpossible, noteUndefined, noteUnreadable, type RoleColumns } from './checks';
import { type Column, once } from './column';
import type { NumericPlace } from './derive';
import type { Frame } from './frame';
import { type Included, included, type UsedColumn } from './inclusion';
import { labelsOf, lookAlikes, noteRepeatedLabel } from './labels';
import { limitedCells } from './limited';
import { squareOf } from './matrix';
import { neighbourPairs } from './neighbours';
import { type OmittedBy, omittedRows } from './omit';
import { noteRepeatedOrder } from './order';
import { type Place, placesOf } from './places';
import { partsOf } from './plan-files';
import { doublesOf, positivesOf, type RoleValues, roleColumns, roleValues } from './roles';
import { noteStructureFaults, readMatrices } from './structure-checks';

/**
 * From a plan and its files to the used cells: read, join, derive (over all rows), omit, checks, inclusion.
 *
 * Nothing in the cells is missing; every row left out is listed with its reason. All faults of the data stage are refused together, those of files
 * first. Labels are checked on the rows left after `omit`, transforms on the used cells.
 *
 * Example: a row of size 0 is among `data.omitted` with `not-above-zero`; the others are the cells.
 */
export function prepareCells(of: PlanWithSources): Outcome<Cells> {
  const prepared = prepareRows(of);
  return prepared.ok ? done(prepared.value.cells) : prepared;
}

/** The same, with the frame that the cells were taken from and what the roles say of every row of it. */
export function prepareRows(
  of: PlanWithSources,
): Outcome<{ readonly cells: Cells; readonly frame: Frame; readonly values: RoleValues }> {
  const assembled = assemble(of);
  if (!assembled.ok) return assembled;
  const { plan } = of;
  const { frame } = assembled.value;
  const checked = checkRows(assembled.value, plan);
  const { used, reasons } = checked.mask;
  noteUndefined(frame, { plan, used, places: checked.numeric });
  const matrices: Cells['matrices'] =
    used.length > 0 ? noteStructureFaults(assembled.value, plan, used) : new Map<string, Float64Array>();
  const neighbours = neighboursOf(assembled.value, plan, used);
  if (used.length === 0 && frame.complete)
    frame.problems.push(problem('no-cells-left', { rows: frame.rows, reasons }, '/data'));
  if (frame.problems.length > 0) return refuseAll(frame.problems);
  const asked = { plan, assembled: assembled.value, neighbours, matrices, rows: used, values: checked.values };
  const limited = limitedIn({ plan, assembled: assembled.value, checked });
  const cells = { ...cellsOf({ ...asked, omitted: checked.mask.omitted }), limited };
  return done({ cells, frame, values: checked.values });
}

interface Checked {
  readonly mask: Included;
  readonly omittedBy: OmittedBy;
  readonly columns: readonly UsedColumn[];
  readonly roles: RoleColumns;
  readonly values: RoleValues;
  /** Every place that needs numbers. */
  readonly numeric: readonly NumericPlace[];
}

/** Omit, the checks of the rows left, and inclusion. */
function checkRows({ frame, needed }: Assembled, plan: Plan): Checked {
  const places = placesOf(plan).flatMap((place) => {
    const column = frame.find(place.column, place.at);
    return column === null ? [] : [{ ...place, column }];
  });
  const labelled = settleLabels(frame, plan, places);
  const { omittedBy, left, ambiguous } = applyOmit(frame, plan);
  if (labelled) noteRepeatedLabel(frame, left);
  const numeric = [
    ...needed.flatMap((one) => one.numeric),
    ...ambiguous,
    ...places.filter(({ need }) => need === 'number'),
  ];
  noteUnreadable(frame, numeric, left);
  for (const { ordered } of needed) if (ordered) noteRepeatedOrder(frame, { ...ordered, rows: [...omittedBy.keys()] });
  const columns = roleColumns(frame, plan.roles);
  noteImpossible(frame, { plan, columns, rows: left });
  const values = roleValues(plan, { columns, rows: frame.rows });
  const cellColumns = places.flatMap(({ column, need }) =>
    need === 'number' || need === 'category' ? [{ column, need }] : [],
  );
  const mask = included(frame, {
    omittedBy,
    columns: cellColumns,
    positives: positivesOf(columns, values, freedomColumns(frame, plan)),
  });
  return { mask, omittedBy, columns: cellColumns, roles: columns, values, numeric };
}

/** The cells behind the bounds: those of matrices that have a line for each. */
function limitedIn(of: {
  readonly plan: Plan;
  readonly assembled: Assembled;
  readonly checked: Checked;
}): LimitedCells | null {
  const { plan, assembled, checked } = of;
  const { frame } = assembled;
  const matrices = once(() => readMatrices(assembled, plan));
  return limitedCells({
    ...{
      frame,
      plan,
      mask: checked.mask,
      omittedBy: checked.omittedBy,
      columns: checked.columns,
      roles: checked.roles,
    },
    valuesWith: (columns) => roleValues(plan, { columns, rows: frame.rows }),
    positivesWith: (columns, values) => positivesOf(columns, values, freedomColumns(frame, plan)),
    placed: (row) => matrices().every(({ rows }) => rows.has(row)),
    cellsWith: (rows, filled, values) =>
      cellsOf({
        ...{ plan, assembled, rows, filled, values, neighbours: null, omitted: checked.mask.omitted },
        matrices: new Map(matrices().map((matrix) => [matrix.file, squareOf(matrix, rows)])),
      }),
  });
}

type Resolved = Omit<Place, 'column'> & NumericPlace;

/** Gives the frame its labels; false where a label column is not there, so that the labels cannot be judged. */
function settleLabels(frame: Frame, plan: Plan, places: readonly Resolved[]): boolean {
  const columns = places.filter(({ need }) => need === 'label').map(({ column }) => column);
  const whole = columns.length === (plan.roles.label?.length ?? 0);
  frame.labels = labelsOf(frame.rows, whole ? columns : null);
  return whole;
}

interface OmitApplied {
  readonly omittedBy: OmittedBy;
  /** Rows that no rule takes out. */
  readonly left: readonly number[];
  /** Rules that compare numbers with a column that reads both ways. */
  readonly ambiguous: readonly NumericPlace[];
}

function applyOmit(frame: Frame, plan: Plan): OmitApplied {
  const rules = plan.data.omit.flatMap((omit, i) => {
    const column = frame.holder(omit.column);
    return column === null ? [] : [{ omit, column, at: `/data/omit/${i}/column` }];
  });
  const omittedBy = omittedRows(frame.rows, rules);
  const ambiguous = rules.filter(({ omit, column }) => {
    const values = Array.isArray(omit.is) ? omit.is : [omit.is.from, omit.is.to];
    return column.readsBothWays !== null && values.some((value) => typeof value === 'number');
  });
  return { omittedBy, left: [...omittedBy.keys()].filter((row) => omittedBy[row] === null), ambiguous };
}

function freedomColumns(frame: Frame, plan: Plan): Column[] {
  return partsOf(plan).flatMap(({ part }) => {
    if (!('freedom' in part) || part.freedom === null || typeof part.freedom === 'number') return [];
    const column = frame.holder(part.freedom.column);
    return column === null ? [] : [column];
  });
}

function neighboursOf({ frame, tableOf }: Assembled, plan: Plan, used: readonly number[]): Cells['neighbours'] {
  const file = plan.tests?.neighbours ?? null;
  const table = file === null ? null : tableOf(file);
  if (table === null) return null;
  const pairs = neighbourPairs(table, { labels: frame.labels, used, at: '/tests/neighbours' });
  if (pairs.ok) return pairs.value;
  frame.problems.push(...pairs.problems);
  return null;
}

function cellsOf(of: {
  readonly plan: Plan;
  readonly assembled: Assembled;
  /** Rows of the file from 0, in data order. */
  readonly rows: readonly number[];
  readonly omitted: Included['omitted'];
  readonly values: RoleValues;
  readonly neighbours: Cells['neighbours'];
  readonly matrices: Cells['matrices'];
  /** Columns that have values filled in. */
  readonly filled?: ReadonlyMap<Column, Column>;
}): Cells {
  const { plan, assembled, rows: used, omitted, values, neighbours, matrices, filled } = of;
  const { frame, files, unmatched } = assembled;
  const named = (name: string): Column => {
    const column = frame.holder(name);
    if (!column) throw new Error(`the data stage did not see the column ${name}`);
    return filled?.get(column) ?? column;
  };
  const taken = new Map<string, NumberColumn>();
  return {
    plan,
    count: used.length,
    rows: used.map((row) => row + 1),
    labels: used.map((row) => frame.labels[row] as string),
    outcome: takeRows(values.outcome, used),
    size: doublesOf(values.size, used),
    effectiveSize: doublesOf(values.effectiveSize, used),
    error: doublesOf(values.error, used),
    counts: doublesOf(values.counts, used),
    exposure: doublesOf(values.exposure, used),
    numbers: (name) => {
      const column = taken.get(name) ?? numbersAt(named(name), used);
      taken.set(name, column);
      return column;
    },
    texts: (name) => used.map((row) => named(name).texts[row] as string),
    columns: frame.names,
    labelColumns: plan.roles.label ?? [],
    matrices,
    neighbours,
    data: { rows: frame.rows, used: used.length, omitted, files, unmatched },
    cautions: lookAlikes(frame.labels, used),
  };
}

function numbersAt(column: Column, rows: readonly number[]): NumberColumn {
  const { values, status } = column.numbers();
  const taken = takeRows(values, rows);
  if (taken.high.some(Number.isNaN)) throw new Error(`the data stage did not check the numbers of ${column.name}`);
  return {
    name: column.name,
    values: taken,
    texts: rows.map((row) => column.texts[row] as string),
    status: rows.map((row) => status[row] as NumberColumn['status'][number]),
  };
}
