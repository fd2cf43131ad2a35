import { fUpper, fUpperQuantile } from '../numbers/distributions';
import type { Frame } from './frame';
import { upperOfSquares } from './quadratic-form';
import { evidenceOf, LEVEL, notApplicable } from './reading';

/** E|z| of a standard normal, squared: 2 / pi. */
const SQUARED_MEAN_SIZE = 2 / Math.PI;
const QUARTERS = 4;

/** A quarter with its scratch: its residuals' deviations, and their mean. */
interface Group {
  readonly rows: readonly number[];
  readonly values: Float64Array;
  mean: number;
}

/**
 * Quarter of each cell by rank of size: ceiling(4 rank / G) - 1, ties in data order.
 * bySize: cells by ascending size.
 */
export function quartersOf(bySize: readonly number[]): number[][] {
  const quarters: number[][] = [[], [], [], []];
  for (const [at, g] of bySize.entries())
    (quarters[Math.ceil((QUARTERS * (at + 1)) / bySize.length) - 1] as number[]).push(g);
  return quarters;
}

/**
 * Brown & Forsythe 1974 by quarter of size: do the whitened residuals scatter alike in small and large cells?
 *
 *     one-way F of |r~ - median of its quarter| on (3, G - 4)
 *
 * Not applicable without sizes, with equal ones, or with fewer than 5 cells. detail: cells (in each quarter).
 */
export function brownForsythe(frame: Frame) {
  const test = 'brown-forsythe';
  const { count, bySize, sizes } = frame;
  if (!bySize || !sizes) return notApplicable(test, 'no-size');
  if (sizes[bySize[0] as number] === sizes[bySize.at(-1) as number]) return notApplicable(test, 'equal-sizes');
  if (count <= QUARTERS) return notApplicable(test, 'too-few-cells');
  const quarters = quartersOf(bySize);
  const freedom1 = QUARTERS - 1;
  const freedom2 = count - QUARTERS;
  const detail = { cells: quarters.map((quarter) => quarter.length) };

  const groups = quarters.map((rows) => ({ rows, values: new Float64Array(rows.length), mean: 0 }));
  const strength = (residuals: Float64Array) => ratioOf(groups, residuals);
  const statistic = strength(frame.residuals);
  if (statistic === 0) return notApplicable(test, 'no-variation', detail);
  const critical = fUpperQuantile(LEVEL, freedom1, freedom2);
  const p = fUpper(statistic, freedom1, freedom2);
  return {
    evidence: evidenceOf(test, { statistic, freedom1, freedom2, p, detail }),
    strength,
    critical,
    largeSamplePower: (multipliers: Float64Array) => powerOf({ quarters, critical, count }, multipliers),
  };
}

/** One-way F of the absolute deviations from each group's median; 0 where nothing varies within. */
function ratioOf(groups: readonly Group[], residuals: Float64Array): number {
  let total = 0;
  let count = 0;
  let within = 0;
  for (const group of groups) {
    const { rows, values } = group;
    for (let i = 0; i < rows.length; i++) values[i] = residuals[rows[i] as number] as number;
    values.sort();
    const middle = medianOfSorted(values);
    let sum = 0;
    for (let i = 0; i < values.length; i++) sum += values[i] = Math.abs((values[i] as number) - middle);
    group.mean = sum / values.length;
    for (const value of values) within += (value - group.mean) * (value - group.mean);
    total += sum;
    count += values.length;
  }
  const grand = total / count;
  let between = 0;
  for (const { rows, mean } of groups) between += rows.length * (mean - grand) * (mean - grand);
  return within > 0 ? between / (groups.length - 1) / (within / (count - groups.length)) : 0;
}

function medianOfSorted(values: Float64Array): number {
  const half = values.length >> 1;
  const upper = values[half] as number;
  return values.length % 2 === 1 ? upper : ((values[half - 1] as number) + upper) / 2;
}

/** Group means of |z| root d are normal around root(2 / pi) mean(root d); what is between them is a quadratic form in four of them. */
function powerOf(
  rule: { readonly quarters: readonly (readonly number[])[]; readonly critical: number; readonly count: number },
  multipliers: Float64Array,
): number {
  const { quarters, critical, count } = rule;
  const groups = quarters.map((group) => {
    const roots = group.map((g) => Math.sqrt(multipliers[g] as number));
    const mean = roots.reduce((a, b) => a + b, 0) / group.length;
    const square = group.reduce((sum, g) => sum + (multipliers[g] as number), 0) / group.length;
    return { size: group.length, centre: mean, variance: square - SQUARED_MEAN_SIZE * mean * mean };
  });
  const within = groups.reduce((sum, { size, variance }) => sum + size * variance, 0) / count;
  const along = groups.map(({ size }) => Math.sqrt(size / count));
  const cleared = (i: number, j: number) => (i === j ? 1 : 0) - (along[i] as number) * (along[j] as number);
  const scaled = groups.map(({ size, centre }) => Math.sqrt(size * SQUARED_MEAN_SIZE) * centre);
  const mean = groups.map((_, i) => scaled.reduce((sum, x, j) => sum + cleared(i, j) * x, 0));
  const covariance = groups.map((_, i) =>
    groups.map((_, l) => groups.reduce((sum, { variance }, j) => sum + cleared(i, j) * variance * cleared(j, l), 0)),
  );
  return upperOfSquares({ mean, covariance, threshold: critical * (QUARTERS - 1) * within, freedom: QUARTERS - 1 });
}
