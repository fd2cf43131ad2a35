import type { FigureSeries } from '../protocol/figure';
import type { Result } from '../protocol/result';
import { structureName } from '../words/structures';
import { CHOSEN, INK, rivalStroke, type Stroke } from './ink';

/** The error variance of one structure along an axis: a line, or a mark a cell where it does not follow the axis. */
export interface Curve {
  readonly name: string;
  readonly line: readonly (readonly [number, number])[];
  readonly stroke: Stroke;
  /** A variance that does not follow x: a mark a cell. */
  readonly marks: boolean;
}

/** Every structure's variance along x, the stated one first. */
export function curvesOf({ plan, cells, beside }: Result, x: readonly number[]): Curve[] {
  const all = [
    { name: structureName(plan.variance), variances: cells.map(({ variance }) => variance), stroke: CHOSEN },
    ...beside.map(({ variance, variances }, i) => ({
      name: structureName(variance),
      variances,
      stroke: rivalStroke(i),
    })),
  ];
  return all
    .filter(({ variances }) => variances.every((v) => v > 0))
    .map(({ name, variances, stroke }) => ({
      name,
      stroke,
      marks: !followsOnly(x, variances),
      line: followsOnly(x, variances) ? sortedLine(x, variances) : pairsOf(x, variances),
    }));
}

function pairsOf(x: readonly number[], values: readonly number[]): [number, number][] {
  return x.map((at, i) => [at, values[i] as number]);
}

function sortedLine(x: readonly number[], values: readonly number[]): [number, number][] {
  const points = new Map(x.map((at, i) => [at, values[i] as number]));
  return [...points].sort(([a], [b]) => a - b);
}

/** Whether values neither rise and fall along x nor differ where x does not, so that a line can stand for them. */
export function followsOnly(x: readonly number[], values: readonly number[]): boolean {
  const order = x.map((_, i) => i).sort((a, b) => (x[a] as number) - (x[b] as number) || a - b);
  let [rises, falls] = [true, true];
  for (let rank = 1; rank < order.length; rank++) {
    const [a, b] = [order[rank - 1], order[rank]] as [number, number];
    const step = (values[b] as number) - (values[a] as number);
    const still = Math.abs(step) <= 1e-9 * Math.abs(values[a] as number);
    if (x[a] === x[b] && !still) return false;
    rises &&= step >= 0 || still;
    falls &&= step <= 0 || still;
  }
  return rises || falls;
}

/** A curve as a series of panel 0; place: the chosen structure is 0, then the rivals. */
export function curveSeries({ line, stroke, marks }: Curve, place: number): FigureSeries {
  const axes = { xAxisIndex: 0, yAxisIndex: 0 } as const;
  if (marks)
    return {
      ...axes,
      type: 'scatter',
      data: line,
      symbol: markOf(place),
      symbolSize: 3.2,
      itemStyle: { color: '#ffffff', borderColor: INK, borderWidth: 0.5 },
      z: 3,
    };
  // A single point would draw nothing: a line needs two.
  const data = line.length === 1 ? [...line, ...line] : line;
  return { ...axes, type: 'line', data, symbol: 'none', lineStyle: { ...stroke }, z: 3 };
}

export function markOf(place: number): 'diamond' | 'triangle' | 'rect' {
  return (['diamond', 'triangle', 'rect'] as const)[place % 3] as 'diamond' | 'triangle' | 'rect';
}
