import { choleskyOf } from '../algebra/cholesky';
import { symmetricEigenvalues } from '../algebra/dense';
import { done, type Outcome, problem, refuse } from '../protocol/outcome';
import type { Freedom } from '../protocol/plan';
import type { Problem } from '../protocol/problems';
import type { SourceColumn, SourceTable } from '../protocol/source';
import { labelKey } from './labels';
import { numberReaderIn } from './number-text';

/** A square table of the rows' labels: which of its lines stands for which data row. */
export interface LabelledMatrix {
  readonly file: string;
  /** Data rows that the matrix holds, in data order, with their places in it. */
  readonly rows: ReadonlyMap<number, { readonly line: number; readonly field: number }>;
  readonly textAt: (line: number, field: number) => string;
  readonly valueAt: (line: number, field: number) => number;
}

/** What a matrix is held against: the labels of all data rows, those used, and where the plan names the file. */
export interface Against {
  readonly labels: readonly string[];
  readonly used: readonly number[];
  readonly at: string;
}

/**
 * Finds the lines of a labelled square matrix that belong to the data's rows, in any order; the corner is ignored.
 *
 * Labels are compared as labels are. Refuses labels that stand twice (`repeated-label`), used cells that are not there and labels that no row has
 * (`matrix-labels`), numbers that read both ways and texts that are no numbers, blanks included (`not-a-number`).
 */
export function labelledMatrix(table: SourceTable, against: Against): Outcome<LabelledMatrix> {
  const [names, ...fields] = table.columns;
  const rows = placesOfRows(table.file, {
    lines: names?.texts ?? [],
    fields: fields.map(({ name }) => name),
    against,
  });
  if (!rows.ok) return rows;
  const values = numbersOf(table, fields, against.at);
  if (!values.ok) return values;
  return done({
    file: table.file,
    rows: rows.value,
    textAt: (line, field) => fields[field]?.texts[line] as string,
    valueAt: (line, field) => values.value[field]?.[line] as number,
  });
}

/** The matrix's labels down and across, and the data's. */
interface Labels {
  readonly lines: readonly string[];
  readonly fields: readonly string[];
  readonly against: Against;
}

function placesOfRows(file: string, { lines, fields, against }: Labels): Outcome<LabelledMatrix['rows']> {
  const { labels, used, at } = against;
  const twice = repeatedIn(lines) ?? repeatedIn(fields);
  if (twice) return refuse('repeated-label', twice, at);
  const lineOf = new Map(lines.map((text, line) => [labelKey(text), line] as const));
  const fieldOf = new Map(fields.map((text, field) => [labelKey(text), field] as const));
  const rows = new Map<number, { line: number; field: number }>();
  const known = new Set<string>();
  for (const [row, label] of labels.entries()) {
    const key = labelKey(label);
    known.add(key);
    const line = lineOf.get(key);
    const field = fieldOf.get(key);
    if (line !== undefined && field !== undefined) rows.set(row, { line, field });
  }
  const own = [...fields, ...lines.filter((text) => !fieldOf.has(labelKey(text)))];
  const unknown = own.filter((text) => !known.has(labelKey(text)));
  const missing = used.filter((row) => !rows.has(row)).map((row) => labels[row] as string);
  return missing.length > 0 || unknown.length > 0
    ? refuse('matrix-labels', { file, missing, unknown }, at)
    : done(rows);
}

function numbersOf(table: SourceTable, fields: readonly SourceColumn[], at: string): Outcome<Float64Array[]> {
  const { file } = table;
  const values: Float64Array[] = [];
  for (const { name, style, texts } of fields) {
    if ('settle' in style) return refuse('reads-both-ways', { file, column: name, ...style }, at);
    const read = numberReaderIn(style);
    values.push(Float64Array.from(texts, (text) => read(text)?.[0] ?? Number.NaN));
  }
  const wrong = firstWrong(table.rows, values);
  if (!wrong) return done(values);
  const { name = '', texts = [] } = fields[wrong.field] ?? {};
  return refuse('not-a-number', { file, row: wrong.line + 1, column: name, found: texts[wrong.line] ?? '' }, at);
}

function repeatedIn(texts: readonly string[]): { label: string; rows: number[] } | null {
  const keys = texts.map(labelKey);
  const second = keys.findIndex((key, i) => keys.indexOf(key) < i);
  if (second < 0) return null;
  return {
    label: texts[second] as string,
    rows: [...keys.keys()].filter((i) => keys[i] === keys[second]).map((i) => i + 1),
  };
}

function firstWrong(lines: number, values: readonly Float64Array[]): { line: number; field: number } | null {
  for (let line = 0; line < lines; line++) {
    const field = values.findIndex((column) => Number.isNaN(column[line]));
    if (field >= 0) return { line, field };
  }
  return null;
}

/** Mirrored entries may differ by this share of the root of their diagonals' product. */
const MIRROR = 1e-12;

