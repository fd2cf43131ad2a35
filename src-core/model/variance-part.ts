import type { Decimals } from '../numbers/decimals';
import { takeRows } from '../numbers/decimals';
import { exp } from '../numbers/elementary';
import type { PartKind } from '../protocol/plan';

/** A parameter of one part, before it has its place in a structure. */
export interface OwnParameter {
  readonly name: string;
  readonly role: 'scale' | 'class' | 'between' | 'shared' | 'exponent' | 'gamma';
}

/** How a part ties cells together. group: an index a cell, equal inside a group. */
export type Link =
  | { readonly kind: 'exchangeable' | 'shared'; readonly group: Int32Array }
  | { readonly kind: 'serial'; readonly group: Int32Array; readonly order: Decimals }
  /** The part's own covariance, its scale left out: G x G, row after row. */
  | {
      readonly kind: 'matrix';
      readonly entries: Float64Array;
      /** False where it rests on no more degrees of freedom than there are cells: it serves the errors, never the weights. */
      readonly inverted: boolean;
    };

/**
 * One part of a structure: the variance of each cell as a function of the part's own parameters, and what ties cells together.
 *
 * own: its parameters in their order, its correlation's left out. Vectors have one entry a cell.
 */
export interface VariancePart {
  readonly kind: PartKind;
  readonly cells: number;
  readonly parameters: readonly OwnParameter[];
  readonly variancesAt: (own: Float64Array) => Float64Array;
  /** dv_g / d own_i. */
  readonly slopesAt: (own: Float64Array) => readonly Float64Array[];
  readonly link: Link | null;
  /** Columns whose cells agree in all of them have one variance at any parameters. */
  readonly keys: readonly (Float64Array | Int32Array)[];
  /** The same part on some of the cells, or on all in another order. */
  readonly take: (rows: ArrayLike<number>) => VariancePart;
}

/** The sampling part of a structure, its scale left out. */
export interface SamplingPart {
  readonly kind: PartKind;
  readonly scale: 'fixed' | 'free';
  /** a_g for an exponent; parts without one ignore it. */
  readonly at: (exponent: number) => Float64Array;
  /** da_g/d delta; null where the exponent is no parameter. */
  readonly slopeAt: ((exponent: number) => Float64Array) | null;
}

/** A part that is one level times a known column, or that column itself where no level is named. */
export function levelPart(made: {
  readonly kind: PartKind;
  readonly parameter: OwnParameter | null;
  readonly base: Float64Array;
  readonly link: Link | null;
}): VariancePart {
  const { kind, parameter, base, link } = made;
  return {
    kind,
    cells: base.length,
    parameters: parameter ? [parameter] : [],
    variancesAt: parameter ? ([level]) => timesLevel(base, level as number) : () => base,
    slopesAt: parameter ? () => [base] : () => [],
    link,
    keys: [base],
    take: (rows) => levelPart({ ...made, base: takeValues(base, rows), link: takeLink(link, rows) }),
  };
}

/** A sampling part by its shape: v_g = phi a_g(delta), phi and delta where they are parameters. */
export function shapedPart(sampling: SamplingPart, link: Link | null): VariancePart {
  const { kind, scale, at, slopeAt } = sampling;
  const free = scale === 'free';
  const phi: OwnParameter = { name: 'phi', role: 'scale' };
  const first = at(1);
  if (!slopeAt) return levelPart({ kind, parameter: free ? phi : null, base: first, link });
  const exponentAt = free ? 1 : 0;
  const levelOf = (own: Float64Array) => (free ? (own[0] as number) : 1);
  const exponentOf = (own: Float64Array) => own[exponentAt] as number;
  return {
    kind,
    cells: first.length,
    parameters: [...(free ? [phi] : []), { name: 'delta', role: 'exponent' }],
    variancesAt: (own) => timesLevel(at(exponentOf(own)), levelOf(own)),
    slopesAt: (own) => {
      const slope = timesLevel(slopeAt(exponentOf(own)), levelOf(own));
      return free ? [at(exponentOf(own)), slope] : [slope];
    },
    link,
    keys: [first],
    take: (rows) => {
      const own: SamplingPart = {
        kind,
        scale,
        at: (delta) => takeValues(at(delta), rows),
        slopeAt: (delta) => takeValues(slopeAt(delta), rows),
      };
      return shapedPart(own, takeLink(link, rows));
    },
  };
}

