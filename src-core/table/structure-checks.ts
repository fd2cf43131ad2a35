import { nearestName } from '../protocol/nearest';
import { problem } from '../protocol/outcome';
import { means, type NamedParameter, namedParameters } from '../protocol/parameter-names';
import type { Plan, Variance } from '../protocol/plan';
import { below } from '../protocol/pointer';
import { levelName } from '../protocol/term-names';
import type { Assembled } from './assemble';
import type { Column } from './column';
import { composed } from './declarations';
import {
  asymmetry,
  freedomOf,
  indefiniteness,
  isInverted,
  type LabelledMatrix,
  labelledMatrix,
  squareOf,
} from './matrix';
import { inCodePointOrder } from './omit';
import { noteRepeatedOrder } from './order';
import { matricesOf, partsOf, structuresOf } from './plan-files';

/**
 * Notes what the used cells contradict in the plan's structures, whether this version fits them or not: serial orders that repeat inside a block,
 * matrices that do not fit, and fixed parameters of classes that no used cell has.
 *
 * used: rows from 0, in data order. Returns the matrices of the used cells by file name: count x count, row after row.
 */
export function noteStructureFaults(assembled: Assembled, plan: Plan, used: readonly number[]): Matrices {
  noteSerialOrders(assembled, plan, used);
  const matrices = noteMatrices(assembled, plan, used);
  for (const { variance, at } of structuresOf(plan)) noteUnknownClasses(assembled, { variance, at, used });
  return matrices;
}

/** The used cells' square by file name, row after row; those that fit. */
type Matrices = ReadonlyMap<string, Float64Array>;

function noteSerialOrders({ frame }: Assembled, plan: Plan, used: readonly number[]): void {
  for (const { part, at } of partsOf(plan)) {
    if (!('correlation' in part) || part.correlation?.kind !== 'serial') continue;
    const order = frame.holder(part.correlation.order);
    const by = part.correlation.by.map((name) => frame.holder(name)).filter((column) => column !== null);
    if (order === null || by.length < part.correlation.by.length) continue;
    noteRepeatedOrder(frame, { order, by, rows: used, at: `${at}/correlation/order` });
  }
}

/** Whether something is estimated through the inverse of a matrix, whatever the weights: its own scale, or tau^2 by the moments of weighted residuals. */
function estimatesBy(part: { readonly scale: 'fixed' | 'free' }, { estimate }: Plan): boolean {
  return part.scale === 'free' || (estimate.method === 'moments' && estimate.rule !== 'hanushek');
}

function noteMatrices({ frame, tableOf }: Assembled, plan: Plan, used: readonly number[]): Matrices {
  const told = new Set<string>();
  const matrices = new Map<string, Float64Array>();
  for (const { part, at } of matricesOf(plan)) {
    const table = tableOf(part.file);
    if (table === null || told.has(part.file)) continue;
    const against = { labels: frame.labels, used, at: `${at}/file` };
    const read = labelledMatrix(table, against);
    const freedom = freedomOf(part.freedom, (name) => valuesOf(frame.holder(name), used));
    // A rival is fitted with its own weights; a target that states a structure has its weights inverted from it.
    const byStructure = at.startsWith('/variance/') ? plan.target === 'structure' || estimatesBy(part, plan) : true;
    const inverted = isInverted({ byStructure, freedom, cells: used.length });
    const faults = read.ok
      ? [asymmetry(read.value, against) ?? indefiniteness(read.value, { ...against, inverted })].filter(
          (fault) => fault !== null,
        )
      : read.problems;
    if (faults.length > 0) told.add(part.file);
    else if (read.ok && !matrices.has(part.file)) matrices.set(part.file, squareOf(read.value, used));
    frame.problems.push(...faults);
  }
  return matrices;
}

/** The plan's matrices, each file once, whichever rows they hold; those that cannot be read are left out. */
export function readMatrices({ frame, tableOf }: Assembled, plan: Plan): LabelledMatrix[] {
  const files = new Map<string, LabelledMatrix>();
  for (const { part, at } of matricesOf(plan)) {
    const table = tableOf(part.file);
    if (table === null || files.has(part.file)) continue;
    const read = labelledMatrix(table, { labels: frame.labels, used: [], at: `${at}/file` });
    if (read.ok) files.set(part.file, read.value);
  }
  return [...files.values()];
}

function valuesOf(column: Column | null, rows: readonly number[]): number[] {
  const high = column?.numbers().values.high;
  return high ? rows.map((row) => high[row] as number).filter((value) => !Number.isNaN(value)) : [];
}

function noteUnknownClasses(
  { frame }: Assembled,
  { variance, at, used }: { readonly variance: Variance; readonly at: string; readonly used: readonly number[] },
): void {
  const parameters = namedParameters(variance);
  if (!parameters.some(({ open }) => open)) return;
  const named = parameters.map((parameter) => ({
    parameter,
    names: namesOf(parameter, (name) => levelsOf(frame.holder(name), used)),
  }));
  if (named.some(({ names }) => names === null)) return;
  const valid = named.flatMap(({ names }) => names ?? []);
  for (const found of Object.keys(variance.fixed)) {
    const isOpen = parameters.some((parameter) => parameter.open && means(found, parameter));
    if (!isOpen || valid.some((name) => composed(name) === composed(found))) continue;
    const facts = { found, nearest: nearestName(found, valid) };
    frame.problems.push(problem('unknown-parameter', facts, below(at, 'fixed', found)));
  }
}

/** The names that a parameter stands for on the used cells; null where its column is not known. */
function namesOf(parameter: NamedParameter, levels: (column: string) => string[] | null): string[] | null {
  const { part, open, name } = parameter;
  if (!open) return [name];
  if (part.kind === 'per-class') return levels(part.column)?.map((level) => `${name}${level}`) ?? null;
  if (part.kind !== 'log-linear') return null;
  const term = part.terms.find((one) => 'as' in one && `gamma: ${levelName(one.column, '')}` === name);
  if (!term || !('as' in term)) return null;
  const found = levels(term.column);
  const baseline = term.baseline ?? found?.[0];
  return found?.filter((level) => level !== baseline).map((level) => `${name}${level}`) ?? null;
}

/** The levels of a column among some rows, in code-point order. */
function levelsOf(column: Column | null, rows: readonly number[]): string[] | null {
  if (column === null) return null;
  return [...new Set(rows.map((row) => composed(column.texts[row] as string)))].toSorted(inCodePointOrder);
}