/**
 * The first pair of rows whose two mirrored entries differ, in data order; null where the matrix is symmetric.
 *
 *     |a_ij - a_ji| <= 1e-12 sqrt(|a_ii a_jj|)
 */
export function asymmetry(matrix: LabelledMatrix, { labels, at }: Against): Problem | null {
  const places = [...matrix.rows];
  for (const [i, [row, first]] of places.entries()) {
    const own = matrix.valueAt(first.line, first.field);
    for (const [other, second] of places.slice(i + 1)) {
      const entry = matrix.valueAt(first.line, second.field);
      const mirror = matrix.valueAt(second.line, first.field);
      const size = Math.sqrt(Math.abs(own)) * Math.sqrt(Math.abs(matrix.valueAt(second.line, second.field)));
      if (Math.abs(entry - mirror) <= MIRROR * size) continue;
      const found = [matrix.textAt(first.line, second.field), matrix.textAt(second.line, first.field)] as const;
      const pair = [labels[row] as string, labels[other] as string] as const;
      return problem('matrix-not-symmetric', { file: matrix.file, labels: pair, found }, at);
    }
  }
  return null;
}

/** An eigenvalue below this share of the largest, and negative, is no rounding. */
const NEGATIVE = -1e-10;

/**
 * Judges the matrix of the used cells: positive definite where it is to be inverted, else without a clearly negative eigenvalue.
 *
 * Inverted: under the target "structure", or where something is estimated through its inverse, and its freedom is not given or above the number of cells. Named is the first pair of cells whose
 * correlation is 1 or more in size, otherwise the smallest eigenvalue. The matrix is scaled to unit diagonal for the judgement alone.
 */
export function indefiniteness(
  matrix: LabelledMatrix,
  { labels, used, at, inverted }: Against & { readonly inverted: boolean },
): Problem | null {
  const k = used.length;
  const places = used.map((row) => matrix.rows.get(row) as { line: number; field: number });
  const entry = (i: number, j: number) =>
    matrix.valueAt((places[i] as { line: number }).line, (places[j] as { field: number }).field);
  const dense = Float64Array.from({ length: k * k }, (_, at) => entry(Math.floor(at / k), at % k));
  const roots = Float64Array.from({ length: k }, (_, i) => Math.sqrt(entry(i, i)));
  const scaled = dense.map((value, at) => value / (roots[Math.floor(at / k)] as number) / (roots[at % k] as number));
  if (roots.every((root) => root > 0) && choleskyOf(scaled, k) !== null) return null;
  const rows = Array.from({ length: k }, (_, i) => dense.subarray(i * k, (i + 1) * k));
  const eigenvalues = symmetricEigenvalues(rows);
  const smallest = eigenvalues.at(-1) as number;
  if (!inverted && !(smallest < NEGATIVE * Math.abs(eigenvalues[0] as number))) return null;
  const pair = firstPair(k, (i, j) => scaled[i * k + j] as number);
  const named = pair && ([labels[used[pair.i] as number] as string, labels[used[pair.j] as number] as string] as const);
  const facts = {
    file: matrix.file,
    labels: named,
    correlation: pair?.correlation ?? null,
    smallestEigenvalue: pair ? null : smallest,
  };
  return problem('matrix-not-positive-definite', facts, at);
}

/** The matrix of the used cells, row after row; mirrored entries, equal but for rounding, at their mean. */
export function squareOf(matrix: LabelledMatrix, used: readonly number[]): Float64Array {
  const k = used.length;
  const places = used.map((row) => matrix.rows.get(row) as { line: number; field: number });
  const square = new Float64Array(k * k);
  for (const [i, one] of places.entries())
    for (const [j, other] of places.entries()) {
      const entry = matrix.valueAt(one.line, other.field);
      const mirror = matrix.valueAt(other.line, one.field);
      square[i * k + j] = entry === mirror ? entry : entry / 2 + mirror / 2;
    }
  return square;
}

function firstPair(
  k: number,
  correlation: (i: number, j: number) => number,
): { i: number; j: number; correlation: number } | null {
  for (let i = 0; i < k; i++)
    for (let j = i + 1; j < k; j++) {
      const found = correlation(i, j);
      if (Math.abs(found) >= 1 && Number.isFinite(found)) return { i, j, correlation: found };
    }
  return null;
}

/** Whether a matrix with this freedom is inverted for the weights of a fit. */
export function isInverted(of: {
  readonly byStructure: boolean;
  readonly freedom: number | null;
  readonly cells: number;
}): boolean {
  return of.byStructure && (of.freedom === null || of.freedom > of.cells);
}

/** The freedom of a matrix as one number; a column's least value among the used cells. */
export function freedomOf(freedom: Freedom, values: (column: string) => readonly number[]): number | null {
  if (freedom === null || typeof freedom === 'number') return freedom;
  return values(freedom.column).reduce((least, value) => Math.min(least, value), Number.POSITIVE_INFINITY);
}