/** A level for every class: v_g = phi_c a_g. classOf: the class of each cell, an index into names. */
export function classPart(made: {
  readonly names: readonly string[];
  readonly classOf: Int32Array;
  readonly base: Float64Array;
  readonly link: Link | null;
}): VariancePart {
  const { names, classOf, base, link } = made;
  return {
    kind: 'per-class',
    cells: base.length,
    parameters: names.map((name) => ({ name, role: 'class' })),
    variancesAt: (own) => base.map((a, g) => (own[classOf[g] as number] as number) * a),
    slopesAt: () => names.map((_, c) => base.map((a, g) => (classOf[g] === c ? a : 0))),
    link,
    keys: [base, classOf],
    take: (rows) =>
      classPart({
        names,
        classOf: Int32Array.from(rows, (g) => classOf[g] as number),
        base: takeValues(base, rows),
        link: takeLink(link, rows),
      }),
  };
}

/**
 * v_g = exp(z_g' gamma).
 *
 * columns: of z, the constant first, each of length G. An exponent beyond what a double holds gives 0 or Infinity, which no likelihood takes.
 */
export function logLinearPart(made: {
  readonly names: readonly string[];
  readonly columns: readonly Float64Array[];
  readonly link: Link | null;
}): VariancePart {
  const { names, columns, link } = made;
  const cells = (columns[0] as Float64Array).length;
  const variancesAt = (own: Float64Array) => {
    const logs = new Float64Array(cells);
    for (const [i, column] of columns.entries())
      for (let g = 0; g < cells; g++) logs[g] = (logs[g] as number) + (own[i] as number) * (column[g] as number);
    return logs.map(exp);
  };
  return {
    kind: 'log-linear',
    cells,
    parameters: names.map((name) => ({ name, role: 'gamma' })),
    variancesAt,
    slopesAt: (own) => {
      const variances = variancesAt(own);
      return columns.map((column) => column.map((z, g) => z * (variances[g] as number)));
    },
    link,
    keys: columns,
    take: (rows) =>
      logLinearPart({
        names,
        columns: columns.map((column) => takeValues(column, rows)),
        link: takeLink(link, rows),
      }),
  };
}

export function takeValues(values: Float64Array, rows: ArrayLike<number>): Float64Array {
  const taken = new Float64Array(rows.length);
  for (let i = 0; i < taken.length; i++) taken[i] = values[rows[i] as number] as number;
  return taken;
}

function timesLevel(values: Float64Array, level: number): Float64Array {
  const scaled = new Float64Array(values.length);
  for (let g = 0; g < scaled.length; g++) scaled[g] = level * (values[g] as number);
  return scaled;
}

function takeLink(link: Link | null, rows: ArrayLike<number>): Link | null {
  if (!link) return null;
  if (link.kind === 'matrix') return { ...link, entries: takeSquare(link.entries, rows) };
  const group = Int32Array.from(rows, (g) => link.group[g] as number);
  return link.kind === 'serial' ? { ...link, group, order: takeRows(link.order, rows) } : { ...link, group };
}

/** Rows and columns of a square, row after row. */
export function takeSquare(entries: Float64Array, rows: ArrayLike<number>): Float64Array {
  const width = Math.round(Math.sqrt(entries.length));
  const n = rows.length;
  const taken = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) taken[i * n + j] = entries[(rows[i] as number) * width + (rows[j] as number)] as number;
  return taken;
}
