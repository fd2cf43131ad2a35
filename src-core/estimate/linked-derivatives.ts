import { type LinkedPlace, roomForRows, rowsOf } from './linked-place';

/** Omega at a point and the whitened design there, as orthonormal rows of k. */
interface Derived {
  readonly at: LinkedPlace;
  /** Q, row after row. */
  readonly basis: Float64Array;
  readonly terms: number;
  readonly restricted: boolean;
}

/** The expected information of the free parameters, each in its unit, with the small matrices that it is made of. */
export interface InformationPieces {
  readonly information: readonly Float64Array[];
  /** S_a = Q' M_a Q, k x k row after row: Q the orthonormal whitened design, M_a = P^-1 Omega_a P^-T. */
  readonly slopes: readonly Float64Array[];
  /** T_ab = Q' M_a M_b Q, k x k row after row. */
  readonly products: readonly (readonly Float64Array[])[];
}

/** The score of one likelihood of correlated cells; residuals: P^-1 r, length G. Formulas: `linkedLikelihood`. */
export function linkedScore({ at, basis, terms: k, restricted }: Derived, residuals: Float64Array): Float64Array {
  const slopes = at.slopes();
  const score = new Float64Array(slopes.length);
  const add = (a: number, value: number) => {
    score[a] = (score[a] as number) + value / 2;
  };
  for (let g = 0; g < at.alone.length; g++) {
    if (!at.alone[g]) continue;
    const square = (residuals[g] as number) * (residuals[g] as number);
    const excess = square - 1 + (restricted ? lengthAt(basis, g, k) : 0);
    for (const [a, slope] of slopes.entries()) add(a, (slope[g] as number) * excess);
  }
  const room = roomForRows();
  for (const { cells, block } of at.placed) {
    const n = cells.length;
    const left = rowsOf(residuals, cells, { width: 1, into: room(n, 0) });
    const own = restricted && k > 0 ? rowsOf(basis, cells, { width: k, into: room(n * k, 1) }) : null;
    const slopes = block.slopes();
    for (let a = 0; a < slopes.length; a++) {
      const slope = slopes[a];
      if (!slope) continue;
      add(a, inner(left, slope.times(left, 1, room(n, 2))) - slope.trace);
      if (own) add(a, inner(own, slope.times(own, k, room(n * k, 3))));
    }
  }
  return score;
}

/** The expected information alone. */
export function linkedInformation(derived: Derived): Float64Array[] {
  const { at, basis, terms: k, restricted } = derived;
  const slopes = at.slopes();
  const q = slopes.length;
  const information = slopes.map(() => new Float64Array(q));
  const spreads = slopes.map(() => new Float64Array(k * k));
  const add = (a: number, b: number, value: number) => {
    const row = information[a] as Float64Array;
    row[b] = (row[b] as number) + value;
  };
  for (let g = 0; g < at.alone.length; g++) {
    if (!at.alone[g]) continue;
    const left = 1 - (restricted ? 2 * lengthAt(basis, g, k) : 0);
    const row = basis.subarray(g * k, (g + 1) * k);
    for (const [a, slope] of slopes.entries()) {
      const d = slope[g] as number;
      if (d === 0) continue;
      for (let b = 0; b < q; b++) add(a, b, d * ((slopes[b] as Float64Array)[g] as number) * left);
      if (restricted) addOuter(spreads[a] as Float64Array, row, row, d);
    }
  }
  const room = roomForRows();
  for (const { cells, block } of at.placed) {
    const traces = block.traces();
    for (let a = 0; a < q; a++) for (let b = 0; b < q; b++) add(a, b, traces[a * q + b] as number);
    if (!restricted || k === 0) continue;
    const size = cells.length * k;
    const own = rowsOf(basis, cells, { width: k, into: room(size, 0) });
    const through = block.slopes().map((slope, a) => slope?.times(own, k, room(size, 1 + a)) ?? null);
    for (let a = 0; a < q; a++) {
      const first = through[a];
      if (!first) continue;
      addProduct(spreads[a] as Float64Array, own, first, k);
      for (let b = 0; b < q; b++) {
        const second = through[b];
        if (second) add(a, b, -2 * inner(first, second));
      }
    }
  }
  return information.map((row, a) =>
    row.map((value, b) => (value + inner(spreads[a] as Float64Array, spreads[b] as Float64Array)) / 2),
  );
}

/** The information with the small matrices that Kenward and Roger's correction is made of. */
export function linkedPieces(derived: Derived): InformationPieces {
  const { at, basis, terms: k } = derived;
  const slopes = at.slopes();
  const spreads = slopes.map(() => new Float64Array(k * k));
  const products = slopes.map(() => slopes.map(() => new Float64Array(k * k)));
  const into = (a: number, b: number) => (products[a] as Float64Array[])[b] as Float64Array;
  for (let g = 0; g < at.alone.length; g++) {
    if (!at.alone[g]) continue;
    const row = basis.subarray(g * k, (g + 1) * k);
    for (const [a, slope] of slopes.entries()) {
      const d = slope[g] as number;
      if (d === 0) continue;
      addOuter(spreads[a] as Float64Array, row, row, d);
      for (const [b, other] of slopes.entries()) addOuter(into(a, b), row, row, d * (other[g] as number));
    }
  }
  for (const { cells, block } of at.placed) {
    const own = rowsOf(basis, cells, { width: k });
    const through = block.slopes().map((slope) => slope?.times(own, k) ?? null);
    for (const [a, first] of through.entries()) {
      if (!first) continue;
      addProduct(spreads[a] as Float64Array, own, first, k);
      for (const [b, second] of through.entries()) if (second) addProduct(into(a, b), first, second, k);
    }
  }
  return { information: linkedInformation(derived), slopes: spreads, products };
}

function lengthAt(rows: Float64Array, g: number, width: number): number {
  let sum = 0;
  for (let i = g * width; i < (g + 1) * width; i++) sum += (rows[i] as number) * (rows[i] as number);
  return sum;
}

function inner(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += (a[i] as number) * (b[i] as number);
  return sum;
}

function addOuter(target: Float64Array, a: Float64Array, b: Float64Array, factor: number): void {
  const k = a.length;
  for (let i = 0; i < k; i++)
    for (let j = 0; j < k; j++)
      target[i * k + j] = (target[i * k + j] as number) + factor * (a[i] as number) * (b[j] as number);
}

/** target += A'B of two lists of rows. */
function addProduct(target: Float64Array, a: Float64Array, b: Float64Array, k: number): void {
  for (let at = 0; at < a.length; at += k)
    for (let i = 0; i < k; i++)
      for (let j = 0; j < k; j++)
        target[i * k + j] = (target[i * k + j] as number) + (a[at + i] as number) * (b[at + j] as number);
}
